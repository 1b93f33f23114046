"""Findings as they stand, as they stood, and opened in words."""

from datetime import date

import pytest

from governance.periods import DateRange
from ledger.foundation.clocks import Chance
from ledger.judgement import models, queries
from tests.conftest import TickingClock
from tests.ledger import builders, scene
from tests.ledger.builders import line

pytestmark = pytest.mark.django_db

MONDAY, TUESDAY = date(2026, 3, 2), date(2026, 3, 3)


@pytest.fixture
def bay(ticking_clock: TickingClock, chance: Chance) -> scene.Scene:
    return scene.opened(clock=ticking_clock, chance=chance)


def test_the_last_version_and_the_one_known_earlier(bay: scene.Scene) -> None:
    number = bay.lands("1", line("clams", "43"), day=MONDAY)
    bay.judges(MONDAY)
    then = bay.size
    bay.corrects(number, "1", line("clams", "40"), day=MONDAY)
    bay.judges(MONDAY)
    (now,) = queries.latest(commons_id=bay.commons_id).values()
    (before,) = queries.latest(commons_id=bay.commons_id, up_to=then).values()
    assert (now.version, now.standing) == (2, False)
    assert (before.version, before.standing) == (1, True)
    first = queries.finding(commons_id=bay.commons_id, number=1, version=1)
    assert first == before
    assert queries.by_number(commons_id=bay.commons_id, numbers=[1, 2]) == {1: now}


def test_findings_of_some_windows_alone(bay: scene.Scene) -> None:
    bay.lands("1", line("clams", "43"), day=MONDAY)
    bay.lands("2", line("clams", "43"), day=TUESDAY)
    bay.judges(TUESDAY)
    only_tuesday = [DateRange(first=TUESDAY, until=date(2026, 3, 4))]
    found = queries.latest(commons_id=bay.commons_id, during=only_tuesday)
    assert [key.window.first for key in found] == [TUESDAY]
    assert queries.latest(commons_id=bay.commons_id, during=[]) == {}


def test_numbers_about_members_and_households(bay: scene.Scene) -> None:
    bay.lands("1", line("clams", "43"), member=6, day=MONDAY)
    bay.lands("2", line("mullet", "1"), member=7, day=MONDAY)
    bay.judges(MONDAY)
    assert queries.last_number(commons_id=bay.commons_id) == 2
    numbers = {
        key.subject: record.number
        for key, record in queries.latest(commons_id=bay.commons_id).items()
    }
    about = queries.numbers_about(commons_id=bay.commons_id, members={5, 6})
    assert about == {numbers[5]}
    assert queries.numbers_about(commons_id=bay.commons_id, members={1}) == frozenset()


def test_judging_without_recording_leaves_nothing(bay: scene.Scene) -> None:
    bay.lands("1", line("clams", "43"), day=MONDAY)
    found = queries.judged(commons_id=bay.commons_id, during=builders.SEASON, as_of=MONDAY)
    assert [each.key.clause for each in found] == ["3.2"]
    assert not models.FindingVersion.objects.filter(commons_id=bay.commons_id).exists()
    assert queries.judged_up_to(commons_id=bay.commons_id) == 0


def test_a_finding_opens_down_to_its_entries_and_its_clause(bay: scene.Scene) -> None:
    number = bay.lands("1", line("clams", "43"), day=MONDAY)
    bay.judges(MONDAY)
    words = "\n".join(queries.explained(commons_id=bay.commons_id, number=1))
    assert str(number) in words
    assert "No household lands more than this in one day." in words
    assert "43 kg" in words
