"""Two commons for the pages: a small one and a large one, each member with one slip."""

import time
from collections.abc import Iterator
from contextlib import contextmanager
from datetime import UTC, datetime, timedelta

from allauth.mfa.models import Authenticator
from django.db import transaction
from django.test import Client

from ledger.commons import operations as commons
from ledger.foundation.clocks import seeded_chance, system_clock
from ledger.identity import operations as identity
from ledger.identity.models import Account, Seat
from ledger.movements import operations as movements
from tests.bench import ground, rounds
from tests.conftest import TickingClock
from tests.ledger import builders

FIRST = 100
BATCH = 500
SMALL = 100
LARGE = {"small": 1_000, "full": 10_000}
PAGES_A_SLICE = 10


@contextmanager
def two_commons(*, size: str) -> Iterator[dict[str, Client]]:
    """Yield a browser of a board member for each of the two commons, by short name."""
    with ground.own_database():
        yield {
            slug: _commons(slug, members)
            for slug, members in (("small-bank", SMALL), ("large-bank", LARGE[size]))
        }


def side(client: Client, path: str) -> rounds.Side:
    """Return a slice of work: pages a second."""

    def pages() -> float:
        started = time.perf_counter()
        for _ in range(PAGES_A_SLICE):
            assert client.get(path).status_code == 200
        return PAGES_A_SLICE / (time.perf_counter() - started)

    return pages


def _commons(slug: str, members: int) -> Client:
    clock = TickingClock(datetime(2026, 3, 1, 9, 0, tzinfo=UTC))
    hand = builders.hand(clock=clock, chance=seeded_chance(members))
    commons_id = builders.governed(hand=hand, slug=slug)
    numbers = range(FIRST, FIRST + members)
    for place in range(0, members, BATCH):
        with transaction.atomic():
            admitted = [builders.admission(n, mullet=1) for n in numbers[place : place + BATCH]]
            commons.admit(commons_id=commons_id, admissions=admitted, hand=hand)
    builders.open_seasons(commons_id=commons_id, hand=hand)
    builders.adopt_allowables(commons_id=commons_id, hand=hand)
    clock.advance(timedelta(days=2))
    for place in range(0, members, BATCH):
        slips = [builders.slip(f"S-{n}", member=n) for n in numbers[place : place + BATCH]]
        with transaction.atomic():
            movements.record_withdrawals(commons_id=commons_id, slips=slips, hand=hand)
    return _browser(commons_id, slug)


def _browser(commons_id: int, slug: str) -> Client:
    with transaction.atomic():
        identity.open_account(
            username=slug,
            commons_id=commons_id,
            member=builders.BOARD[0],
            clock=system_clock,
            chance=seeded_chance(commons_id),
        )
    seat = Seat.objects.get(commons_id=commons_id, member=builders.BOARD[0])
    Authenticator.objects.create(
        user_id=seat.account_id, type=Authenticator.Type.TOTP, data={"secret": "JBSWY3DPEHPK3PXP"}
    )
    client = Client(SERVER_NAME="localhost")
    client.force_login(Account.objects.get(pk=seat.account_id))
    return client
