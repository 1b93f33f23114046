"""Log lines: one JSON object each, whatever was written into them."""

import json
import logging
import sys

import pytest

from ledger.foundation import logs


def _line(message: str, *values: object, **extra: object) -> str:
    record = logging.LogRecord("stintbook.test", logging.INFO, __file__, 1, message, values, None)
    record.__dict__.update(extra)
    assert logs.WithoutPaths().filter(record)
    return logs.JsonLine().format(record)


@pytest.mark.parametrize("sign", ["\n", "\r\n", "\u2028", "\x85", "\x00", '"}\n{"message": "x"}'])
def test_no_line_can_be_forged(sign: str) -> None:
    line = _line("said %s", f"a{sign}b")
    assert len(line.splitlines()) == 1
    assert json.loads(line)["message"] == f"said a{sign}b"


def test_a_line_says_when_in_utc() -> None:
    record = logging.LogRecord("x", logging.INFO, __file__, 1, "y", (), None)
    record.created = 1_772_355_600.25
    found = json.loads(logs.JsonLine().format(record))
    assert found["time"] == "2026-03-01T09:00:00.250+00:00"
    assert (found["level"], found["logger"]) == ("info", "x")


def test_an_address_in_the_words_of_others_is_left_out() -> None:
    line = _line("%s: %s", "Internal Server Error", "/card/a-secret/")
    assert json.loads(line)["message"] == "Internal Server Error: …"


def test_what_is_known_of_a_request_stands_in_its_lines_alone() -> None:
    logs.note(member=3)
    with logs.of_request(request_id="r1"):
        logs.note(member=4)
        inside = json.loads(_line("inside", facts={"status": 200}))
    outside = json.loads(_line("outside"))
    assert (inside["request_id"], inside["member"], inside["status"]) == ("r1", 4, 200)
    assert {"request_id", "member", "status"}.isdisjoint(outside)


def test_an_error_stays_within_its_line() -> None:
    try:
        raise ValueError("two\nlines")
    except ValueError:
        line = _line("failed", exc_info=sys.exc_info())
    assert len(line.splitlines()) == 1
    assert "ValueError: two\nlines" in json.loads(line)["error"]
