"""Harvest control rules: from the biomass at the start of a season to the take of that season."""

import enum
from dataclasses import dataclass
from typing import ClassVar, assert_never

import numpy as np

from governance.errors import StintbookError
from governance.regeneration.growth import FloatArray, HarvestFraction


class ImpossibleRule(StintbookError):
    """The numbers of a harvest control rule contradict each other."""

    code: ClassVar[str] = "rules.impossible_rule"
    message: ClassVar[str] = "Found {found}; accepted is {accepted}."


def _require(*, holds: bool, found: str, accepted: str) -> None:
    # A comparison with nan is false, so nan is refused too.
    if not holds:
        raise ImpossibleRule(found=found, accepted=accepted)


class Ramp(enum.StrEnum):
    """Where the ramp below the trigger would reach zero.

    From the limit, it meets the limit at zero. From zero, it points at the origin, and the take
    falls to nothing at the limit at one stroke: the ICES advice rule, F = Fmsy·min(1, B/Btrigger).
    """

    FROM_LIMIT = "from_limit"
    FROM_ZERO = "from_zero"


@dataclass(frozen=True, slots=True, kw_only=True)
class HockeyStick:
    """The full fraction at or above ``trigger``, nothing at or below ``limit``, a ramp between.

    :raises ImpossibleRule: unless 0 <= limit < trigger.
    """

    limit: float
    trigger: float
    fraction: HarvestFraction
    ramp: Ramp

    def __post_init__(self) -> None:
        _require(
            holds=0 <= self.limit < self.trigger < float("inf"),
            found=f"limit {self.limit} and trigger {self.trigger}",
            accepted="a limit of 0 or more, below the trigger",
        )


class Reading(enum.StrEnum):
    """What falls on a straight line between the two levels of a 40-10 rule.

    The two differ: at a quarter of the unfished biomass, 40-10 read as a line in the catch gives
    1.6 times the catch of the ramp in the fraction.
    """

    LINE_IN_CATCH = "line_in_catch"
    RAMP_IN_FRACTION = "ramp_in_fraction"


@dataclass(frozen=True, slots=True, kw_only=True)
class FortyTen:
    """The full fraction at or above ``upper``·unfished, nothing at or below ``lower``·unfished.

    40-10 unless other levels are given, such as 25-5 (named in 50 CFR 660.40).

    :raises ImpossibleRule: unless unfished > 0 and 0 <= lower < upper.
    """

    unfished: float
    fraction: HarvestFraction
    reading: Reading
    lower: float = 0.10
    upper: float = 0.40

    def __post_init__(self) -> None:
        _require(
            holds=0 <= self.lower < self.upper < float("inf") and 0 < self.unfished < float("inf"),
            found=f"levels {self.lower} and {self.upper} of {self.unfished}",
            accepted="a lower level of 0 or more, below the upper, of an unfished biomass above 0",
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class ConstantEscapement:
    """Whatever is above ``escapement`` is taken (Reed 1979).

    :raises ImpossibleRule: if the escapement is negative.
    """

    escapement: float

    def __post_init__(self) -> None:
        _require(
            holds=0 <= self.escapement < float("inf"),
            found=f"escapement {self.escapement}",
            accepted="0 or more",
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class ConstantFraction:
    """The same fraction is taken at every biomass."""

    fraction: HarvestFraction


Rule = HockeyStick | FortyTen | ConstantEscapement | ConstantFraction


def multiplier(*, biomass: FloatArray, limit: float, trigger: float, ramp: Ramp) -> FloatArray:
    """Return the part, 0 to 1, of a full fraction or rate that a ramp leaves at each biomass."""
    match ramp:
        case Ramp.FROM_LIMIT:
            slope = (biomass - limit) / (trigger - limit)
        case Ramp.FROM_ZERO:
            slope = np.where(biomass > limit, biomass / trigger, 0.0)
        case _:
            assert_never(ramp)
    return np.clip(slope, 0.0, 1.0)


def take(*, rule: Rule, biomass: FloatArray) -> FloatArray:
    """Return the take that a rule allows at each biomass: from 0 to the whole of it."""
    match rule:
        case HockeyStick():
            ramped = multiplier(
                biomass=biomass, limit=rule.limit, trigger=rule.trigger, ramp=rule.ramp
            )
            wanted = rule.fraction.of_biomass * ramped * biomass
        case FortyTen():
            wanted = _forty_ten(rule, biomass)
        case ConstantEscapement():
            wanted = np.maximum(biomass - rule.escapement, 0.0)
        case ConstantFraction():
            wanted = rule.fraction.of_biomass * biomass
        case _:
            assert_never(rule)
    return np.minimum(wanted, biomass)


def _forty_ten(rule: FortyTen, biomass: FloatArray) -> FloatArray:
    lower, upper = rule.lower * rule.unfished, rule.upper * rule.unfished
    ramped = multiplier(biomass=biomass, limit=lower, trigger=upper, ramp=Ramp.FROM_LIMIT)
    match rule.reading:
        case Reading.LINE_IN_CATCH:
            base = np.maximum(biomass, upper)
        case Reading.RAMP_IN_FRACTION:
            base = biomass
        case _:
            assert_never(rule.reading)
    return rule.fraction.of_biomass * ramped * base


def fraction(*, rule: Rule, biomass: FloatArray) -> FloatArray:
    """Return the part of each biomass that a rule allows to be taken; of nothing, nothing."""
    taken = take(rule=rule, biomass=biomass)
    return np.divide(taken, biomass, out=np.zeros_like(taken), where=biomass > 0)
