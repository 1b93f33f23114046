"""Bodies that two readers could read in two ways, or that would break one, are refused."""

import json

import pytest
from rest_framework.exceptions import ParseError

from ledger.api import parsing
from tests.ledger.api.stage import Stage, slip

HOSTILE = {
    "100,000 brackets": b"[" * 100_000,
    "50,000 objects": b'{"a":' * 50_000,
    "21 levels": b"[" * 21 + b"]" * 21,
    "a name twice": b'{"a": 1, "a": 2}',
    "half a sign": b'{"a": "\\ud800"}',
    "half a sign as a name": b'{"\\udfff": 1}',
    "not a number": b'{"a": NaN}',
    "without end": b'{"a": Infinity}',
    "beyond floats": b'{"a": 1e400}',
    "a float": b'{"a": 1.5}',
    "5,000 digits": b'{"a": ' + b"9" * 5000 + b"}",
    "a mark of order": b"\xef\xbb\xbf{}",
    "two bytes a sign": "{}".encode("utf-16"),
    "Latin-1": '{"a": "é"}'.encode("latin-1"),
    "400,000 escapes without end": b'"' + b'\\"' * 400_000,
    "nothing": b"",
    "half": b'{"a": ',
    "two values": b"{} {}",
}


@pytest.mark.parametrize("name", HOSTILE)
def test_a_hostile_body_is_refused(name: str) -> None:
    """Each is refused with a reason."""
    with pytest.raises(ParseError) as refused:
        parsing.parse(HOSTILE[name])
    assert str(refused.value.detail)


@pytest.mark.parametrize("name", HOSTILE)
def test_a_hostile_body_is_answered_with_a_problem(stage: Stage, name: str) -> None:
    """The service answers 400 and records nothing."""
    before = stage.bay.size
    answer = stage.post("secretary", "withdrawals", HOSTILE[name], Idempotency_Key="k")
    assert answer.status_code == 400
    assert answer["Content-Type"] == "application/problem+json"
    assert stage.bay.size == before


@pytest.mark.parametrize(
    "value",
    [{}, [], None, "x", {"a": [1, {"b": "c"}]}, {"a": "[[[[{{{{"}, {"a": '\\"[' * 40}, -7],
)
def test_an_honest_body_is_read_as_it_is(value: object) -> None:
    """What the standard library writes comes back; brackets inside texts do not count as depth."""
    assert parsing.parse(json.dumps(value).encode()) == value


def test_twenty_levels_are_read() -> None:
    """The deepest that is accepted."""
    assert parsing.parse(b"[" * 20 + b"]" * 20) is not None


@pytest.mark.parametrize("body", [b"null", b"[]", b'"x"', b"7"])
def test_a_body_that_is_no_object_is_refused(stage: Stage, body: bytes) -> None:
    """A slip is an object."""
    assert stage.post("secretary", "withdrawals", body, Idempotency_Key="k").status_code == 400


@pytest.mark.parametrize(("size", "status"), [(1_000_000, 201), (1_000_001, 413)])
def test_a_body_has_a_million_bytes_at_most(stage: Stage, size: int, status: int) -> None:
    """The border, with an honest slip after blanks; beyond it nothing is recorded."""
    before = stage.bay.size
    body = json.dumps(slip()).encode().rjust(size)
    answer = stage.post("member", "withdrawals", body, Idempotency_Key="k")
    assert answer.status_code == status
    assert stage.bay.size == before + (status == 201)
    if status == 413:
        assert answer.json()["type"] == "/problems/api.body_too_large"
