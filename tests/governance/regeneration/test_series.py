"""A series is refused for what no fit could mend."""

import math

import pytest

from governance.regeneration import series

GOOD_CATCHES = (10.0, 12.0, 9.0, 8.0, 7.0, 6.0)
GOOD_INDEX = (5.0, 4.0, 3.5, 3.0, 2.5, 2.0)


def built(
    *,
    years: tuple[int, ...] = tuple(range(2000, 2006)),
    catches: tuple[float, ...] = GOOD_CATCHES,
    index: tuple[float | None, ...] = GOOD_INDEX,
) -> series.Series:
    return series.Series(years=years, catches=catches, index=index)


def test_contrast_is_highest_over_lowest() -> None:
    assert built().contrast == 2.5


def test_a_year_without_an_index_is_left_out() -> None:
    held = built(index=(5.0, math.nan, 3.5, 3.0, 2.5, 2.0))
    assert held.index == (5.0, None, 3.5, 3.0, 2.5, 2.0)
    assert held == built(index=(5.0, None, 3.5, 3.0, 2.5, 2.0))
    assert held.rows().tolist() == [0, 2, 3, 4, 5]
    assert held.log_index().tolist() == pytest.approx([math.log(x) for x in (5, 3.5, 3, 2.5, 2)])


@pytest.mark.parametrize(
    "years", [(2000, 2001, 2002, 2003, 2005, 2006), (2005, 2004, 2003, 2002, 2001, 2000), (2000,)]
)
def test_years_stand_in_turn(years: tuple[int, ...]) -> None:
    with pytest.raises(series.BrokenYears):
        built(years=years)


@pytest.mark.parametrize("caught", [-1.0, math.nan, math.inf])
def test_impossible_catch(caught: float) -> None:
    with pytest.raises(series.ImpossibleCatch) as refused:
        built(catches=(*GOOD_CATCHES[:-1], caught))
    assert refused.value.facts["year"] == 2005


@pytest.mark.parametrize("seen", [0.0, -2.0, math.inf])
def test_non_positive_index(seen: float) -> None:
    with pytest.raises(series.NonPositiveIndex) as refused:
        built(index=(seen, *GOOD_INDEX[1:]))
    assert refused.value.facts["year"] == 2000


def test_five_index_years_are_enough_and_four_are_not() -> None:
    built(index=(5.0, 4.0, None, 3.0, 2.5, 2.0))
    with pytest.raises(series.TooFewYears):
        built(index=(5.0, 4.0, None, None, 2.5, 2.0))


def test_no_year_at_all() -> None:
    with pytest.raises(series.TooFewYears):
        built(years=(), catches=(), index=())


def test_no_contrast() -> None:
    with pytest.raises(series.NoContrast):
        built(catches=(0.0,) * 6)
    with pytest.raises(series.NoContrast):
        built(index=(3.0,) * 6)
