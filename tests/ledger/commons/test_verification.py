"""A row of the commons that was changed behind its entry is told, with the entry.

Entries of the small commons: 1 founds it, 2 to 5 admit members 1 to 4, 6 to 9 give the offices, 10
adopts the book, 11 and 12 open the seasons, 13 and 14 adopt the allowables, 15 to 17 admit members
5 to 7; here 18 suspends member 5 and 19 records an order.
"""

from datetime import date

import pytest
from django.db import transaction

from governance.periods import DateRange
from ledger.commons import operations, verification
from ledger.foundation.clocks import Chance
from ledger.journal.verification import Problem
from tests.conftest import TickingClock
from tests.ledger import checks, falsifying, scene

MAY = DateRange(first=date(2026, 5, 4), until=date(2026, 5, 19))


@pytest.fixture
def bay(db: None, ticking_clock: TickingClock, chance: Chance) -> scene.Scene:
    """The small commons, with a suspension and an order."""
    bay = scene.opened(clock=ticking_clock, chance=chance)
    with transaction.atomic():
        operations.suspend(
            commons_id=bay.commons_id,
            member=5,
            clause="ladder.overdraw",
            during=MAY,
            reason="third time",
            hand=bay.hand,
        )
        operations.record_order(
            commons_id=bay.commons_id,
            authority="Shellfish-water authority",
            resource="clams",
            zones=("mill_reach", "pier_sand"),
            during=MAY,
            notice="Test of 3 May failed.",
            hand=bay.hand,
        )
    assert bay.size == 19
    return bay


def _problems(bay: scene.Scene) -> tuple[Problem, ...]:
    return verification.problems(commons_id=bay.commons_id)


def test_an_honest_commons_is_sound(bay: scene.Scene) -> None:
    assert _problems(bay) == ()


