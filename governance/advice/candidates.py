"""The candidate allowables that a risk table compares: round numbers, and the ones that matter."""

import math

COUNT = 30


def spread(*, named: tuple[int, ...], unit_size: int) -> tuple[int, ...]:
    """Return 30 candidates in base units: the named ones among round ones from nought upward.

    The round ones reach half again as far as the largest named one.

    :param unit_size: the base units in one unit for reading; steps are round in that unit, or in
        base units where it is finer than those.
    """
    unit_size = max(1, unit_size)
    wanted = COUNT - len(set(named) - {0})
    top = max(*named, unit_size * wanted)
    step = _round_step(math.ceil(1.5 * top / unit_size / (wanted - 1)))
    round_ones = [place * step * unit_size for place in range(2 * COUNT)]
    kept = [each for each in round_ones if each not in named or each == 0][:wanted]
    return tuple(sorted({*kept, *named}))


def label(amount: int, *, proposed: int, present: int) -> str:
    """Return what a candidate is, in a word; empty for one that is only round.

    :param present: nought where no allowable is in force, so that nothing is as now.
    """
    if amount == proposed:
        return "proposed"
    if amount == 0:
        return "none"
    return "as now" if amount == present else ""


def _round_step(least: int) -> int:
    """Return the least round whole number that reaches it, such as 1,500 for 1,199."""
    power: int = 10 ** max(0, math.floor(math.log10(least)))
    for tenths in (10, 15, 20, 25, 30, 40, 50, 60, 80, 100):
        step = tenths * power // 10
        if step >= least and tenths * power % 10 == 0:
            return step
    raise AssertionError("ten times the power reaches whatever its logarithm came from")
