"""What holds for every way of apportioning; a new way without a case here fails."""

from fractions import Fraction

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from governance.allocation import apportionment
from governance.bylaws.clauses import Apportionment

# Nine units among weights 1, 4 and 10, by hand. Quotas 0.6, 2.4, 6.0: one unit is left for the
# largest remainder, 0.6. Webster's nine largest quotients end with 1/1 and 10/11, before 4/5;
# Jefferson's with 10/6 and 10/7, before 4/3.
BY_HAND = {
    Apportionment.LARGEST_REMAINDER: (1, 2, 6),
    Apportionment.WEBSTER: (1, 2, 6),
    Apportionment.JEFFERSON: (0, 2, 7),
}

every_way = pytest.mark.parametrize("how", list(Apportionment))

HELD = st.dictionaries(
    st.integers(1, 10_000),
    st.fractions(min_value=0, max_value=1_000, max_denominator=50),
    min_size=1,
    max_size=20,
).filter(lambda held: any(held.values()))
TOTALS = st.integers(0, 10**13)


def split(total: int, held: dict[int, Fraction], how: Apportionment) -> dict[int, int]:
    return apportionment.apportion(total=total, weights=tuple(held.items()), how=how)


def test_every_way_has_its_case() -> None:
    assert set(BY_HAND) == set(Apportionment)


@every_way
def test_case_by_hand(how: Apportionment) -> None:
    held = {1: Fraction(1), 2: Fraction(4), 3: Fraction(10)}
    assert tuple(split(9, held, how).values()) == BY_HAND[how]


@every_way
def test_equal_claims_go_to_the_lower_number(how: Apportionment) -> None:
    held = {30: Fraction(1), 9: Fraction(1), 4: Fraction(1)}
    assert split(5, held, how) == {4: 2, 9: 2, 30: 1}


@every_way
def test_a_large_total_among_many(how: Apportionment) -> None:
    """Unit by unit this would not end: 10^15 units, 10,000 holders of 1 to 4 shares."""
    held = {number: Fraction(number % 7 + 2, 2) for number in range(1, 10_001)}
    found = split(10**15, held, how)
    assert sum(found.values()) == 10**15
    exact = 10**15 * held[1] / sum(held.values())
    assert abs(found[1] - exact) < 1


@every_way
@settings(max_examples=40, deadline=None)
@given(total=TOTALS, held=HELD)
def test_parts_sum_to_the_total_and_no_weight_gets_nothing(
    how: Apportionment, total: int, held: dict[int, Fraction]
) -> None:
    found = split(total, held, how)
    assert sum(found.values()) == total
    assert set(found) == set(held)
    assert all(part >= 0 for part in found.values())
    assert all(found[number] == 0 for number, weight in held.items() if weight == 0)


@every_way
@settings(max_examples=25, deadline=None)
@given(total=TOTALS, held=HELD, data=st.data())
def test_the_order_of_the_weights_is_irrelevant(
    how: Apportionment, total: int, held: dict[int, Fraction], data: st.DataObject
) -> None:
    shuffled = dict(data.draw(st.permutations(list(held.items()))))
    found, again = split(total, held, how), split(total, shuffled, how)
    assert list(found.items()) == list(again.items())
    assert list(found) == sorted(held)


@every_way
@settings(max_examples=40, deadline=None)
@given(total=st.integers(0, 200), held=HELD, more=st.fractions(0, 50, max_denominator=9))
def test_more_weight_never_gets_less_of_the_same_total(
    how: Apportionment, total: int, held: dict[int, Fraction], more: Fraction
) -> None:
    number = min(held)
    raised = held | {number: held[number] + more}
    assert split(total, raised, how)[number] >= split(total, held, how)[number]


@every_way
@settings(max_examples=25, deadline=None)
@given(total=TOTALS, held=HELD, factor=st.fractions("1/9", 9, max_denominator=9))
def test_only_the_proportions_count(
    how: Apportionment, total: int, held: dict[int, Fraction], factor: Fraction
) -> None:
    scaled = {number: weight * factor for number, weight in held.items()}
    assert split(total, scaled, how) == split(total, held, how)


@settings(max_examples=40, deadline=None)
@given(total=TOTALS, held=HELD)
def test_largest_remainder_stays_within_one_of_the_quota(
    total: int, held: dict[int, Fraction]
) -> None:
    weight_sum = sum(held.values())
    for number, part in split(total, held, Apportionment.LARGEST_REMAINDER).items():
        assert abs(part - total * held[number] / weight_sum) < 1


@pytest.mark.parametrize("how", [Apportionment.WEBSTER, Apportionment.JEFFERSON])
@settings(max_examples=40, deadline=None)
@given(total=st.integers(0, 200), held=HELD)
def test_divisor_methods_take_from_nobody_as_the_total_grows(
    how: Apportionment, total: int, held: dict[int, Fraction]
) -> None:
    """Balinski & Young 1982: no divisor method shows the Alabama paradox."""
    assume(len(held) > 1)
    fewer, more = split(total, held, how), split(total + 1, held, how)
    assert all(more[number] >= fewer[number] for number in held)
