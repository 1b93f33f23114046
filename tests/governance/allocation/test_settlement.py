"""A member's season closes: carried over, to the pool, owed."""

from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from governance.allocation import settlement
from governance.bylaws import clauses
from tests.governance.allocation import people


def carry_over(at_most: str | Fraction) -> clauses.CarryOver:
    return clauses.CarryOver(head=people.head("7.1"), resource="mullet", at_most=Fraction(at_most))


def payback(factor: str | Fraction) -> clauses.Payback:
    return clauses.Payback(head=people.head("7.3"), resource="mullet", factor=Fraction(factor))


TENTH = carry_over("1/10")
ONCE = payback("1")


def figures(found: settlement.Settlement) -> tuple[int, int, int]:
    return found.carried, found.unclaimed, found.owed


class TestLeft:
    def test_a_published_cap(self) -> None:
        """Regulation (EC) 847/96 Art. 4(2): of 180 unused at most 10 % of 1,000 moves."""
        found = settlement.settle(carry_over=TENTH, payback=ONCE, allotted=1_000, taken=820)
        assert figures(found) == (100, 80, 0)

    @pytest.mark.parametrize(
        ("taken", "expected"),
        [
            (899, (100, 1, 0)),  # one more left than the cap
            (900, (100, 0, 0)),  # exactly the cap
            (901, (99, 0, 0)),
            (1_000, (0, 0, 0)),
        ],
    )
    def test_borders(self, taken: int, expected: tuple[int, int, int]) -> None:
        found = settlement.settle(carry_over=TENTH, payback=ONCE, allotted=1_000, taken=taken)
        assert figures(found) == expected

    def test_the_cap_rounds_down(self) -> None:
        """10 % of 1,009 is 100.9."""
        found = settlement.settle(carry_over=TENTH, payback=None, allotted=1_009, taken=0)
        assert figures(found) == (100, 909, 0)

    def test_without_a_clause_all_of_it_goes_to_the_pool(self) -> None:
        found = settlement.settle(carry_over=None, payback=ONCE, allotted=1_000, taken=820)
        assert figures(found) == (0, 180, 0)

    def test_working(self) -> None:
        found = settlement.settle(carry_over=TENTH, payback=ONCE, allotted=1_000, taken=820)
        assert found.working == (
            "left: 1,000 - 820 = 180",
            "clause 7.1: at most 10 % of 1,000, rounded down, is 100; carried over 100",
            "to the pool: 180 - 100 = 80",
        )


class TestOveruse:
    def test_taken_beyond_by_one(self) -> None:
        found = settlement.settle(carry_over=TENTH, payback=ONCE, allotted=1_000, taken=1_001)
        assert figures(found) == (0, 0, 1)

    @pytest.mark.parametrize(("over", "owed"), [(5, 6), (10, 11), (15, 17), (14, 15)])
    def test_the_factor_rounds_half_up_once(self, over: int, owed: int) -> None:
        """1.1 × 5 = 5.5, × 10 = 11, × 15 = 16.5, × 14 = 15.4."""
        found = settlement.settle(
            carry_over=None, payback=payback("11/10"), allotted=100, taken=100 + over
        )
        assert figures(found) == (0, 0, owed)

    def test_without_a_clause_nothing_is_owed(self) -> None:
        found = settlement.settle(carry_over=TENTH, payback=None, allotted=100, taken=130)
        assert figures(found) == (0, 0, 0)
        assert found.working == (
            "overuse: 130 - 100 = 30",
            "no clause has overuse given back",
        )

    def test_a_debt_from_before_stays_as_it_is(self) -> None:
        """40 owed from before and 10 taken without any allotment, times 2: 40 + 20."""
        found = settlement.settle(carry_over=TENTH, payback=payback("2"), allotted=-40, taken=10)
        assert figures(found) == (0, 0, 60)
        assert found.working == (
            "overuse: 10 - 0 = 10",
            "clause 7.3: 10 × 2, rounded half up, is 20",
            "still owed from before: 40; owed in all: 60",
        )


AMOUNTS = st.integers(0, 10**12)


class TestConservation:
    @settings(max_examples=80, deadline=None)
    @given(
        allotted=AMOUNTS, taken=AMOUNTS, at_most=st.none() | st.fractions(0, 1, max_denominator=99)
    )
    def test_what_is_left_is_carried_or_unclaimed(
        self, allotted: int, taken: int, at_most: Fraction | None
    ) -> None:
        clause = None if at_most is None else carry_over(at_most)
        found = settlement.settle(carry_over=clause, payback=ONCE, allotted=allotted, taken=taken)
        if taken <= allotted:
            assert allotted == taken + found.carried + found.unclaimed
            assert found.owed == 0
            assert 0 <= found.carried <= allotted * (at_most or 0)
            assert found.unclaimed >= 0
        else:
            assert (found.carried, found.unclaimed) == (0, 0)
            assert found.owed > 0

    @settings(max_examples=50, deadline=None)
    @given(allotted=st.integers(-(10**12), 10**12), taken=AMOUNTS)
    def test_at_factor_one_nothing_arises_or_vanishes(self, allotted: int, taken: int) -> None:
        found = settlement.settle(carry_over=TENTH, payback=ONCE, allotted=allotted, taken=taken)
        assert allotted - taken == found.carried + found.unclaimed - found.owed
