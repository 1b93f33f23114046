"""Steps and sums from the ladder, and what a final decision brings about and gives back.

Forty kilos of clams a day, tolerance 5 %: the breach begins above 42 kg, the overuse above 40.
Warning, then 3 EUR for each kilo of the breach (at most 200), then 14 days ashore, then referral.
"""

from datetime import date, timedelta

import pytest
from django.db import transaction

from governance.periods import DateRange
from governance.sanctions.moves import State
from ledger.cases import operations, queries
from ledger.commons import queries as commons
from ledger.journal import queries as journal
from ledger.judgement import queries as judgement
from ledger.movements import operations as movements
from ledger.movements import queries as movements_queries
from ledger.seasons import queries as seasons
from tests.ledger import scene
from tests.ledger.builders import line
from tests.ledger.cases import walks

MONDAY, TUESDAY = date(2026, 3, 2), date(2026, 3, 3)
DAY = timedelta(days=1)


def measure(bay: scene.Scene, case: int) -> tuple[str | None, int]:
    record = bay.case(case)
    return (
        queries.measure(commons_id=bay.commons_id, case=record),
        record.so_far.amount_minor,
    )


def kinds_of_effects(bay: scene.Scene, case: int) -> list[str]:
    return [
        journal.entry(commons_id=bay.commons_id, number=number).kind
        for number in bay.case(case).effects
    ]


def owed(bay: scene.Scene, member: int = 5) -> int:
    dues = movements_queries.dues(commons_id=bay.commons_id, kind=movements_queries.FINE)
    return dues[member].owed if member in dues else 0


def left(bay: scene.Scene, member: int = 5, season: str = "clams-2026") -> int:
    return seasons.left(commons_id=bay.commons_id, season=season)[member]


def suspended(bay: scene.Scene) -> dict[int, list[DateRange]]:
    roster = commons.roster(commons_id=bay.commons_id)
    return {
        member.number: [each.during for each in member.suspended]
        for member in roster.members
        if member.suspended
    }


def climbed(bay: scene.Scene, *, steps: int, kilograms: str = "43") -> date:
    """Walk so many cases of household 5 to their end, one after the other; return the last day."""
    day = MONDAY
    for case in range(1, steps + 1):
        walks.noted(bay, day, kilograms=kilograms)
        day = walks.final(bay, case, day + DAY) + DAY
    return day - DAY


class TestLadder:
    def test_warning_fine_suspension_referral(self, bay: scene.Scene) -> None:
        """45.5 kg are 3.5 beyond 42: 10.50 EUR at the second step."""
        climbed(bay, steps=4, kilograms="45.5")
        assert [measure(bay, case) for case in (1, 2, 3, 4)] == [
            ("warning", 0),
            ("fine", 1_050),
            ("suspension", 0),
            ("referral", 0),
        ]

    @pytest.mark.parametrize(
        ("kilograms", "cents"),
        [
            # 1.333 kg at 300 cents are 399.9, and 1.335 kg are 400.5: a half goes up.
            ("43.333", 400),
            ("43.335", 401),
            # 100 kg would be 300 EUR; the ladder says at most 200.
            ("142", 20_000),
        ],
    )
    def test_a_fine_to_the_cent(self, bay: scene.Scene, kilograms: str, cents: int) -> None:
        day = climbed(bay, steps=1) + DAY
        case = walks.noted(bay, day, kilograms=kilograms)
        walks.told(bay, case, day + DAY)
        walks.decided(bay, case, day + 2 * DAY)
        assert measure(bay, case) == ("fine", cents)

    def test_an_earlier_act_counts_only_if_told_before_the_later(self, bay: scene.Scene) -> None:
        """Acts on the 2nd and the 4th, the first told of on the 5th: both come to a warning."""
        first = walks.noted(bay, MONDAY)
        second = walks.noted(bay, date(2026, 3, 4))
        assert walks.final(bay, first, date(2026, 3, 5)) == date(2026, 3, 28)
        walks.told(bay, second, date(2026, 3, 28))
        walks.decided(bay, second, date(2026, 3, 29))
        assert measure(bay, second) == ("warning", 0)

    def test_from_the_day_after_the_telling_an_earlier_act_counts(self, bay: scene.Scene) -> None:
        """Told on the 3rd: an act of that day could not be kept from, one of the 4th could."""
        first = walks.noted(bay, MONDAY)
        walks.told(bay, first, TUESDAY)
        second, third = walks.noted(bay, TUESDAY), walks.noted(bay, date(2026, 3, 4))
        walks.appeal_opened(bay, first, date(2026, 3, 5))
        day = date(2026, 3, 27)
        bay.midnight(day)
        bay.drains()
        for case in (second, third):
            walks.told(bay, case, day)
            walks.decided(bay, case, day + DAY)
        assert [measure(bay, case)[0] for case in (second, third)] == ["warning", "fine"]

    def test_an_earlier_case_not_final_yet_is_foreseen_in_the_notice(
        self, bay: scene.Scene
    ) -> None:
        """While the first is open the notice allows for a fine, so fourteen days to answer."""
        first = walks.noted(bay, MONDAY)
        walks.told(bay, first, TUESDAY)
        second = walks.noted(bay, date(2026, 3, 4))
        walks.told(bay, second, date(2026, 3, 5))
        assert bay.case(first).so_far.proposes_warning
        assert not bay.case(second).so_far.proposes_warning

    def test_a_case_whose_finding_was_withdrawn_after_its_end_does_not_count(
        self, bay: scene.Scene
    ) -> None:
        walks.noted(bay, MONDAY, name="first")
        day = walks.final(bay, 1, TUESDAY)
        bay.act(1, walks.complete())
        withdraw(bay, MONDAY, as_of=day)
        case = walks.noted(bay, day + DAY)
        walks.told(bay, case, day + 2 * DAY)
        walks.decided(bay, case, day + 3 * DAY)
        assert measure(bay, case) == ("warning", 0)

    def test_cases_of_others_do_not_count(self, bay: scene.Scene) -> None:
        day = climbed(bay, steps=1) + DAY
        case = walks.noted(bay, day, member=7)
        walks.told(bay, case, day + DAY)
        walks.decided(bay, case, day + 2 * DAY, member=7)
        assert measure(bay, case) == ("warning", 0)

    def test_cases_of_one_household_count_together(self, bay: scene.Scene) -> None:
        day = climbed(bay, steps=1) + DAY
        case = walks.noted(bay, day, member=6)
        walks.told(bay, case, day + DAY)
        walks.decided(bay, case, day + 2 * DAY, member=6)
        assert measure(bay, case) == ("fine", 300)


