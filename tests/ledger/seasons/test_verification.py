"""A season, allowable or close that was changed behind its entry is told, with the entry.

In the small commons entries 11 and 12 open the seasons of mullet and clams, 13 and 14 adopt their
allowables; here 15 closes the season of clams.
"""

from datetime import timedelta

import pytest
from django.db import transaction

from ledger.foundation.hands import Hand
from ledger.seasons import operations, verification
from tests.conftest import TickingClock
from tests.ledger import builders, checks, falsifying

CHANGES = [
    ("UPDATE seasons_season SET code = 'x' WHERE entry_number = 11", "seasons", 11),
    ("UPDATE seasons_season SET resource = 'clams' WHERE entry_number = 11", "seasons", 11),
    ("UPDATE seasons_season SET first_day = '2026-03-02' WHERE entry_number = 11", "seasons", 11),
    ("UPDATE seasons_season SET until_day = '2026-05-02' WHERE entry_number = 11", "seasons", 11),
    ("UPDATE seasons_season SET entry_number = 10 WHERE entry_number = 11", "seasons", 11),
    ("DELETE FROM seasons_season WHERE entry_number = 11", "seasons", 11),
    ("UPDATE seasons_allowable SET season = 'x' WHERE entry_number = 13", "allowables", 13),
    ("UPDATE seasons_allowable SET amount = amount + 1 WHERE entry_number = 13", "allowables", 13),
    ("UPDATE seasons_allowable SET reserve = 0 WHERE entry_number = 13", "allowables", 13),
    ("UPDATE seasons_allowable SET entry_number = 10 WHERE entry_number = 13", "allowables", 13),
    ("DELETE FROM seasons_allowable WHERE entry_number = 13", "allowables", 13),
    ("UPDATE seasons_close SET season = 'mullet-2026'", "closes", 15),
    ("UPDATE seasons_close SET entry_number = 14", "closes", 15),
    ("DELETE FROM seasons_close", "closes", 15),
    (
        "INSERT INTO seasons_close (commons_id, season, entry_number)"
        " SELECT commons_id, 'mullet-2026', 14 FROM seasons_close",
        "closes",
        14,
    ),
]


@pytest.fixture
def closed(db: None, hand: Hand, ticking_clock: TickingClock) -> int:
    commons_id = builders.opened(hand=hand)
    ticking_clock.set(builders.at(builders.SEASON.until + timedelta(days=1)))
    with transaction.atomic():
        operations.record_close(commons_id=commons_id, season="clams-2026", postings=(), hand=hand)
    return commons_id


def test_honest_seasons_are_sound(closed: int) -> None:
    assert verification.problems(commons_id=closed) == ()


@pytest.mark.parametrize(("sql", "table", "entry"), CHANGES)
def test_a_changed_row(closed: int, sql: str, table: str, entry: int) -> None:
    falsifying.falsify(sql)
    assert (table, entry) in falsifying.told(verification.problems(commons_id=closed))


def test_every_table_of_the_slice_is_falsified() -> None:
    named = {sql.split()[2 if sql.startswith(("INSERT", "DELETE")) else 1] for sql, *_ in CHANGES}
    assert {model._meta.db_table for model in checks.sealed_of("seasons")} == named
