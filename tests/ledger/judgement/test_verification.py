"""A finding that is not what the judge makes of the entries is told, with the last entry of it.

In the small commons, after 17 entries: 18 and 19 are clams of household 5 beyond a day's limit of
40 kg, the second handed in late, so that finding 1 has two versions; 20 is a slip of member 7 that
21 and 22 correct, so that finding 2 is withdrawn.
"""

from datetime import date

import pytest
from django.db import transaction

from ledger.foundation.clocks import Chance
from ledger.judgement import models, operations, queries, verification
from tests.conftest import TickingClock
from tests.ledger import falsifying, scene
from tests.ledger.builders import line

MONDAY, TUESDAY, WEDNESDAY = date(2026, 3, 2), date(2026, 3, 3), date(2026, 3, 4)


@pytest.fixture
def bay(db: None, ticking_clock: TickingClock, chance: Chance) -> scene.Scene:
    """The small commons, judged on three days."""
    bay = scene.opened(clock=ticking_clock, chance=chance)
    assert bay.lands("1", line("clams", "43"), member=5, day=MONDAY) == 18
    bay.judges(MONDAY)
    assert bay.lands("2", line("clams", "1"), member=6, day=MONDAY) == 19
    mistaken = bay.lands("3", line("clams", "50"), member=7, day=TUESDAY)
    bay.judges(TUESDAY)
    bay.corrects(mistaken, "3", line("clams", "5"), member=7, day=TUESDAY)
    bay.judges(WEDNESDAY)
    kept = models.FindingVersion.objects.values_list("finding", "version", "standing")
    assert sorted(kept) == [(1, 1, True), (1, 2, True), (2, 1, True), (2, 2, False)]
    return bay


def _told(bay: scene.Scene) -> set[tuple[str, int | None]]:
    return falsifying.told(verification.problems(commons_id=bay.commons_id))


def test_honest_findings_are_sound(bay: scene.Scene) -> None:
    assert _told(bay) == set()


def test_a_judge_that_lags_behind_is_sound(bay: scene.Scene) -> None:
    bay.lands("4", line("clams", "90"), member=7, day=WEDNESDAY)
    assert _told(bay) == set()


VALUES = {
    "clause": "'3.1'",
    "subject_kind": "'member'",
    "subject": "1",
    "resource": "'mullet'",
    "window_first": "'2026-03-01'",
    "window_until": "'2026-03-09'",
    "edition": "2",
    "or_else": "''",
    "base": "'kg'",
    "total": "1",
    '"limit"': "1",
    "breach": "1",
    "overuse": "1",
    "entries": "'[18, 19, 20]'",
    "working": "'[\"Nothing.\"]'",
    "inputs": "'00'",
}
# Entry 20 stands last among the entries of a finding that is said to rest on it.
LAST = {"entries": 20}


@pytest.mark.parametrize("column", VALUES)
@pytest.mark.parametrize(("finding", "version", "entry"), [(1, 1, 18), (1, 2, 19), (2, 2, 20)])
def test_a_changed_column(
    bay: scene.Scene, column: str, finding: int, version: int, entry: int
) -> None:
    falsifying.falsify(
        f"UPDATE judgement_findingversion SET {column} = {VALUES[column]}"
        f" WHERE finding = {finding} AND version = {version}"
    )
    assert ("findings", LAST.get(column, entry)) in _told(bay)