class TestFine:
    def test_it_is_charged_when_it_is_final_and_not_before(self, bay: scene.Scene) -> None:
        day = climbed(bay, steps=1) + DAY
        case = walks.noted(bay, day, kilograms="45.5")
        walks.told(bay, case, day + DAY)
        walks.appeal_opened(bay, case, day + 2 * DAY)
        assert owed(bay) == 0
        bay.midnight(day + 24 * DAY)
        bay.drains()
        assert bay.case(case).so_far.state is State.FINAL
        assert owed(bay) == 1_050
        assert kinds_of_effects(bay, case) == ["due_charged", "given_back"]

    def test_its_effects_are_told_after_completion_too(self, bay: scene.Scene) -> None:
        climbed(bay, steps=2, kilograms="45.5")
        effects = bay.case(2).effects
        bay.act(2, walks.complete())
        assert bay.case(2).so_far.state is State.DONE
        assert bay.case(2).effects == effects != ()


class TestRestore:
    def test_the_overuse_is_given_back_once_at_every_step(self, bay: scene.Scene) -> None:
        """43 kg taken without an allotment leave -43; three of them lay beyond the day's limit."""
        walks.noted(bay, MONDAY)
        assert left(bay) == -43_000
        pool = seasons.pool(commons_id=bay.commons_id, season="clams-2026")
        walks.final(bay, 1, TUESDAY)
        assert left(bay) == -46_000
        assert seasons.pool(commons_id=bay.commons_id, season="clams-2026") == pool + 3_000
        bay.act(1, walks.complete())
        bay.drains()
        assert left(bay) == -46_000

    def test_beyond_an_allotment_the_payback_clause_takes_it_instead(
        self, bay: scene.Scene
    ) -> None:
        bay.lands("1", line("mullet", "10"), member=5, day=MONDAY)
        bay.judges(MONDAY)
        bay.hears()
        assert bay.case(1).finding.finding.key.clause == "2.3"
        walks.final(bay, 1, TUESDAY)
        assert bay.case(1).effects == ()
        assert left(bay, season="mullet-2026") == -10_000