CHANGES = [
    ("UPDATE commons_commons SET name = 'Red Bank'", "commons", 1),
    ("UPDATE commons_commons SET zone = 'Europe/Paris'", "commons", 1),
    ("UPDATE commons_commons SET money = 'GBP'", "commons", 1),
    ("UPDATE commons_commons SET is_demo = NOT is_demo", "commons", 1),
    ("UPDATE commons_resource SET code = 'cod' WHERE code = 'clams'", "resources", 1),
    ("UPDATE commons_resource SET name = 'Eels' WHERE code = 'clams'", "resources", 1),
    ("UPDATE commons_resource SET unit = 't' WHERE code = 'clams'", "resources", 1),
    ("UPDATE commons_resource SET base = 'kg' WHERE code = 'clams'", "resources", 1),
    (
        "INSERT INTO commons_resource (commons_id, code, name, unit, base)"
        " SELECT commons_id, 'eels', name, unit, base FROM commons_resource WHERE code = 'clams'",
        "resources",
        1,
    ),
    ("UPDATE commons_zone SET code = 'pier' WHERE code = 'pier_sand'", "zones", 1),
    ("UPDATE commons_zone SET name = 'Pier' WHERE code = 'pier_sand'", "zones", 1),
    (
        "UPDATE commons_zone SET resource_id = (SELECT id FROM commons_resource"
        " WHERE code = 'mullet') WHERE code = 'pier_sand'",
        "zones",
        1,
    ),
    ("DELETE FROM commons_zone WHERE code = 'pier_sand'", "zones", 1),
    ("UPDATE commons_member SET household = 1 WHERE number = 3", "members", 4),
    ("UPDATE commons_member SET number = 77 WHERE number = 3", "members", 4),
    ("UPDATE commons_member SET entry_number = 2 WHERE number = 3", "members", 4),
    ("DELETE FROM commons_member WHERE number = 3", "members", 4),
    ("UPDATE commons_memberclass SET value = 'retired' WHERE member = 2", "classes", 3),
    ("UPDATE commons_memberclass SET member = 3 WHERE member = 2", "classes", 3),
    ("UPDATE commons_memberclass SET first_day = '2026-04-01' WHERE member = 2", "classes", 3),
    ("UPDATE commons_memberclass SET until_day = '2026-04-01' WHERE member = 2", "classes", 3),
    ("UPDATE commons_memberclass SET entry_number = 5 WHERE member = 2", "classes", 3),
    ("DELETE FROM commons_memberclass WHERE member = 2", "classes", 3),
    (
        "UPDATE commons_share SET numerator = numerator * 2"
        " WHERE member = 1 AND resource = 'mullet'",
        "shares",
        2,
    ),
    (
        "UPDATE commons_share SET denominator = 7 WHERE member = 3 AND resource = 'clams'",
        "shares",
        4,
    ),
    ("UPDATE commons_share SET member = 3 WHERE member = 1 AND resource = 'clams'", "shares", 2),
    (
        "UPDATE commons_share SET resource = 'eels' WHERE member = 1 AND resource = 'clams'",
        "shares",
        2,
    ),
    ("UPDATE commons_share SET first_day = '2025-03-01' WHERE member = 1", "shares", 2),
    ("UPDATE commons_share SET until_day = '2026-04-01' WHERE member = 1", "shares", 2),
    ("UPDATE commons_share SET entry_number = 3 WHERE member = 1", "shares", 2),
    ("DELETE FROM commons_share WHERE member = 1 AND resource = 'clams'", "shares", 2),
    (
        "INSERT INTO commons_share (commons_id, member, resource, numerator, denominator,"
        " first_day, until_day, entry_number) SELECT commons_id, member, resource, numerator,"
        " denominator, first_day, until_day, entry_number FROM commons_share WHERE member = 1",
        "shares",
        2,
    ),
    (
        "INSERT INTO commons_share (commons_id, member, resource, numerator, denominator,"
        " first_day, until_day, entry_number) SELECT commons_id, 4, resource, numerator,"
        " denominator, first_day, until_day, 5 FROM commons_share WHERE member = 1",
        "shares",
        5,
    ),
    ("UPDATE commons_roleheld SET member = 2 WHERE entry_number = 7", "offices", 7),
    ("UPDATE commons_roleheld SET role = 'auditor' WHERE entry_number = 7", "offices", 7),
    ("UPDATE commons_roleheld SET first_day = '2026-04-01' WHERE entry_number = 7", "offices", 7),
    ("UPDATE commons_roleheld SET until_day = '2026-04-01' WHERE entry_number = 7", "offices", 7),
    ("UPDATE commons_roleheld SET entry_number = 99 WHERE entry_number = 7", "offices", 7),
    ("DELETE FROM commons_roleheld WHERE entry_number = 7", "offices", 7),
    ("UPDATE commons_suspension SET member = 6", "suspensions", 18),
    ("UPDATE commons_suspension SET clause = '3.1'", "suspensions", 18),
    ("UPDATE commons_suspension SET first_day = '2026-05-05'", "suspensions", 18),
    ("UPDATE commons_suspension SET until_day = '2026-05-05'", "suspensions", 18),
    ("UPDATE commons_suspension SET entry_number = 17", "suspensions", 18),
    ("DELETE FROM commons_suspension", "suspensions", 18),
    ("UPDATE commons_outsideorder SET authority = 'Nobody'", "outside orders", 19),
    ("UPDATE commons_outsideorder SET resource = 'mullet'", "outside orders", 19),
    ("UPDATE commons_outsideorder SET zones = '[\"pier_sand\"]'", "outside orders", 19),
    ("UPDATE commons_outsideorder SET first_day = '2026-05-05'", "outside orders", 19),
    ("UPDATE commons_outsideorder SET until_day = '2026-05-05'", "outside orders", 19),
    ("UPDATE commons_outsideorder SET entry_number = 1", "outside orders", 19),
    ("DELETE FROM commons_outsideorder", "outside orders", 19),
]


@pytest.mark.parametrize(("sql", "table", "entry"), CHANGES)
def test_a_changed_row(bay: scene.Scene, sql: str, table: str, entry: int) -> None:
    falsifying.falsify(sql)
    assert (table, entry) in falsifying.told(_problems(bay))


def test_every_table_of_the_slice_is_falsified() -> None:
    named = {sql.split()[2 if sql.startswith(("INSERT", "DELETE")) else 1] for sql, *_ in CHANGES}
    assert {model._meta.db_table for model in checks.sealed_of("commons")} < named


def test_a_problem_names_both_values(bay: scene.Scene) -> None:
    falsifying.falsify("UPDATE commons_member SET household = 1 WHERE number = 3")
    (problem,) = _problems(bay)
    assert str(problem) == "members entry 4: the member: household is 1; it should be 3"


def test_an_erased_authority_is_no_problem(bay: scene.Scene) -> None:
    falsifying.falsify("DELETE FROM journal_text WHERE number = 19")
    assert _problems(bay) == ()


def test_an_entry_appended_while_the_rows_are_read_is_not_missed(
    bay: scene.Scene, monkeypatch: pytest.MonkeyPatch
) -> None:
    kept = verification._kept_members

    def kept_then_grown(commons_id: int) -> object:
        yield from kept(commons_id)
        with transaction.atomic():
            operations.give_role(
                commons_id=commons_id, member=5, role="auditor", during=MAY, hand=bay.hand
            )

    monkeypatch.setattr(verification, "_kept_members", kept_then_grown)
    assert _problems(bay) == ()
