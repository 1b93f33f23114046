"""Every page of a commons, for each visitor: a row that is missing is a failure.

Columns: secretary, monitor, board, member (whose objects they are), neighbour (another member),
stranger (of another commons), nobody (not signed in).
"""

from collections.abc import Iterator
from datetime import date

import pytest
from django.db import transaction
from django.test import Client
from django.urls import URLPattern, URLResolver, get_resolver

from ledger.foundation.clocks import Chance, system_clock
from ledger.identity import operations as identity
from ledger.identity.models import Account, Seat
from tests.ledger import builders, scene
from tests.ledger.pages.conftest import At

WHO = ("secretary", "monitor", "board", "member", "neighbour", "stranger", "nobody")
MEMBERS = {"secretary": 4, "monitor": 2, "board": 1, "member": 5, "neighbour": 7}
DAY = date(2026, 3, 2)
UNDER = "c/<slug:slug>/"

# What GET answers; 405 where an address takes a form alone.
MATRIX = {
    "": "200 200 200 200 200 404 302",
    "record/": "200 200 200 200 200 404 302",
    "record/left/": "200 200 200 200 200 404 302",
    "entries/": "200 200 200 200 200 404 302",
    "entries/<int:number>/": "200 200 200 200 404 404 302",
    "entries/<int:number>/receipt/": "200 200 200 200 404 404 302",
    "entries/<int:number>/correct/": "200 403 403 403 403 404 302",
    "members/": "200 200 200 404 404 404 302",
    "members/<int:number>/": "200 404 200 200 404 404 302",
    "members/<int:number>/card/": "200 403 403 403 403 404 302",
    "standing/": "302 302 302 302 302 404 302",
    "seasons/": "200 200 200 200 200 404 302",
    "seasons/<slug:code>/": "200 200 200 200 200 404 302",
    "seasons/<slug:code>/use.svg": "200 200 200 200 200 404 302",
    "seasons/<slug:code>/report.<str:form>": "404 403 404 403 403 404 302",
    "cases/": "200 200 200 200 200 404 302",
    "cases/<int:number>/": "200 404 200 200 404 404 302",
    "cases/<int:number>/moves/": "405 405 405 405 405 405 405",
    "devices/": "200 200 200 200 200 404 302",
    "devices/<int:number>/end/": "405 405 405 405 405 405 405",
}


def _routes(found: list[URLPattern | URLResolver], before: str = "") -> Iterator[str]:
    for each in found:
        route = before + str(each.pattern)
        if isinstance(each, URLResolver):
            yield from _routes(each.url_patterns, route)
        else:
            yield route


def test_every_page_has_its_row() -> None:
    """And no row is for a page that is gone."""
    routes = _routes(get_resolver().url_patterns)
    pages = {route.removeprefix(UNDER) for route in routes if route.startswith(UNDER)}
    assert set(MATRIX) == pages


@pytest.fixture
def entry(bay: scene.Scene) -> int:
    """The member's slip over the limit, from which a case was noted."""
    bay.morning(DAY, hour=20)
    number = bay.lands("L", builders.line("clams", "60"), member=5, day=DAY)
    bay.judges(date(2026, 3, 3))
    bay.hears()
    return number


@pytest.fixture
def stranger(bay: scene.Scene, chance: Chance) -> Client:
    """Somebody signed in, whose seat is in another commons."""
    elsewhere = builders.people(hand=bay.hand, slug="far-bank")
    with transaction.atomic():
        identity.open_account(
            username="stranger",
            commons_id=elsewhere,
            member=4,
            clock=system_clock,
            chance=chance,
        )
    client = Client()
    client.force_login(Account.objects.get(pk=Seat.objects.get(commons_id=elsewhere).account_id))
    return client


@pytest.mark.parametrize("who", WHO)
def test_each_visitor_is_answered_as_the_table_says(
    entry: int, at: At, stranger: Client, who: str
) -> None:
    """The whole table, cell by cell."""
    client = {"stranger": stranger, "nobody": Client()}.get(who) or at(MEMBERS[who])
    numbers = {"entries": entry, "members": 5, "cases": 1, "devices": 1}
    found = {}
    for route in MATRIX:
        room = route.split("/")[0]
        path = route.replace("<int:number>", str(numbers.get(room, "")))
        path = path.replace("<slug:code>", "clams-2026").replace("<str:form>", "pdf")
        query = "?member=5&resource=clams" if room == "record" else ""
        found[route] = str(client.get(f"/c/reed-bank/{path}{query}").status_code)
    expected = {route: row.split()[WHO.index(who)] for route, row in MATRIX.items()}
    assert found == expected


def test_what_is_left_of_another_is_not_told(entry: int, at: At) -> None:
    """A neighbour who types the member's number reads neither a name nor an amount."""
    answer = at(7).get("/c/reed-bank/record/left/?member=5&place=pier_sand").json()
    assert set(answer.values()) == {""}
    own = at(5).get("/c/reed-bank/record/left/?member=5&place=pier_sand").json()
    assert own["name"] == "Member 5"
