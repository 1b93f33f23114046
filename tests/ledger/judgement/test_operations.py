"""The judge at work: versions where facts changed, never backwards; the close of a season."""

from datetime import UTC, date, datetime

import pytest
from django.db import transaction

from governance.compliance.findings import SubjectKind
from governance.periods import DateRange
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.foundation.clocks import Chance
from ledger.foundation.models import Job
from ledger.journal import operations as journal_operations
from ledger.journal import queries as journal
from ledger.judgement import models, operations, queries
from ledger.movements import operations as movements
from ledger.movements import queries as movements_queries
from ledger.seasons import operations as seasons
from ledger.seasons import queries as seasons_queries
from tests.conftest import TickingClock
from tests.ledger import builders, scene
from tests.ledger.builders import line

pytestmark = pytest.mark.django_db

MONDAY, TUESDAY, WEDNESDAY = date(2026, 3, 2), date(2026, 3, 3), date(2026, 3, 4)


@pytest.fixture
def bay(ticking_clock: TickingClock, chance: Chance) -> scene.Scene:
    return scene.opened(clock=ticking_clock, chance=chance)


def versions(bay: scene.Scene) -> list[tuple[int, int, bool]]:
    """Return (finding, version, standing) of everything that the judge ever appended."""
    rows = models.FindingVersion.objects.filter(commons_id=bay.commons_id)
    return sorted(rows.values_list("finding", "version", "standing"))


def only(bay: scene.Scene) -> queries.FindingRecord:
    (record,) = queries.latest(commons_id=bay.commons_id).values()
    return record


class TestFinding:
    """Forty kilos of clams a day and a household, with a tolerance of 5 %: 42 kg."""

    def test_a_household_is_found_by_what_its_members_took_together(self, bay: scene.Scene) -> None:
        first = bay.lands("1", line("clams", "25"), member=5, day=MONDAY)
        second = bay.lands("2", line("clams", "18"), member=6, day=MONDAY)
        assert bay.judges(MONDAY) == 1
        record = only(bay)
        found = record.finding
        assert (found.key.clause, found.key.subject_kind, found.key.subject) == (
            "3.2",
            SubjectKind.HOUSEHOLD,
            5,
        )
        assert found.key.resource == "clams"
        assert found.key.window == DateRange(first=MONDAY, until=TUESDAY)
        assert found.edition == 1
        assert found.or_else == "ladder.overdraw"
        assert (found.base, found.total, found.limit) == ("g", 43_000, 40_000)
        assert (found.breach, found.overuse) == (1_000, 3_000)
        assert found.entries == (first, second)
        assert len(found.inputs) == 64
        assert any("42 kg" in sentence for sentence in found.working)
        assert (record.judged_up_to, record.judged_on) == (bay.size, MONDAY)

    def test_exactly_at_the_ceiling_nothing_is_found(self, bay: scene.Scene) -> None:
        bay.lands("1", line("clams", "42"), day=MONDAY)
        assert bay.judges(MONDAY) == 0

    def test_an_outside_order_reaches_takes_recorded_before_it(self, bay: scene.Scene) -> None:
        bay.lands("1", line("clams", "5"), day=TUESDAY)
        assert bay.judges(TUESDAY) == 0
        with transaction.atomic():
            commons.record_order(
                commons_id=bay.commons_id,
                authority="The water authority",
                resource="clams",
                zones=["pier_sand"],
                during=DateRange(first=MONDAY, until=WEDNESDAY),
                notice="Closed after a test.",
                hand=bay.hand,
            )
        assert bay.judges(WEDNESDAY) == 1
        assert only(bay).finding.key.clause == "4.2"

    def test_duties_are_judged_when_the_season_is_over_and_not_before(
        self, bay: scene.Scene
    ) -> None:
        """Two days of six hours: 720 minutes, owed by the licensed and not by the retired."""
        assert bay.judges(builders.SEASON.last) == 0
        assert bay.judges(builders.SEASON.until) == 6
        found = queries.latest(commons_id=bay.commons_id)
        assert sorted(key.subject for key in found) == [1, 2, 3, 5, 6, 7]
        assert {record.finding.breach for record in found.values()} == {720}


