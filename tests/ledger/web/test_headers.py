"""Headers on every address there is, and on those there are not."""

import re
from collections.abc import Iterator

import pytest
from django.http import HttpRequest, HttpResponse
from django.test import Client, override_settings
from django.urls import URLPattern, URLResolver, get_resolver, path

POLICY = {
    "default-src": "'none'",
    "style-src": "'self'",
    "img-src": "'self' data:",
    "script-src": "'self'",
    "connect-src": "'self'",
    "form-action": "'self'",
    "frame-ancestors": "'none'",
    "base-uri": "'none'",
}
_FILLED = {
    "int": "1",
    "str": "x",
    "slug": "x",
    "path": "x",
    "uuid": "00000000-0000-0000-0000-000000000000",
}


def _addresses(resolver: URLResolver, before: str = "") -> Iterator[str]:
    for each in resolver.url_patterns:
        whole = before + str(each.pattern).lstrip("^")
        if isinstance(each, URLResolver):
            yield from _addresses(each, whole)
        elif isinstance(each, URLPattern):
            yield "/" + _filled(whole)


def _filled(route: str) -> str:
    typed = re.sub(r"<(?:(\w+):)?\w+>", lambda found: _FILLED.get(found[1] or "str", "1"), route)
    # What is left are regular expressions; an address that does not fit one is an address as well.
    return re.sub(r"\(\?P<\w+>[^)]*\)", "x", typed).replace("$", "").replace("\\", "")


def _hardened(response: HttpResponse) -> None:
    said = response.headers["Content-Security-Policy"]
    assert dict(part.strip().split(" ", 1) for part in said.split(";")) == POLICY
    assert response.headers["X-Content-Type-Options"] == "nosniff"
    assert response.headers["Referrer-Policy"] == "same-origin"
    assert response.headers["Cross-Origin-Opener-Policy"] == "same-origin"
    assert response.headers["X-Frame-Options"] == "DENY"
    assert "geolocation=()" in response.headers["Permissions-Policy"]
    assert re.fullmatch("[0-9a-f]{32}", response.headers["X-Request-Id"])


def _breaks(request: HttpRequest) -> HttpResponse:
    raise RuntimeError("broken on purpose")


urlpatterns = [path("breaks", _breaks)]


@pytest.mark.django_db
def test_every_address_carries_them() -> None:
    client = Client(raise_request_exception=False)
    found = set(_addresses(get_resolver()))
    assert {"/healthz", "/readyz", "/metrics"} <= found
    for address in sorted(found | {"/", "/no/such/page", "/api/v1/no/such/thing", "/%00"}):
        response = client.get(address)
        _hardened(response)
        assert response.headers["Cache-Control"], address


@pytest.mark.django_db
def test_a_static_file_carries_them_and_may_be_kept() -> None:
    response = Client().get("/static/stintbook/book.css")
    assert response.status_code == 200
    _hardened(response)
    assert "no-store" not in response.headers["Cache-Control"]
    assert "Access-Control-Allow-Origin" not in response.headers
    response.close()
    _hardened(Client().get("/static/no-such-file"))


@pytest.mark.urls(__name__)
def test_an_answer_of_a_broken_program_carries_them() -> None:
    response = Client(raise_request_exception=False).get("/breaks")
    assert response.status_code == 500
    _hardened(response)


def test_an_answer_to_a_strange_host_carries_them() -> None:
    response = Client().get("/healthz", headers={"host": "elsewhere.example"})
    assert response.status_code == 400
    _hardened(response)


@override_settings(SECURE_HSTS_SECONDS=31_536_000)
def test_behind_https_a_browser_is_told_to_insist_for_a_year() -> None:
    response = Client().get("/healthz", secure=True)
    assert response.headers["Strict-Transport-Security"] == "max-age=31536000"
