"""The season that the journeys share: played once a run, in a database of its own."""

from collections.abc import Iterator
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

import pytest
from django.db import transaction

from ledger.foundation.clocks import seeded_chance
from tests import databases
from tests.acceptance import played
from tests.acceptance.played import PlayedSeason
from tests.conftest import TickingClock
from tests.ledger import builders


@pytest.fixture(scope="session")
def played_season(
    django_db_setup: None, django_db_blocker: Any, tmp_path_factory: pytest.TempPathFactory
) -> Iterator[PlayedSeason]:
    """The played season, beside a small commons that is no demo; use ``season`` to read it."""
    folder = tmp_path_factory.mktemp("season")
    with django_db_blocker.unblock(), databases.copied(folder) as copy:
        with databases.led_to(copy):
            season = played.play(database=copy, real=_real_commons())
        yield season


@pytest.fixture
def season(played_season: PlayedSeason, django_db_blocker: Any) -> Iterator[PlayedSeason]:
    """The played season, with Django led to it; what a test writes is taken back."""
    with django_db_blocker.unblock(), databases.led_to(played_season.database):
        with transaction.atomic():
            yield played_season
            transaction.set_rollback(True)


@pytest.fixture
def own_season(
    played_season: PlayedSeason, django_db_blocker: Any, tmp_path: Path
) -> Iterator[PlayedSeason]:
    """The played season in a copy of its own, for a test that commits."""
    with (
        django_db_blocker.unblock(),
        databases.led_to(played_season.database),
        databases.copied(tmp_path) as copy,
        databases.led_to(copy),
    ):
        yield played_season


def _real_commons() -> int:
    """Found a commons with entries of its own, and return its id."""
    clock = TickingClock(datetime(2026, 3, 1, 9, 0, tzinfo=UTC))
    hand = builders.hand(clock=clock, chance=seeded_chance(7))
    commons_id = builders.opened(hand=hand)
    builders.land(commons_id=commons_id, hand=hand, slips=[builders.slip("1"), builders.slip("2")])
    return commons_id
