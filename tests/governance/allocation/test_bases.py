"""Weights by shares or one each, among those whom a clause speaks of on a day."""

from datetime import date
from fractions import Fraction

import pytest

from governance.allocation import bases
from governance.bylaws.clauses import Basis
from tests.governance.allocation import people

DAY = date(2026, 3, 1)

# Member 1 holds 2 shares and 1/2 more from the middle of the season, member 2 holds 1 1/2,
# member 41 is retired and holds none, member 43 is licensed and holds none.
BY_HAND = {
    Basis.SHARES: ((1, Fraction(2)), (2, Fraction(3, 2)), (43, Fraction(0))),
    Basis.EQUAL: ((1, Fraction(1)), (2, Fraction(1)), (43, Fraction(1))),
}


def test_every_basis_has_its_case() -> None:
    assert set(BY_HAND) == set(Basis)


@pytest.mark.parametrize("basis", list(Basis))
def test_the_class_of_the_clause(basis: Basis) -> None:
    clause = people.allocation(basis=basis, who="licensed")
    assert bases.weights(clause=clause, roster=people.ROSTER, day=DAY) == BY_HAND[basis]


def test_a_clause_for_everybody() -> None:
    clause = people.allocation(basis=Basis.EQUAL, who=None)
    found = bases.weights(clause=clause, roster=people.ROSTER, day=DAY)
    assert [number for number, _ in found] == [1, 2, 41, 43]


@pytest.mark.parametrize(
    ("day", "share"),
    [(date(2026, 4, 30), Fraction(2)), (date(2026, 5, 1), Fraction(5, 2))],
)
def test_shares_are_those_of_the_day(day: date, share: Fraction) -> None:
    clause = people.allocation(basis=Basis.SHARES, who="licensed")
    assert dict(bases.weights(clause=clause, roster=people.ROSTER, day=day))[1] == share


@pytest.mark.parametrize(("day", "there"), [(date(2026, 6, 30), True), (date(2026, 7, 1), False)])
def test_classes_are_those_of_the_day(day: date, there: bool) -> None:
    """Member 2's licence ends with June."""
    clause = people.allocation(basis=Basis.SHARES, who="licensed")
    assert (2 in dict(bases.weights(clause=clause, roster=people.ROSTER, day=day))) is there
