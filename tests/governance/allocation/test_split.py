"""The allowable becomes a reserve and allotments, to the last unit."""

from datetime import date
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from governance.allocation import apportionment, split
from governance.bylaws import clauses
from tests.governance.allocation import people

DAY = date(2026, 3, 1)


def of(allowable: int, clause: clauses.Allocation) -> split.Split:
    return split.split_allowable(clause=clause, roster=people.ROSTER, day=DAY, allowable=allowable)


def test_by_hand() -> None:
    """2 % of 1,049 is 20.98, so 20 stay; 1,029 by shares 2 : 1 1/2 is exactly 588 and 441."""
    found = of(1_049, people.allocation(reserve=Fraction(2, 100)))
    assert found.reserve == 20
    assert dict(found.parts) == {1: 588, 2: 441, 43: 0}


def test_working_names_method_basis_and_tie_break() -> None:
    found = of(1_049, people.allocation(reserve=Fraction(2, 100)))
    assert found.working == (
        "reserve: 2 % of 1,049, rounded down, is 20",
        "allotted: 1,049 - 20 = 1,029, among 3 members by shares, rounded by largest remainder;"
        " equal claims go to the lower holder number",
    )


@pytest.mark.parametrize(
    ("rounding", "expected"),
    [
        (clauses.Apportionment.LARGEST_REMAINDER, {1: 3, 2: 3, 43: 0}),
        (clauses.Apportionment.WEBSTER, {1: 3, 2: 3, 43: 0}),
        (clauses.Apportionment.JEFFERSON, {1: 4, 2: 2, 43: 0}),
    ],
)
def test_the_clause_chooses_the_rounding(
    rounding: clauses.Apportionment, expected: dict[int, int]
) -> None:
    """Six by 4 : 3. Quotas 3.43 and 2.57. Webster ends with 3/5, before 4/7. Jefferson ends with
    4/4 against 3/3, a tie that goes to member 1."""
    assert dict(of(6, people.allocation(rounding=rounding)).parts) == expected


def test_nobody_in_the_class_is_refused() -> None:
    with pytest.raises(apportionment.NobodyToHold):
        of(10, people.allocation(who="guest"))


@pytest.mark.parametrize("reserve", [Fraction(0), Fraction(2, 100), Fraction(1)])
def test_less_than_nothing_is_refused_whatever_the_reserve(reserve: Fraction) -> None:
    with pytest.raises(apportionment.NegativeTotal, match="total of -1;"):
        of(-1, people.allocation(reserve=reserve))


def test_a_full_reserve_needs_nobody() -> None:
    found = of(10, people.allocation(who="guest", reserve=Fraction(1)))
    assert (found.reserve, dict(found.parts)) == (10, {})


@settings(max_examples=50, deadline=None)
@given(
    allowable=st.integers(0, 10**12),
    reserve=st.fractions(0, 1, max_denominator=1000),
    rounding=st.sampled_from(clauses.Apportionment),
    basis=st.sampled_from(clauses.Basis),
)
def test_reserve_and_parts_sum_to_the_allowable(
    allowable: int,
    reserve: Fraction,
    rounding: clauses.Apportionment,
    basis: clauses.Basis,
) -> None:
    found = of(allowable, people.allocation(reserve=reserve, rounding=rounding, basis=basis))
    assert found.reserve + sum(found.parts.values()) == allowable
    assert found.reserve <= allowable * reserve < found.reserve + 1
