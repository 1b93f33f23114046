"""Where a member stands; the amounts follow by hand from the small commons' own numbers."""

from datetime import date

import pytest
from django.db import connection, transaction
from django.test.utils import CaptureQueriesContext

from governance.periods import DateRange
from ledger.commons import operations as commons
from ledger.foundation.clocks import Chance
from ledger.reports import progress, standing
from tests.conftest import TickingClock
from tests.ledger import builders, scene

pytestmark = pytest.mark.django_db
DAY = date(2026, 3, 2)


@pytest.fixture
def bay(ticking_clock: TickingClock, chance: Chance) -> scene.Scene:
    """The small commons with its season open."""
    return scene.opened(clock=ticking_clock, chance=chance)


def _standing(bay: scene.Scene, member: int) -> standing.Standing:
    return standing.standing(commons_id=bay.commons_id, member=member, now=bay.clock.now)


def test_a_member_reads_what_is_left_and_why(bay: scene.Scene) -> None:
    """588 kg of mullet are allotted to member 1; 10 kg taken leave 578 kg."""
    bay.morning(DAY, hour=20)
    bay.lands("A", member=1, day=DAY)
    found = {each.resource: each for each in _standing(bay, 1).seasons}
    mullet = found["mullet"]
    assert (mullet.allotted, mullet.taken, mullet.left) == (588_000, 10_000, 578_000)
    assert mullet.sentence.startswith("578")
    assert "588" in mullet.sentence
    assert found["clams"].left == 100_000
    assert _standing(bay, 1).reasons == ()


def test_what_was_found_is_opened_with_its_entries_and_its_case(bay: scene.Scene) -> None:
    """60 kg of clams in a day by household 5: its other member reads it too."""
    bay.morning(DAY, hour=20)
    number = bay.lands("A", builders.line("clams", "60"), member=5, day=DAY)
    bay.judges(date(2026, 3, 3))
    bay.hears()
    mine, housemates = _standing(bay, 5).reasons, _standing(bay, 6).reasons
    assert number in {entry for reason in mine for entry in reason.entries}
    assert all(reason.lines and reason.case and reason.state == "noted" for reason in mine)
    assert {reason.finding for reason in housemates} <= {reason.finding for reason in mine}
    assert _standing(bay, 7).reasons == ()


def test_an_order_in_force_heads_the_standing(bay: scene.Scene) -> None:
    """From its first day on, and not before."""
    bay.morning(DAY)
    with transaction.atomic():
        commons.record_order(
            commons_id=bay.commons_id,
            authority="Harbour office",
            resource="clams",
            zones=("mill_reach",),
            during=DateRange(first=DAY, until=date(2026, 3, 5)),
            notice="Closed after rain.",
            hand=bay.hand,
        )
    assert [order.notice for order in _standing(bay, 7).orders] == ["Closed after rain."]
    bay.morning(date(2026, 3, 5))
    assert _standing(bay, 7).orders == ()


def test_a_number_that_nobody_has_is_refused(bay: scene.Scene) -> None:
    """The refusal names it."""
    with pytest.raises(standing.NoSuchMember):
        _standing(bay, 99)


def test_more_members_ask_for_no_more_statements(bay: scene.Scene) -> None:
    """The cost of a standing does not follow the number of members."""
    with CaptureQueriesContext(connection) as few:
        _standing(bay, 5)
    with transaction.atomic():
        admitted = [builders.admission(number) for number in range(100, 140)]
        commons.admit(commons_id=bay.commons_id, admissions=admitted, hand=bay.hand)
    with CaptureQueriesContext(connection) as many:
        _standing(bay, 5)
    assert len(many) == len(few)


def test_a_season_shows_the_groups_sums(bay: scene.Scene) -> None:
    """10 and 5 kg on two days, of 1,100 kg."""
    bay.morning(date(2026, 3, 4), hour=20)
    bay.lands("A", member=1, day=DAY)
    bay.lands("B", builders.line("mullet", "5"), member=3, day=date(2026, 3, 3))
    found = progress.season_progress(commons_id=bay.commons_id, season="mullet-2026")
    assert (found.taken, found.allowable, found.reserve) == (15_000, 1_100_000, 22_000)
    assert [(row.day, row.amount) for row in found.daily] == [
        (DAY, 10_000),
        (date(2026, 3, 3), 5_000),
    ]
    assert "1.4" in found.sentence


@pytest.mark.parametrize(("count", "words"), [(0, "0"), (1, "few"), (4, "few"), (5, "5")])
def test_a_small_count_points_at_nobody(count: int, words: str) -> None:
    """Below five it is told as few."""
    assert progress.few(count) == words


def test_an_ended_season_offers_nothing(bay: scene.Scene) -> None:
    """The season ends on 28 June; what was left of it may not be taken on the 29th."""
    bay.morning(date(2026, 6, 28))
    assert all("may still be taken" in each.sentence for each in _standing(bay, 1).seasons)
    bay.morning(date(2026, 6, 29))
    for each in _standing(bay, 1).seasons:
        assert "has ended" in each.sentence
        assert "may" not in each.sentence
