"""Thirty candidates: round ones, nought, and the ones that matter."""

import itertools

import pytest
from hypothesis import given
from hypothesis import strategies as st

from governance.advice import candidates

AMOUNTS = st.integers(min_value=0, max_value=10**12)


@given(proposed=AMOUNTS, present=AMOUNTS, unit_size=st.sampled_from([1, 1_000, 1_000_000]))
def test_thirty_that_hold_the_named_and_nought(proposed: int, present: int, unit_size: int) -> None:
    found = candidates.spread(named=(proposed, present), unit_size=unit_size)
    assert len(found) == len(set(found)) == 30
    assert list(found) == sorted(found)
    assert {0, proposed, present} <= set(found)
    assert found[-1] >= 1.5 * max(proposed, present)
    round_ones = sorted(set(found) - {proposed, present} | {0})
    assert all(each % unit_size == 0 for each in round_ones)


@given(proposed=AMOUNTS, present=AMOUNTS)
def test_the_round_ones_stand_at_equal_steps(proposed: int, present: int) -> None:
    found = candidates.spread(named=(proposed, present), unit_size=1_000)
    round_ones = sorted(set(found) - {proposed, present} | {0})
    steps = [after - before for before, after in itertools.pairwise(round_ones)]
    step = min(steps)
    # A named one may stand in the place of a round one.
    assert all(each % step == 0 for each in steps)


def test_tarrin_bay() -> None:
    """27 steps of 5,000 kg reach half again as far as 72,264.27 kg."""
    found = candidates.spread(named=(72_264_270, 68_000_000), unit_size=1_000)
    round_ones = [each for each in found if each not in (72_264_270, 68_000_000)]
    assert round_ones == [each * 5_000_000 for each in range(28)]


@pytest.mark.parametrize("named", [(0, 0), (5, 5), (0, 7)])
def test_few_that_are_named(named: tuple[int, int]) -> None:
    assert len(candidates.spread(named=named, unit_size=1)) == 30


def test_a_reading_unit_finer_than_what_is_counted() -> None:
    found = candidates.spread(named=(500, 400), unit_size=0)
    assert len(found) == 30
    assert found[-1] >= 750


def test_labels() -> None:
    def labels(*, proposed: int, present: int) -> list[str]:
        amounts = (0, 5, 7, 9)
        return [candidates.label(each, proposed=proposed, present=present) for each in amounts]

    assert labels(proposed=7, present=5) == ["none", "as now", "proposed", ""]
    assert labels(proposed=7, present=0) == ["none", "", "proposed", ""]
    assert labels(proposed=0, present=5) == ["proposed", "as now", "", ""]
    assert labels(proposed=5, present=5) == ["none", "proposed", "", ""]
