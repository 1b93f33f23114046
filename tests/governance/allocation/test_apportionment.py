"""Parts in whole units that sum to the total, by three methods."""

from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from governance.allocation import apportionment
from governance.bylaws.clauses import Apportionment

LARGEST_REMAINDER = Apportionment.LARGEST_REMAINDER
WEBSTER = Apportionment.WEBSTER
JEFFERSON = Apportionment.JEFFERSON


def parts(total: int, weights: tuple[int, ...], how: Apportionment) -> tuple[int, ...]:
    numbered = [(number, Fraction(weight)) for number, weight in enumerate(weights, start=1)]
    return tuple(apportionment.apportion(total=total, weights=numbered, how=how).values())


class TestPublished:
    @pytest.mark.parametrize(
        ("how", "expected"),
        [(LARGEST_REMAINDER, (5, 4, 1)), (WEBSTER, (5, 4, 1)), (JEFFERSON, (6, 4, 0))],
    )
    def test_three_roundings_side_by_side(
        self, how: Apportionment, expected: tuple[int, ...]
    ) -> None:
        """Worked solutions on staatsrecht.honikel.de, 10 seats."""
        assert parts(10, (6100, 5000, 900), how) == expected

    @pytest.mark.parametrize(("house", "expected"), [(49, (2, 3, 44)), (51, (1, 4, 46))])
    def test_alabama_paradox(self, house: int, expected: tuple[int, ...]) -> None:
        """The net.math note of March 1982, citing Saari 1978, Am. Math. Monthly."""
        assert parts(house, (3, 7, 90), LARGEST_REMAINDER) == expected

    def test_exact_tie_between_remainders_goes_to_the_lower_number(self) -> None:
        """The shares of Saari 1978 at 50 leave 1.5 against 3.5; the tie-break is our clause's."""
        assert parts(50, (3, 7, 90), LARGEST_REMAINDER) == (2, 3, 45)

    @pytest.mark.parametrize(
        ("house", "expected"), [(49, (1, 3, 45)), (50, (2, 3, 45)), (51, (2, 4, 45))]
    )
    def test_webster_shows_no_paradox(self, house: int, expected: tuple[int, ...]) -> None:
        """Balinski & Young 1982, computed; at 50 the tie is 3/1.5 against 7/3.5."""
        assert parts(house, (3, 7, 90), WEBSTER) == expected

    @pytest.mark.parametrize(("seats", "expected"), [(10, (4, 4, 2)), (11, (5, 5, 1))])
    def test_small_paradox(self, seats: int, expected: tuple[int, ...]) -> None:
        """Widely used textbook case, from memory; recomputed."""
        assert parts(seats, (6, 6, 2), LARGEST_REMAINDER) == expected


class TestRefusals:
    def test_negative_total(self) -> None:
        with pytest.raises(apportionment.NegativeTotal, match="total of -1; accepted is 0 or more"):
            parts(-1, (1, 2), LARGEST_REMAINDER)

    def test_nobody_with_a_weight(self) -> None:
        with pytest.raises(apportionment.NobodyToHold, match="so 5 cannot be split"):
            parts(5, (0, 0), WEBSTER)

    def test_nobody_at_all(self) -> None:
        with pytest.raises(apportionment.NobodyToHold):
            apportionment.apportion(total=1, weights=(), how=JEFFERSON)

    def test_negative_weight(self) -> None:
        with pytest.raises(apportionment.NegativeWeight, match="Holder 2 has the weight -1"):
            parts(5, (3, -1), LARGEST_REMAINDER)

    def test_a_holder_twice(self) -> None:
        twice = [(7, Fraction(1)), (8, Fraction(1)), (7, Fraction(2))]
        with pytest.raises(apportionment.DuplicateHolder, match="Holder 7 stands more than once"):
            apportionment.apportion(total=5, weights=twice, how=LARGEST_REMAINDER)

    def test_nothing_to_split_needs_nobody(self) -> None:
        assert apportionment.apportion(total=0, weights=(), how=WEBSTER) == {}
        assert parts(0, (0, 0), WEBSTER) == (0, 0)


def seat_by_seat(
    total: int, weights: list[tuple[int, Fraction]], divisors: tuple[int, int]
) -> dict[int, int]:
    """Give one unit after the other to the largest weight / divisor, as the books describe it."""
    first, rise = divisors
    given_so_far = {number: 0 for number, _ in sorted(weights)}
    for _ in range(total):
        best = max(
            (weight / (first + rise * given_so_far[number]), -number)
            for number, weight in weights
            if weight > 0
        )
        given_so_far[-best[1]] += 1
    return given_so_far


WEIGHTS = st.dictionaries(
    st.integers(1, 60),
    st.fractions(min_value=0, max_value=40, max_denominator=6),
    min_size=1,
    max_size=8,
).map(lambda held: sorted(held.items()))


class TestDivisorMethodsAgainstSeatBySeat:
    @settings(max_examples=150, deadline=None)
    @given(
        total=st.integers(0, 60),
        weights=WEIGHTS.filter(lambda held: any(weight for _, weight in held)),
    )
    def test_same_parts(self, total: int, weights: list[tuple[int, Fraction]]) -> None:
        for how, divisors in ((WEBSTER, (1, 2)), (JEFFERSON, (1, 1))):
            found = apportionment.apportion(total=total, weights=weights, how=how)
            assert found == seat_by_seat(total, weights, divisors), how