@pytest.mark.parametrize(
    ("sql", "entry"),
    [
        ("UPDATE judgement_findingversion SET standing = NOT standing WHERE finding = 1", 19),
        ("UPDATE judgement_findingversion SET standing = NOT standing WHERE finding = 2", 20),
        ("UPDATE judgement_findingversion SET judged_up_to = 17 WHERE version = 1", 18),
        ("UPDATE judgement_findingversion SET judged_up_to = 99 WHERE version = 2", 19),
        ("UPDATE judgement_findingversion SET judged_on = '2026-02-01' WHERE version = 2", 19),
        ("UPDATE judgement_findingversion SET judged_on = '2027-02-01' WHERE version = 2", 19),
        ("UPDATE judgement_findingversion SET finding = 5 WHERE finding = 2", None),
        ("UPDATE judgement_findingversion SET version = 3 WHERE finding = 1 AND version = 2", 19),
        ("UPDATE judgement_findingversion SET subject_kind = 'boat' WHERE finding = 2", None),
        ("UPDATE judgement_findingversion SET entries = '[\"x\"]' WHERE finding = 2", None),
        ("DELETE FROM judgement_findingversion WHERE finding = 1", 19),
        ("DELETE FROM judgement_findingversion WHERE finding = 1", None),
        ("DELETE FROM judgement_findingversion WHERE finding = 1 AND version = 1", 19),
        ("DELETE FROM judgement_findingversion WHERE finding = 1 AND version = 2", 18),
        ("DELETE FROM judgement_findingversion WHERE finding = 2 AND version = 2", 20),
        ("DELETE FROM judgement_findingversion", 19),
        ("DELETE FROM judgement_cursor", None),
        ("UPDATE judgement_cursor SET judged_up_to = 99", None),
        ("UPDATE judgement_cursor SET judged_up_to = 18", 19),
        ("UPDATE judgement_cursor SET judged_on = '2026-03-01'", 19),
    ],
)
def test_a_changed_row(bay: scene.Scene, sql: str, entry: int | None) -> None:
    falsifying.falsify(sql)
    assert ("findings", entry) in _told(bay)


def test_a_finding_that_nobody_made(bay: scene.Scene) -> None:
    row = models.FindingVersion.objects.filter(finding=1, version=2).values().get()
    invented = {**row, "id": None, "finding": 3, "version": 1, "subject": 7}
    models.FindingVersion.objects.create(**invented)
    assert _told(bay) == {("findings", 19)}


def test_the_cursor_hides_nothing_that_was_read(bay: scene.Scene) -> None:
    """Where the judge is said to have read a take, the finding on it has to stand."""
    bay.lands("4", line("clams", "90"), member=7, day=WEDNESDAY)
    falsifying.falsify("UPDATE judgement_cursor SET judged_up_to = 23")
    (problem,) = verification.problems(commons_id=bay.commons_id)
    assert problem.number == 23
    assert "judged anew it stands, and no row of it is kept" in problem.what


class TestClosedSeason:
    """Findings of a closed season stay as they were at its close, whatever comes in later."""

    @pytest.fixture
    def closed(self, bay: scene.Scene) -> scene.Scene:
        bay.morning(date(2026, 7, 13))
        for season in ("clams-2026", "mullet-2026"):
            with transaction.atomic():
                operations.close_season(commons_id=bay.commons_id, season=season, hand=bay.hand)
        late = bay.lands("9", line("clams", "77"), member=7, day=WEDNESDAY)
        bay.morning(date(2026, 7, 20))
        bay.judges(date(2026, 7, 19))
        assert queries.judged_up_to(commons_id=bay.commons_id) == late
        return bay

    def test_it_is_sound(self, closed: scene.Scene) -> None:
        clauses = {key.clause for key in queries.latest(commons_id=closed.commons_id)}
        assert {"3.2", "6.1"} <= clauses, "takes and duties were found"
        assert _told(closed) == set()

    def test_a_changed_finding_is_told(self, closed: scene.Scene) -> None:
        falsifying.falsify("UPDATE judgement_findingversion SET breach = 0 WHERE finding = 1")
        assert _told(closed) == {("findings", 18), ("findings", 19)}

    def test_a_deleted_duty_is_told(self, closed: scene.Scene) -> None:
        falsifying.falsify("DELETE FROM judgement_findingversion WHERE clause = '6.1'")
        found = verification.problems(commons_id=closed.commons_id)
        assert any("clause 6.1, member 1" in problem.what for problem in found)