class TestVersions:
    """A version is appended where a finding is new, differs or is gone, and nowhere else."""

    def test_an_unchanged_finding_appends_nothing(self, bay: scene.Scene) -> None:
        bay.lands("1", line("clams", "43"), day=MONDAY)
        bay.judges(MONDAY)
        bay.lands("2", line("clams", "10"), day=TUESDAY)
        assert bay.judges(TUESDAY) == 0
        assert versions(bay) == [(1, 1, True)]

    def test_judging_again_appends_nothing(self, bay: scene.Scene) -> None:
        bay.lands("1", line("clams", "43"), day=MONDAY)
        assert bay.judges(MONDAY) == 1
        assert bay.judges(MONDAY) == 0

    def test_a_correction_withdraws_and_a_later_one_brings_back(self, bay: scene.Scene) -> None:
        number = bay.lands("1", line("clams", "43"), day=MONDAY)
        bay.judges(MONDAY)
        number = bay.corrects(number, "1", line("clams", "40"), day=MONDAY)
        assert bay.judges(MONDAY) == 1
        assert not only(bay).standing
        again = bay.corrects(number, "1", line("clams", "44"), day=MONDAY)
        assert bay.judges(MONDAY) == 1
        assert versions(bay) == [(1, 1, True), (1, 2, False), (1, 3, True)]
        assert only(bay).finding.total == 44_000
        assert only(bay).finding.entries == (again,)

    def test_a_late_entry_makes_another_version(self, bay: scene.Scene) -> None:
        bay.lands("1", line("clams", "43"), member=5, day=MONDAY)
        bay.judges(MONDAY)
        bay.morning(WEDNESDAY)
        bay.lands("2", line("clams", "2.5"), member=6, day=MONDAY)
        assert bay.judges(TUESDAY) == 1
        assert versions(bay) == [(1, 1, True), (1, 2, True)]
        assert (only(bay).finding.total, only(bay).finding.breach) == (45_500, 3_500)

    def test_a_slip_moved_to_another_member_touches_both(self, bay: scene.Scene) -> None:
        number = bay.lands("1", line("clams", "43"), member=5, day=MONDAY)
        bay.judges(MONDAY)
        bay.corrects(number, "1", line("clams", "43"), member=7, day=MONDAY)
        assert bay.judges(MONDAY) == 2
        standing = {
            key.subject: record.standing
            for key, record in queries.latest(commons_id=bay.commons_id).items()
        }
        assert standing == {5: False, 7: True}

    def test_the_cases_hear_of_what_changed_and_of_nothing_else(self, bay: scene.Scene) -> None:
        bay.lands("1", line("clams", "43"), member=5, day=MONDAY)
        bay.judges(MONDAY)
        bay.judges(TUESDAY)
        (job,) = Job.objects.filter(commons_id=bay.commons_id, kind="hear_findings")
        assert job.payload == {"findings": [1]}


class TestDays:
    """The judge goes from day to day, and nothing falls between two of them."""

    def test_an_act_read_before_its_day_is_judged_when_the_day_has_come(
        self, bay: scene.Scene
    ) -> None:
        """A judge that rings late reads slips of the day after; their member must come up again."""
        bay.morning(TUESDAY)
        bay.lands("1", line("clams", "43"), day=TUESDAY)
        assert bay.judges(MONDAY) == 0
        assert bay.judges(TUESDAY) == 1

    def test_the_judge_never_goes_backwards(self, bay: scene.Scene) -> None:
        bay.lands("1", line("clams", "43"), day=WEDNESDAY)
        assert bay.judges(WEDNESDAY) == 1
        assert bay.judges(MONDAY) == 0
        assert only(bay).standing
        cursor = models.Cursor.objects.get(commons_id=bay.commons_id)
        assert cursor.judged_on == WEDNESDAY

    def test_the_next_day_is_promised(self, bay: scene.Scene) -> None:
        """The day of 29 March 2026 ends at 23:00 UTC: summer time began that morning."""
        bay.judges(date(2026, 3, 28))
        job = bay.job("judge", "2026-03-29")
        assert job.due_at == datetime(2026, 3, 29, 23, 0, tzinfo=UTC)

    def test_before_any_season_has_begun_nothing_is_promised(self, bay: scene.Scene) -> None:
        bay.judges(date(2026, 2, 27))
        assert not Job.objects.filter(commons_id=bay.commons_id, key="2026-02-28").exists()

    def test_the_daily_job_calls_itself_again_until_all_is_closed(self, bay: scene.Scene) -> None:
        bay.midnight(date(2026, 3, 6))
        rung = [each.job.key for each in bay.drains() if each.job.kind == "judge"]
        assert rung == [f"2026-03-0{day}" for day in range(1, 6)]
        bay.midnight(date(2026, 8, 1))
        rung = [each.job.key for each in bay.drains() if each.job.kind == "judge"]
        assert rung[-1] == "2026-07-12"
        assert seasons_open(bay) == []
        bay.midnight(date(2026, 8, 5))
        bay.drains()
        waiting = Job.objects.filter(commons_id=bay.commons_id, kind="judge", done_at__isnull=True)
        assert not waiting.exists()