class TestSuspension:
    def test_the_household_is_ashore_for_fourteen_days_from_the_day_after(
        self, bay: scene.Scene
    ) -> None:
        final_on = climbed(bay, steps=3)
        ashore = DateRange(first=final_on + DAY, until=final_on + 15 * DAY)
        assert suspended(bay) == {5: [ashore], 6: [ashore]}

    def test_a_take_meanwhile_is_found_and_its_case_is_of_the_same_ladder(
        self, bay: scene.Scene
    ) -> None:
        final_on = climbed(bay, steps=3)
        case = walks.noted(bay, final_on + DAY, kilograms="1", member=6)
        found = bay.case(case).finding.finding
        assert (found.key.clause, found.key.subject) == ("ladder.overdraw", 6)
        assert (found.limit, found.breach) == (0, 1_000)
        assert bay.case(case).ladder == "ladder.overdraw"
        walks.told(bay, case, final_on + 2 * DAY)
        walks.decided(bay, case, final_on + 3 * DAY, member=6)
        assert measure(bay, case)[0] == "referral"

    def test_a_take_on_the_day_after_is_nothing(self, bay: scene.Scene) -> None:
        final_on = climbed(bay, steps=3)
        before = len(queries.cases(commons_id=bay.commons_id))
        assert walks.noted(bay, final_on + 15 * DAY, kilograms="1") == before


def withdraw(bay: scene.Scene, day: date, *, as_of: date) -> None:
    """Correct the slip of a day to 1 kg, judge, and let the cases hear."""
    (number,) = (
        each.number
        for each in journal.rows(commons_id=bay.commons_id, kinds=("withdrawal",))
        if each.day == day
    )
    bay.morning(as_of)
    bay.corrects(number, "again", line("clams", "1"), day=day)
    bay.judges(as_of)
    bay.hears()


class TestUndone:
    """A finding withdrawn after the decision became final takes back what it brought."""

    def test_fine_and_give_back_are_reversed(self, bay: scene.Scene) -> None:
        first_final = climbed(bay, steps=1)
        before = left(bay)
        case = walks.noted(bay, first_final + DAY, kilograms="45.5")
        final_on = walks.final(bay, case, first_final + 2 * DAY)
        assert owed(bay) == 1_050
        withdraw(bay, first_final + DAY, as_of=final_on + DAY)
        record = bay.case(case)
        assert record.so_far.state is State.CHECKING
        assert record.so_far.final_on is None
        assert record.effects == ()
        assert owed(bay) == 0
        # One kilo stands of what was landed on the second day.
        assert left(bay) == before - 1_000

    def test_what_was_paid_already_is_owed_to_the_member(self, bay: scene.Scene) -> None:
        first_final = climbed(bay, steps=1)
        case = walks.noted(bay, first_final + DAY, kilograms="45.5")
        final_on = walks.final(bay, case, first_final + 2 * DAY)
        with transaction.atomic():
            movements.pay_due(
                commons_id=bay.commons_id,
                member=5,
                kind=movements_queries.FINE,
                amount=1_050,
                hand=bay.hand,
            )
        withdraw(bay, first_final + DAY, as_of=final_on + DAY)
        assert owed(bay) == -1_050

    def test_a_suspension_ends_and_what_it_forbade_is_no_breach(self, bay: scene.Scene) -> None:
        """The loop closes: the case frees the member, which withdraws what the judge found."""
        final_on = climbed(bay, steps=3)
        third_act = bay.case(3).finding.finding.key.window.first
        ashore = walks.noted(bay, final_on + DAY, kilograms="1")
        withdraw(bay, third_act, as_of=final_on + 2 * DAY)
        assert suspended(bay) == {}
        bay.judges(final_on + 2 * DAY)
        bay.hears()
        record = bay.case(ashore)
        assert not record.finding.standing
        size = bay.size
        bay.judges(final_on + 2 * DAY)
        bay.hears()
        assert bay.size == size

    def test_after_the_close_the_amount_goes_to_the_next_season(self, bay: scene.Scene) -> None:
        """Judged as the season closes, heard after it: the closed accounts stay as they are."""
        late = date(2026, 6, 1)
        case = walks.noted(bay, late)
        walks.final(bay, case, late + DAY)
        (number,) = (
            each.number for each in journal.rows(commons_id=bay.commons_id, kinds=("withdrawal",))
        )
        bay.midnight(date(2026, 7, 12))
        bay.drains()
        bay.morning(date(2026, 7, 12), hour=20)
        bay.corrects(number, "again", line("clams", "10"), day=late)
        bay.midnight(date(2026, 7, 13))
        bay.drains()
        assert seasons.season(commons_id=bay.commons_id, code="clams-2026").closed
        assert bay.case(case).so_far.state is State.CHECKING
        # 10 kg were taken and 3 given back: 13 are owed, and the 3 come back beside them.
        assert left(bay) == 0
        assert seasons.carried(commons_id=bay.commons_id, resource="clams")[5] == -10_000

    def test_a_decision_made_anew_is_carried_out_anew(self, bay: scene.Scene) -> None:
        first_final = climbed(bay, steps=1)
        second_act = first_final + DAY
        case = walks.noted(bay, second_act, kilograms="45.5")
        final_on = walks.final(bay, case, second_act + DAY)
        bay.morning(final_on)
        bay.lands("more", line("clams", "1"), member=6, day=second_act)
        bay.judges(final_on)
        bay.hears()
        assert (bay.case(case).so_far.state, owed(bay)) == (State.CHECKING, 0)
        bay.act(case, walks.tell(final_on))
        walks.appeal_opened(bay, case, final_on + DAY)
        bay.midnight(final_on + 23 * DAY)
        bay.drains()
        # 46.5 kg: 4.5 beyond 42.
        assert owed(bay) == 1_350


