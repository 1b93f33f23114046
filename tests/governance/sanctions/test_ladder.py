"""Which step, and how much."""

import itertools
from datetime import date, timedelta

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from governance.bylaws import clauses
from governance.periods import OPEN_END, DateRange
from governance.quantities import Money, Price, UnitMismatch
from governance.sanctions import ladder
from governance.sanctions.ladder import EarlierAct

ACT = date(2028, 6, 1)
DECIDED = date(2028, 7, 1)

PER_KILO = clauses.Fine(
    flat=None, per_excess=Price.parse("3 EUR/kg"), at_most=Money.parse("200 EUR")
)
STEPS: tuple[clauses.Step, ...] = (
    clauses.Warning(),
    PER_KILO,
    clauses.Suspension(days=14),
    clauses.Referral(body="assembly"),
)
OVERDRAW = clauses.SanctionLadder(
    head=clauses.Head(
        id="ladder.overdraw",
        title="Taking too much",
        text="A warning first, then a fine, then a pause, then the assembly.",
        in_force=DateRange(first=date(2026, 3, 1), until=OPEN_END),
        who=None,
        or_else=None,
    ),
    window_days=730,
    restore=True,
    steps=STEPS,
)


def before(days: int) -> date:
    return ACT - timedelta(days=days)


def earlier(case: int, *, days: int, told: int | None = 10, final: int | None = 40) -> EarlierAct:
    """Return an act so many days before; told and final so many days after it."""
    acted = before(days)
    return EarlierAct(
        case=case,
        act_on=acted,
        told_on=None if told is None else acted + timedelta(days=told),
        final_on=None if final is None else acted + timedelta(days=final),
    )


def due(*acts: EarlierAct, decided_on: date = DECIDED) -> ladder.StepDue:
    return ladder.step_for(ladder=OVERDRAW, act_on=ACT, earlier=acts, decided_on=decided_on)


class TestStep:
    def test_a_first_act_comes_to_the_first_step(self) -> None:
        found = due()
        assert (found.index, found.step, found.counted) == (0, clauses.Warning(), ())
        assert found.working == ("0 counted within 730 days: step 1 of 4",)

    @pytest.mark.parametrize(("days", "index"), [(729, 1), (730, 1), (731, 0)])
    def test_the_window_counts_days_back_from_the_act(self, days: int, index: int) -> None:
        assert due(earlier(3, days=days)).index == index

    @pytest.mark.parametrize(("told_after", "index"), [(99, 1), (100, 0), (101, 0), (None, 0)])
    def test_only_what_was_told_before_the_act(self, told_after: int | None, index: int) -> None:
        assert due(earlier(3, days=100, told=told_after, final=105)).index == index

    @pytest.mark.parametrize(("final_after", "index"), [(130, 1), (131, 0), (None, 0)])
    def test_only_what_is_final_at_the_decision(self, final_after: int | None, index: int) -> None:
        """100 days before the act and 30 days from the act to the decision."""
        assert due(earlier(3, days=100, final=final_after)).index == index

    def test_a_later_act_does_not_count(self) -> None:
        assert due(earlier(3, days=-1, told=0, final=1)).index == 0

    def test_the_last_step_is_the_last(self) -> None:
        acts = [earlier(number, days=700 - 60 * number) for number in range(6)]
        found = due(*acts)
        assert (found.index, found.step) == (3, clauses.Referral(body="assembly"))
        assert found.counted == (0, 1, 2, 3, 4, 5)

    def test_acts_before_the_first_telling_count_once(self) -> None:
        """Three acts within a week, told together on the tenth day, then one more."""
        found = due(
            earlier(1, days=300, told=10),
            earlier(2, days=297, told=7),
            earlier(3, days=294, told=4),
            earlier(4, days=200),
        )
        assert found.counted == (1, 4)
        assert found.index == 2

    @pytest.mark.parametrize(("told_after", "counted"), [(9, (1, 2)), (10, (1,))])
    def test_an_act_on_the_day_of_the_telling_is_not_after_it(
        self, told_after: int, counted: tuple[int, ...]
    ) -> None:
        found = due(earlier(1, days=300, told=told_after), earlier(2, days=290, told=10))
        assert found.counted == counted

    def test_a_late_telling_does_not_swallow_two_prompt_ones(self) -> None:
        """Case 1 was told after 100 days; meanwhile cases 2 and 3 were acted and told in turn."""
        found = due(
            earlier(1, days=300, told=100, final=120),
            earlier(2, days=290, told=5),
            earlier(3, days=280, told=5),
        )
        assert (found.counted, found.index) == ((2, 3), 2)

    def test_working_says_of_each_why(self) -> None:
        found = due(
            earlier(1, days=800),
            earlier(2, days=300),
            earlier(3, days=295, told=8),
            earlier(4, days=50, told=None, final=None),
            earlier(5, days=40, final=None),
        )
        assert found.working == (
            "case 1 does not count: its act of 2026-03-24 lies 800 days back",
            "case 4 does not count: nobody was told of it before 2028-06-01",
            "case 5 does not count: it was not final on 2028-07-01",
            "case 2 counts: its act of 2027-08-06 lies 300 days back and was told on 2027-08-16",
            "case 3 counts together with case 2: its act of 2027-08-11 was not after the telling"
            " of 2027-08-16",
            "1 counted within 730 days: step 2 of 4",
        )


