"""What may come: many plausible stocks, the luck of each, and their way through the seasons.

Chance enters in one place, `drawn`; whatever is carried through the same prospects differs by what
is taken and by nothing else.
"""

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import ClassVar, assert_never

import numpy as np

from governance.errors import StintbookError
from governance.regeneration import growth, rules
from governance.regeneration.draws import Draws
from governance.regeneration.growth import FloatArray

# Bands and chances from fewer draws would be noise with a clean edge.
FEWEST_DRAWS = 200
# Draws carried together: the handful of arrays of a step (80 kB each) stays in a core's cache, and
# the cost of a call is spread over many.
_BLOCK = 10_000


class TooFewDraws(StintbookError):
    """The draws, or what they are effectively worth, are too few for bands and chances."""

    code: ClassVar[str] = "projection.too_few_draws"
    message: ClassVar[str] = "Found {found} effective draws; at least {accepted} are needed."


class ImpossibleProjection(StintbookError):
    """A number asks for no projection."""

    code: ClassVar[str] = "projection.impossible"
    message: ClassVar[str] = "Found {name} = {found}; accepted is {accepted}."


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Prospects:
    """Stocks as they may be now, and the luck of each in every season to come.

    ``luck`` is (seasons, draws): what biomass is multiplied by at the end of a season.
    """

    draws: Draws
    luck: FloatArray


def drawn(
    *, draws: Draws, seasons: int, process_sd: float, generator: np.random.Generator
) -> Prospects:
    """Return the prospects that candidates are compared under; luck is lognormal with mean 1.

    :param process_sd: the standard deviation of the logarithm of biomass from season to season.
    :raises TooFewDraws: if fewer than 200 draws, or draws worth fewer, are given.
    :raises ImpossibleProjection: if there is no season, or the deviation is negative.
    """
    worth = min(len(draws), draws.effective)
    if worth < FEWEST_DRAWS:
        raise TooFewDraws(found=f"{worth:.0f}", accepted=FEWEST_DRAWS)
    require(name="seasons", found=seasons, holds=seasons >= 1, accepted="1 or more")
    require(name="process_sd", found=process_sd, holds=process_sd >= 0, accepted="0 or more")
    luck = generator.standard_normal((seasons, len(draws)))
    luck *= process_sd
    luck -= process_sd**2 / 2
    np.exp(luck, out=luck)
    luck.flags.writeable = False
    return Prospects(draws=draws, luck=luck)


def require(*, name: str, found: float, holds: bool, accepted: str) -> None:
    """Refuse a number of a projection.

    :raises ImpossibleProjection: if it is not finite, or what has to hold does not.
    """
    if not (math.isfinite(found) and holds):
        raise ImpossibleProjection(name=name, found=found, accepted=accepted)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Block:
    """A run of draws with what carries them; ``grow`` writes B + P(B) into its second array."""

    rows: slice
    start: FloatArray
    luck: FloatArray
    grow: Callable[[FloatArray, FloatArray], None]


def blocks(ahead: Prospects) -> Iterator[Block]:
    """Yield the draws in runs that stay in a core's cache while they are carried."""
    draws = ahead.draws
    for first in range(0, len(draws), _BLOCK):
        rows = slice(first, min(first + _BLOCK, len(draws)))
        yield Block(
            rows=rows,
            start=draws.biomass[rows],
            luck=ahead.luck[:, rows],
            grow=_grower(p=draws.p, r=draws.r[rows], K=draws.K[rows]),
        )


def _grower(*, p: float, r: FloatArray, K: FloatArray) -> Callable[[FloatArray, FloatArray], None]:
    """Return the growth of a run of stocks, arranged so that it allocates nothing."""
    if p == 1:
        ceiling, slope = 1 + r, r / K

        def grow_schaefer(now: FloatArray, after: FloatArray) -> None:
            np.multiply(slope, now, out=after)
            np.subtract(ceiling, after, out=after)
            np.multiply(after, now, out=after)

        return grow_schaefer

    inverse, pull = 1 / K, r if p == 0 else r / p
    least = np.full_like(K, growth.NEXT_TO_NOTHING)

    def grow_bent(now: FloatArray, after: FloatArray) -> None:
        np.maximum(now, least, out=after)
        np.multiply(after, inverse, out=after)
        np.log(after, out=after)
        if p != 0:
            np.multiply(after, p, out=after)
            np.expm1(after, out=after)
        np.multiply(after, pull, out=after)
        np.subtract(1.0, after, out=after)
        np.multiply(after, now, out=after)

    return grow_bent


# A take that is the same every season, or a rule that sets each.
Policy = float | rules.Rule


@dataclass(slots=True, kw_only=True, eq=False)
class Season:
    """A season that has passed; its arrays are overwritten by the next.

    ``lack`` is 0 or, where a take could not be had in full, minus what was missing; None if
    nothing was missing anywhere.
    """

    allowed: float | FloatArray
    biomass: FloatArray
    lack: FloatArray | None


def seasons_of(block: Block, policy: Policy, order: growth.Order) -> Iterator[Season]:
    """Yield the seasons of a run of draws, one after the other, in arrays used in turn."""
    now = block.start.copy()
    # A minimum of two arrays takes half the time of a minimum of an array and a number.
    after, spare, nothing = np.empty_like(now), np.empty_like(now), np.zeros_like(now)
    for luck in block.luck:
        allowed = (
            policy if isinstance(policy, int | float) else rules.take(rule=policy, biomass=now)
        )
        match order:
            case growth.Order.TAKE_THEN_GROW:
                lack = _withdraw(now, allowed, spare, nothing)
                block.grow(now, after)
                np.maximum(after, nothing, out=after)
            case growth.Order.GROW_THEN_TAKE:
                block.grow(now, after)
                lack = _withdraw(after, allowed, spare, nothing)
            case _:
                assert_never(order)
        np.multiply(after, luck, out=after)
        now, after = after, now
        yield Season(allowed=allowed, biomass=now, lack=lack)


def _withdraw(
    stock: FloatArray, allowed: float | FloatArray, spare: FloatArray, nothing: FloatArray
) -> FloatArray | None:
    """Take from a stock in place, at most what is there; return the lack, written to spare."""
    np.subtract(stock, allowed, out=stock)
    lowest = stock.min()
    if lowest >= 0:
        return None
    lack = np.minimum(stock, nothing, out=spare)
    np.subtract(stock, lack, out=stock)
    # A stock far above K can fall below zero by itself: that is no part of the take.
    if np.any(lowest < np.negative(allowed)):
        np.maximum(lack, np.negative(allowed), out=lack)
    return lack
