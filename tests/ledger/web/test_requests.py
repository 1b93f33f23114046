"""A name and a line for every request."""

import json
import logging
from collections.abc import Iterator

import pytest
from django.http import HttpRequest, HttpResponse
from django.test import Client
from django.urls import path

from ledger.foundation import logs
from ledger.web import requests

PLANTED = "p1anted-5f1c"


def _card(request: HttpRequest, secret: str) -> HttpResponse:
    logs.note(account=7, member=3)
    return HttpResponse("kept")


def _breaks(request: HttpRequest) -> HttpResponse:
    raise RuntimeError("broken on purpose")


urlpatterns = [path("card/<str:secret>/", _card), path("breaks", _breaks)]


class _Kept(logging.Handler):
    def __init__(self) -> None:
        super().__init__(logging.INFO)
        self.addFilter(logs.WithoutPaths())
        self.setFormatter(logs.JsonLine())
        self.lines: list[str] = []

    def emit(self, record: logging.LogRecord) -> None:
        self.lines.append(self.format(record))


@pytest.fixture
def lines() -> Iterator[list[str]]:
    """Every line that the process writes meanwhile."""
    kept, root = _Kept(), logging.getLogger()
    level = root.level
    root.addHandler(kept)
    root.setLevel(logging.INFO)
    yield kept.lines
    root.setLevel(level)
    root.removeHandler(kept)


@pytest.mark.parametrize("given", ["r-1", "a" * 64, "2026.03_x"])
def test_a_plain_name_is_kept(given: str) -> None:
    response = Client().get("/healthz", headers={"x-request-id": given})
    assert response.headers["X-Request-Id"] == given


@pytest.mark.parametrize("given", ["", "a" * 65, "a b", "a\r\nSet-Cookie: x", "é", '{"x":1}'])
def test_another_is_replaced(given: str) -> None:
    assert requests.request_id(given=given) != given


@pytest.mark.urls(__name__)
def test_a_line_says_who_and_what_and_no_secret(lines: list[str]) -> None:
    client = Client(headers={"authorization": f"Bearer {PLANTED}", "x-request-id": "r-1"})
    client.cookies["sessionid"] = PLANTED
    client.post(f"/card/{PLANTED}/?token={PLANTED}", {"password": PLANTED})
    (line,) = [json.loads(each) for each in lines if "stintbook.requests" in each]
    assert line["ms"] >= 0
    assert {name: line[name] for name in ("method", "route", "status", "request_id")} == {
        "method": "POST",
        "route": "/card/<str:secret>/",
        "status": 200,
        "request_id": "r-1",
    }
    assert (line["account"], line["member"]) == (7, 3)
    assert PLANTED not in "".join(lines)


@pytest.mark.urls(__name__)
def test_one_that_fits_no_template_or_breaks_shows_no_address(lines: list[str]) -> None:
    client = Client(raise_request_exception=False)
    client.get(f"/no-such/{PLANTED}?token={PLANTED}")
    client.get(f"/breaks?token={PLANTED}")
    client.generic("GET\r\nforged", "/breaks")
    assert PLANTED not in "".join(lines)
    told = [json.loads(each) for each in lines if "stintbook.requests" in each]
    assert [(each["method"], each["route"], each["status"]) for each in told] == [
        ("GET", "unknown", 404),
        ("GET", "/breaks", 500),
        ("other", "/breaks", 500),
    ]


def test_nothing_of_one_request_is_known_to_the_next(lines: list[str]) -> None:
    Client().get("/healthz")
    assert logs.known() == {}
