"""Every address and method of the API, for each visitor: a row that is missing is a failure.

Columns: secretary, monitor, board, auditor, member (whose objects they are), neighbour (another
member), stranger (of another commons), nobody.
"""

from datetime import date
from typing import Any

import pytest
from django.urls import URLPattern, URLResolver

from ledger.api.urls import COMMONS
from ledger.api.views import CommonsView
from tests.ledger import builders
from tests.ledger.api import stage as staging
from tests.ledger.api.stage import MEMBER, OTHER, Stage, slip

WHO = ("secretary", "monitor", "board", "auditor", "member", "neighbour", "stranger", "nobody")
DAY = date(2026, 3, 2)

# Objects are the member's: entry {entry}, finding {finding}, case {case}, token {token}.
MATRIX: dict[tuple[str, str], str] = {
    ("GET", ""): "200 200 200 200 200 200 404 401",
    ("GET", "head"): "200 200 200 200 200 200 404 401",
    ("GET", "head/prefix"): "200 200 200 200 200 200 404 401",
    ("POST", "withdrawals"): "201 201 403 403 201 403 404 401",
    ("POST", "withdrawals/batch"): "200 200 200 200 200 200 404 401",
    ("GET", "entries"): "200 200 200 200 200 200 404 401",
    ("GET", "entries/<number:number>"): "200 200 200 200 200 404 404 401",
    ("GET", "entries/<number:number>/receipt"): "200 200 200 200 200 404 404 401",
    ("POST", "entries/<number:number>/reversal"): "201 403 403 403 403 403 404 401",
    ("GET", "members"): "200 200 200 200 403 403 404 401",
    ("GET", "members/<number:number>/standing"): "200 404 200 200 200 404 404 401",
    ("GET", "findings"): "200 200 200 200 200 200 404 401",
    ("GET", "findings/<number:number>"): "200 404 200 200 200 404 404 401",
    ("GET", "cases"): "200 200 200 200 200 200 404 401",
    ("GET", "cases/<number:number>"): "200 404 200 200 200 404 404 401",
    ("POST", "cases/<number:number>/moves"): "200 404 403 403 403 404 404 401",
    ("GET", "seasons"): "200 200 200 200 200 200 404 401",
    ("GET", "seasons/<slug:season>"): "200 200 200 200 200 200 404 401",
    ("GET", "seasons/<slug:season>/advice"): "404 404 404 404 404 404 404 401",
    ("GET", "reports/<day:first>"): "409 403 409 409 403 403 404 401",
    ("GET", "tokens"): "200 200 200 200 200 200 404 401",
    ("DELETE", "tokens/<number:number>"): "404 404 404 404 204 404 404 401",
}


def _endpoints() -> set[tuple[str, str]]:
    """Return every method of every address, as the resolver and the views have them."""
    found = set()
    for pattern in COMMONS:
        assert isinstance(pattern, URLPattern) and not isinstance(pattern, URLResolver)
        view: type[CommonsView] = pattern.callback.view_class  # type: ignore[attr-defined]
        for method in ("get", "post", "put", "patch", "delete"):
            if hasattr(view, method):
                found.add((method.upper(), str(pattern.pattern)))
    return found


def test_every_endpoint_has_its_row() -> None:
    """And no row is for an address that is gone."""
    assert set(MATRIX) == _endpoints()


@pytest.fixture
def objects(stage: Stage) -> dict[str, Any]:
    """The member's entry, finding, case and token; a neighbour with a token."""
    stage.tokens["neighbour"] = staging.token(
        commons_id=stage.bay.commons_id, member=OTHER, chance=stage.bay.chance
    )
    stage.bay.morning(DAY, hour=20)
    entry = stage.bay.lands("L", builders.line("clams", "60"), member=MEMBER, day=DAY)
    stage.bay.judges(date(2026, 3, 3))
    stage.bay.hears()
    finding = stage.get("secretary", "findings").json()["findings"][0]["number"]
    case = stage.get("secretary", "cases").json()["cases"][0]["number"]
    token = stage.get("member", "tokens").json()["tokens"][0]["number"]
    return {"entries": entry, "findings": finding, "cases": case, "tokens": token, "members": 5}


def _path(route: str, objects: dict[str, Any]) -> str:
    room = route.split("/")[0]
    filled = route.replace("<number:number>", str(objects.get(room, "")))
    filled = filled.replace("<slug:season>", "clams-2026").replace("<day:first>", "2026-03-01")
    return filled + ("?old=1&new=2" if filled == "head/prefix" else "")


BODIES: dict[str, Any] = {
    "withdrawals": slip("N"),
    "withdrawals/batch": {"slips": [slip("N", key="n")]},
    "entries/<number:number>/reversal": {"reason": "misread"},
    "cases/<number:number>/moves": {"move": "check", "role": "secretary", "officer": 3},
}


@pytest.mark.parametrize("who", WHO)
@pytest.mark.parametrize("endpoint", MATRIX, ids=" ".join)
def test_each_visitor_is_answered_as_the_table_says(
    stage: Stage, objects: dict[str, Any], endpoint: tuple[str, str], who: str
) -> None:
    """The whole table, cell by cell."""
    method, route = endpoint
    path = _path(route, objects)
    if method == "GET":
        answer = stage.get(who, path)
    elif method == "DELETE":
        answer = stage.delete(who, path)
    else:
        seen = stage.get("secretary", f"cases/{objects['cases']}")["ETag"]
        answer = stage.post(who, path, BODIES[route], Idempotency_Key="n", If_Match=seen)
    expected = MATRIX[endpoint].split()[WHO.index(who)]
    assert str(answer.status_code) == expected, answer.content
    if answer.status_code >= 400:
        assert answer["Content-Type"] == "application/problem+json"


def test_an_object_that_is_not_yours_is_answered_as_one_that_is_not(
    stage: Stage, objects: dict[str, Any]
) -> None:
    """The words do not tell whether it is there for others."""
    for room, number in objects.items():
        if room in ("entries", "findings", "cases"):
            theirs = stage.get("neighbour", f"{room}/{number}").json()
            missing = stage.get("neighbour", f"{room}/999999").json()
            assert theirs["type"] in (missing["type"], "/problems/web.not_here")
            assert theirs["status"] == missing["status"] == 404