def seasons_open(bay: scene.Scene) -> list[str]:
    opened = seasons_queries.seasons(commons_id=bay.commons_id)
    return [season.code for season in opened.values() if not season.closed]


class TestWindows:
    """Seasons of two resources need not run together."""

    def test_a_take_is_judged_in_the_season_of_its_own_resource(
        self, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        """In the window of the clams nobody has an allotment of mullet, and nobody needs one."""
        hand = builders.hand(clock=ticking_clock, chance=chance)
        commons_id = builders.governed(hand=hand)
        with transaction.atomic():
            for code, resource, months in (
                ("mullet-2026", "mullet", (3, 7)),
                ("clams-2026", "clams", (4, 10)),
            ):
                during = DateRange(first=date(2026, months[0], 1), until=date(2026, months[1], 1))
                seasons.open_season(
                    commons_id=commons_id,
                    code=code,
                    resource=resource,
                    during=during,
                    closes_on=during.until,
                    hand=hand,
                )
        builders.adopt_allowables(commons_id=commons_id, hand=hand)
        bay = scene.Scene(commons_id=commons_id, clock=ticking_clock, chance=chance)
        day = date(2026, 5, 4)
        late = builders.slip("2", line("clams", "1"), member=2, day=day, hours_later=49)
        bay.lands("1", line("mullet", "10"), line("clams", "10"), member=1, day=day)
        builders.land(commons_id=commons_id, hand=hand, slips=[late])
        assert bay.judges(day) == 1
        assert only(bay).finding.key.clause == "5.1"
        bay.lands("3", line("mullet", "10"), member=1, day=day)
        assert bay.judges(day) == 0


class TestClosedSeason:
    """What was found in a closed season stays as it was reported."""

    def closes(self, bay: scene.Scene, season: str) -> None:
        with transaction.atomic():
            operations.close_season(commons_id=bay.commons_id, season=season, hand=bay.hand)

    def test_findings_of_a_closed_season_are_left_alone(self, bay: scene.Scene) -> None:
        number = bay.lands("1", line("clams", "43"), day=MONDAY)
        bay.judges(MONDAY)
        bay.morning(date(2026, 7, 13))
        self.closes(bay, "clams-2026")
        bay.corrects(number, "1", line("clams", "10"), day=MONDAY)
        bay.lands("2", line("clams", "50"), day=TUESDAY)
        bay.lands("3", line("mullet", "1"), day=TUESDAY)
        bay.judges(date(2026, 7, 14))
        found = queries.latest(commons_id=bay.commons_id)
        clams = {
            key.window.first: record for key, record in found.items() if key.resource == "clams"
        }
        assert list(clams) == [MONDAY]
        assert clams[MONDAY].standing
        assert clams[MONDAY].finding.total == 43_000
        # Member 5 has no allotment of mullet, and that season is open.
        assert [key.clause for key in found if key.resource == "mullet"] == ["2.3"]

    def test_late_slips_of_a_closed_resource_stay_found_beside_an_open_one(
        self, bay: scene.Scene
    ) -> None:
        late = builders.slip("1", line("clams", "1"), member=5, day=MONDAY, hours_later=49)
        builders.land(commons_id=bay.commons_id, hand=bay.hand, slips=[late])
        bay.judges(TUESDAY)
        bay.morning(date(2026, 7, 13))
        self.closes(bay, "clams-2026")
        bay.lands("2", line("mullet", "1"), day=MONDAY)
        bay.judges(date(2026, 7, 14))
        found = queries.latest(commons_id=bay.commons_id)
        assert [each.standing for key, each in found.items() if key.clause == "5.1"] == [True]

    def test_after_the_last_close_nothing_changes(self, bay: scene.Scene) -> None:
        bay.morning(date(2026, 7, 13))
        self.closes(bay, "clams-2026")
        self.closes(bay, "mullet-2026")
        bay.lands("1", line("clams", "50"), day=MONDAY)
        assert bay.judges(date(2026, 7, 14)) == 0


AFTER = date(2026, 7, 13)


def landed_season(bay: scene.Scene) -> None:
    """Let three members leave 88 kg, take 14 kg too much, and take all, of mullet."""
    for member, kilograms in ((1, "500"), (2, "210"), (3, "294")):
        bay.lands(f"m{member}", line("mullet", kilograms), member=member, day=MONDAY)


def close(bay: scene.Scene, season: str = "mullet-2026") -> None:
    with transaction.atomic():
        operations.close_season(commons_id=bay.commons_id, season=season, hand=bay.hand)


class TestClose:
    """Of 1,100 kg, 22 kg in reserve, three members are allotted 588, 196 and 294 kg."""

    def test_it_is_refused_while_a_day_is_left(self, bay: scene.Scene) -> None:
        """The last minute of 28 June in Dublin is 22:59 UTC."""
        bay.clock.set(datetime(2026, 6, 28, 22, 59, tzinfo=UTC))
        before = bay.size
        with pytest.raises(operations.SeasonNotOver) as refused:
            close(bay)
        assert "2026-06-28" in str(refused.value)
        assert bay.size == before
        assert not seasons_queries.season(commons_id=bay.commons_id, code="mullet-2026").closed
        bay.clock.set(datetime(2026, 6, 28, 23, 0, tzinfo=UTC))
        close(bay)

    def test_on_the_first_possible_day_the_duties_of_the_season_are_judged_too(
        self, bay: scene.Scene
    ) -> None:
        """Nobody gave a minute of the twelve hours that every licensed member owes."""
        bay.clock.set(datetime(2026, 6, 28, 23, 0, tzinfo=UTC))
        close(bay)
        found = queries.latest(commons_id=bay.commons_id)
        assert {key.clause for key in found} == {"6.1"}
        assert {record.finding.breach for record in found.values()} == {720}

    def test_it_is_refused_while_the_judge_has_not_read_everything(self, bay: scene.Scene) -> None:
        bay.morning(AFTER)
        bay.judges(AFTER)
        bay.lands("late", line("mullet", "1"), day=MONDAY)
        with pytest.raises(operations.SeasonNotJudged) as refused, transaction.atomic():
            operations.settle_season(commons_id=bay.commons_id, season="mullet-2026", hand=bay.hand)
        assert str(bay.size) in str(refused.value)

    def test_it_is_refused_twice(self, bay: scene.Scene) -> None:
        bay.morning(AFTER)
        close(bay)
        size = bay.size
        with pytest.raises(seasons.SeasonAlreadyClosed):
            close(bay)
        assert bay.size == size

    def test_it_reads_what_the_judge_has_not_read(self, bay: scene.Scene) -> None:
        bay.lands("1", line("clams", "43"), day=MONDAY)
        bay.morning(AFTER)
        close(bay, "clams-2026")
        clauses = {key.clause for key in queries.latest(commons_id=bay.commons_id)}
        assert clauses == {"3.2", "6.1"}

    def test_it_settles_every_member_to_the_gram(self, bay: scene.Scene) -> None:
        """Carried over at most a tenth of 588 kg; 14 kg are owed; the rest goes to the pool."""
        landed_season(bay)
        bay.morning(AFTER)
        close(bay)
        commons_id = bay.commons_id
        carried = seasons_queries.carried(commons_id=commons_id, resource="mullet")
        assert {m: amount for m, amount in carried.items() if amount} == {1: 58_800, 2: -14_000}
        left = seasons_queries.left(commons_id=commons_id, season="mullet-2026")
        assert set(left.values()) == {0}
        assert seasons_queries.pool(commons_id=commons_id, season="mullet-2026") == 51_200
        taken = seasons_queries.taken(commons_id=commons_id, season="mullet-2026")
        assert sum(taken.values()) + 51_200 + 58_800 - 14_000 == builders.MULLET_ALLOWABLE

    def test_allotments_are_told_as_they_stood_before_the_close(self, bay: scene.Scene) -> None:
        landed_season(bay)
        bay.morning(AFTER)
        close(bay)
        allotted = seasons_queries.allotments(commons_id=bay.commons_id, season="mullet-2026")
        assert allotted == {1: 588_000, 2: 196_000, 3: 294_000}

    def test_the_next_season_opens_with_what_this_one_closed_with(self, bay: scene.Scene) -> None:
        """980 kg by 3 : 1 : 3/2, largest remainder: 534,545 and 178,182 and 267,273 g."""
        landed_season(bay)
        bay.morning(AFTER)
        close(bay)
        with transaction.atomic():
            seasons.open_season(
                commons_id=bay.commons_id,
                code="mullet-2027",
                resource="mullet",
                during=builders.NEXT_SEASON,
                closes_on=date(2027, 7, 13),
                hand=bay.hand,
            )
            seasons.adopt_allowable(
                commons_id=bay.commons_id,
                season="mullet-2027",
                amount=1_000_000,
                approved_by=builders.BOARD,
                hand=bay.hand,
            )
        assert seasons_queries.left(commons_id=bay.commons_id, season="mullet-2027") == {
            1: 534_545 + 58_800,
            2: 178_182 - 14_000,
            3: 267_273,
        }
        carried = seasons_queries.carried(commons_id=bay.commons_id, resource="mullet")
        assert set(carried.values()) == {0}

    def test_without_an_allowable_there_is_nothing_to_settle(
        self, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        hand = builders.hand(clock=ticking_clock, chance=chance)
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        bay = scene.Scene(commons_id=commons_id, clock=ticking_clock, chance=chance)
        bay.morning(AFTER)
        close(bay)
        assert journal.entry(commons_id=commons_id, number=bay.size).postings == ()


class TestClosingJob:
    """The close rings on the day that was named when the season was opened."""

    def test_it_closes_on_its_day(self, bay: scene.Scene) -> None:
        bay.midnight(AFTER)
        outcomes = {each.job.key: each.outcome for each in bay.drains()}
        assert outcomes["mullet-2026"].startswith("closed by entry")
        assert seasons_open(bay) == []

    def test_a_season_closed_by_hand_is_no_longer_due(self, bay: scene.Scene) -> None:
        bay.clock.set(builders.at(date(2026, 7, 1)))
        close(bay)
        size = bay.size
        bay.midnight(AFTER)
        outcomes = {each.job.key: each.outcome for each in bay.drains()}
        assert outcomes["mullet-2026"].startswith("no longer due")
        kinds = [each.kind for each in journal.entries(commons_id=bay.commons_id, after=size)]
        assert kinds.count("season_closed") == 1


class TestAssessDuties:
    """Whoever is in the clause's class on the first day owes two days of six hours."""

    def test_the_licensed_owe_and_the_retired_do_not(self, bay: scene.Scene) -> None:
        with transaction.atomic():
            receipt = operations.assess_duties(
                commons_id=bay.commons_id, during=builders.SEASON, hand=bay.hand
            )
        assert receipt is not None
        standing = movements_queries.duties(
            commons_id=bay.commons_id, clause="6.1", first=builders.SEASON.first
        )
        assert {member: each.assessed for member, each in standing.items()} == dict.fromkeys(
            (1, 2, 3, 5, 6, 7), 720
        )


class TestAllotmentsAsKnown:
    """What the judge reads is known up to one entry, the allotments included."""

    def test_what_was_given_back_later_is_not_known_yet(self, bay: scene.Scene) -> None:
        before = bay.size
        with transaction.atomic():
            movements.give_back(
                commons_id=bay.commons_id,
                member=1,
                season="mullet-2026",
                amount=8_000,
                case=1,
                hand=bay.hand,
            )
        for up_to, allotted in ((before, 588_000), (bay.size, 580_000)):
            known = queries.season_facts(
                commons_id=bay.commons_id, during=builders.SEASON, up_to=up_to
            )
            assert known.allotments["mullet", 1] == allotted


class TestSuspension:
    """A take under suspension is recorded, and found; a reversed suspension holds nobody."""

    def test_it_is_found_and_withdrawn_with_the_suspension(self, bay: scene.Scene) -> None:
        with transaction.atomic():
            receipt = commons.suspend(
                commons_id=bay.commons_id,
                member=5,
                clause="ladder.overdraw",
                during=DateRange(first=MONDAY, until=WEDNESDAY),
                reason="case 1",
                hand=bay.hand,
            )
        bay.lands("1", line("clams", "1"), day=TUESDAY)
        bay.lands("2", line("clams", "1"), day=WEDNESDAY)
        assert bay.judges(WEDNESDAY) == 1
        found = only(bay).finding
        assert (found.key.clause, found.key.subject) == ("ladder.overdraw", 5)
        assert (found.total, found.limit, found.breach) == (1_000, 0, 1_000)
        reverse(bay, receipt.number)
        assert bay.judges(WEDNESDAY) == 1
        assert not only(bay).standing
        (member,) = (
            each
            for each in commons_queries.roster(commons_id=bay.commons_id).members
            if each.number == 5
        )
        assert member.suspended == ()


def reverse(bay: scene.Scene, number: int) -> None:
    with transaction.atomic():
        journal_operations.reverse(
            commons_id=bay.commons_id,
            number=number,
            reason="struck out",
            by=0,
            occurred_at=bay.clock.now,
            day=bay.clock.now.date(),
            clock=bay.clock,
            chance=bay.chance,
        )