ACTS = st.lists(
    st.builds(
        lambda days, told, final: (days, told, final),
        st.integers(-5, 760),
        st.none() | st.integers(0, 60),
        st.none() | st.integers(0, 300),
    ),
    max_size=8,
).map(
    lambda rows: [
        earlier(number, days=days, told=told, final=final)
        for number, (days, told, final) in enumerate(rows)
    ]
)


class TestProperties:
    @settings(max_examples=120, deadline=None)
    @given(acts=ACTS, data=st.data())
    def test_more_earlier_acts_never_come_to_a_lower_step(
        self, acts: list[EarlierAct], data: st.DataObject
    ) -> None:
        fewer = data.draw(st.lists(st.sampled_from(acts), unique=True)) if acts else []
        assert due(*fewer).index <= due(*acts).index

    @settings(max_examples=60, deadline=None)
    @given(acts=ACTS, data=st.data())
    def test_the_order_of_the_earlier_acts_is_irrelevant(
        self, acts: list[EarlierAct], data: st.DataObject
    ) -> None:
        assert due(*data.draw(st.permutations(acts))) == due(*acts)

    @settings(max_examples=60, deadline=None)
    @given(acts=ACTS)
    def test_between_two_that_count_stands_a_telling(self, acts: list[EarlierAct]) -> None:
        by_case = {each.case: each for each in acts}
        counted = [by_case[case] for case in due(*acts).counted]
        for first, second in itertools.pairwise(counted):
            assert first.told_on is not None
            assert first.told_on < second.act_on


class TestAmount:
    @pytest.mark.parametrize(
        ("breach_g", "cents"),
        [
            (0, 0),
            (1_000, 300),
            (1_500, 450),
            (66_666, 20_000),  # 199.998 EUR rounds to 200.00
            (66_667, 20_000),  # 200.001 EUR: the cap
            (500_000, 20_000),
        ],
    )
    def test_a_fine_for_each_kilo_up_to_its_cap(self, breach_g: int, cents: int) -> None:
        assert ladder.amount_due(step=PER_KILO, breach=breach_g, base="g") == cents

    @pytest.mark.parametrize(("breach_g", "cents"), [(4, 1), (5, 2), (6, 2)])
    def test_half_a_cent_rounds_up(self, breach_g: int, cents: int) -> None:
        """0.3 cents a gram: 1.2, 1.5 and 1.8 cents."""
        assert ladder.amount_due(step=PER_KILO, breach=breach_g, base="g") == cents

    def test_without_a_cap(self) -> None:
        fine = clauses.Fine(flat=None, per_excess=Price.parse("5 EUR/kg"), at_most=None)
        assert ladder.amount_due(step=fine, breach=500_000, base="g") == 250_000

    def test_a_flat_fine(self) -> None:
        fine = clauses.Fine(flat=Money.parse("10 EUR"), per_excess=None, at_most=None)
        assert ladder.amount_due(step=fine, breach=999_999, base="min") == 1_000

    @pytest.mark.parametrize("step", [STEPS[0], STEPS[2], STEPS[3]])
    def test_other_steps_cost_nothing(self, step: clauses.Step) -> None:
        assert ladder.amount_due(step=step, breach=50_000, base="g") == 0

    def test_a_fine_by_weight_has_no_meaning_for_work(self) -> None:
        with pytest.raises(UnitMismatch):
            ladder.amount_due(step=PER_KILO, breach=60, base="min")

    @settings(max_examples=50, deadline=None)
    @given(breach=st.integers(0, 10**9), more=st.integers(0, 10**6))
    def test_a_larger_breach_never_costs_less(self, breach: int, more: int) -> None:
        less = ladder.amount_due(step=PER_KILO, breach=breach, base="g")
        assert less <= ladder.amount_due(step=PER_KILO, breach=breach + more, base="g") <= 20_000


def test_every_kind_of_step_is_covered() -> None:
    assert {type(step) for step in STEPS} == set(clauses.Step.__args__)