class TestAppeal:
    def appealed(self, bay: scene.Scene) -> int:
        day = climbed(bay, steps=1) + DAY
        case = walks.noted(bay, day, kilograms="45.5")
        walks.told(bay, case, day + DAY)
        walks.appeal_opened(bay, case, day + 2 * DAY)
        bay.act(case, walks.appeal())
        return case

    def test_upheld_it_is_final_and_carried_out(self, bay: scene.Scene) -> None:
        case = self.appealed(bay)
        assert owed(bay) == 0
        bay.act(case, walks.judged_on_appeal(upheld=True))
        assert bay.case(case).so_far.state is State.FINAL
        assert owed(bay) == 1_050

    def test_overturned_it_leaves_nothing_and_does_not_count(self, bay: scene.Scene) -> None:
        case = self.appealed(bay)
        bay.act(case, walks.judged_on_appeal(upheld=False))
        assert bay.case(case).so_far.state is State.OVERTURNED
        assert bay.case(case).effects == ()
        assert owed(bay) == 0
        day = bay.clock.now.date() + DAY
        later = walks.noted(bay, day)
        walks.told(bay, later, day + DAY)
        walks.decided(bay, later, day + 2 * DAY)
        assert measure(bay, later)[0] == "fine"

    def test_an_appeal_rests_on_what_was_told(self, bay: scene.Scene) -> None:
        case = self.appealed(bay)
        act = bay.case(case).finding.finding.key.window.first
        bay.lands("more", line("clams", "1"), member=6, day=act)
        bay.judges(act)
        with pytest.raises(operations.FindingChanged):
            bay.act(case, walks.judged_on_appeal(upheld=True))
        bay.hears()
        assert bay.case(case).so_far.state is State.CHECKING


def test_days_between_act_notice_and_decision(bay: scene.Scene) -> None:
    case = walks.noted(bay, MONDAY)
    assert queries.days_between(bay.case(case)) == (None, None)
    walks.told(bay, case, date(2026, 3, 5))
    walks.decided(bay, case, date(2026, 3, 11))
    assert queries.days_between(bay.case(case)) == (3, 6)


def test_a_case_is_found_by_clause_subject_and_day(bay: scene.Scene) -> None:
    case = walks.noted(bay, MONDAY)
    found = queries.case_on(commons_id=bay.commons_id, clause="3.2", subject=5, first=MONDAY)
    assert found.number == case
    with pytest.raises(queries.UnknownCase):
        queries.case_on(commons_id=bay.commons_id, clause="3.2", subject=7, first=MONDAY)


def test_open_cases_and_those_of_one_ladder(bay: scene.Scene) -> None:
    first, second = walks.noted(bay, MONDAY), walks.noted(bay, TUESDAY, member=7)
    walks.final(bay, first, TUESDAY)
    bay.act(first, walks.complete())

    def numbers(*, ladder: str | None = None, is_open: bool | None = None) -> list[int]:
        return [
            each.number
            for each in queries.cases(commons_id=bay.commons_id, ladder=ladder, is_open=is_open)
        ]

    assert numbers(is_open=True) == [second]
    assert numbers(is_open=False) == [first]
    assert numbers(ladder="ladder.overdraw") == [first, second]
    assert numbers(ladder="ladder.closure") == []


def test_the_finding_behind_a_case_keeps_every_version(bay: scene.Scene) -> None:
    walks.noted(bay, MONDAY)
    withdraw(bay, MONDAY, as_of=TUESDAY)
    told_of = judgement.finding(commons_id=bay.commons_id, number=1, version=1)
    assert told_of.standing and told_of.finding.total == 43_000
