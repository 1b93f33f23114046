"""A take as a rate of a surveyed stock: what stands on the open grounds, times the rate.

Whole base units and exact fractions throughout, so that the caller rounds once, down. Standard
errors add up as those of independent strata: Cochran 1977, Sampling Techniques, chapter 5 (from
memory).
"""

import math
from collections.abc import Collection
from dataclasses import dataclass
from fractions import Fraction
from statistics import NormalDist
from typing import ClassVar

from governance import quantities
from governance.errors import StintbookError


class ImpossibleGround(StintbookError):
    """A ground's biomass or its error is negative, or the ground is counted twice."""

    code: ClassVar[str] = "survey.impossible_ground"
    message: ClassVar[str] = "Found {found} for the ground {zone}; accepted is {accepted}."


class NoOpenGround(StintbookError):
    """No ground that was surveyed is open, so there is nothing to take a rate of."""

    code: ClassVar[str] = "survey.no_open_ground"
    message: ClassVar[str] = "Found no survey of an open ground; surveyed are {surveyed}."


class ImpossibleRate(StintbookError):
    """A rate is not a part of the stock."""

    code: ClassVar[str] = "survey.impossible_rate"
    message: ClassVar[str] = "Found a rate of {found}; accepted is 0 to 1."


@dataclass(frozen=True, slots=True, kw_only=True)
class Ground:
    """The biomass found on one ground, and its standard error if the survey gives one.

    :raises ImpossibleGround: if either is negative.
    """

    zone: str
    biomass: Fraction
    standard_error: Fraction | None
    unit: str

    def __post_init__(self) -> None:
        for found in (self.biomass, self.standard_error or Fraction(0)):
            if found < 0:
                raise ImpossibleGround(found=found, zone=self.zone, accepted="0 or more")


@dataclass(frozen=True, slots=True, kw_only=True)
class Standing:
    """What stands on the open grounds, in one unit.

    ``variation`` is the standard error over the biomass, None where a ground has no error or
    nothing stands: then how wrong the biomass may be is not known.
    """

    biomass: Fraction
    unit: str
    variation: float | None
    counted: tuple[str, ...]
    left_out: tuple[str, ...]


def standing(*, grounds: Collection[Ground], open_zones: Collection[str], unit: str) -> Standing:
    """Add up the grounds that are open, in a unit.

    :raises NoOpenGround: if none of the surveyed grounds is open.
    :raises ImpossibleGround: if a ground is given twice.
    :raises UnitMismatch: if a ground is measured in something that does not convert.
    """
    seen: set[str] = set()
    for ground in grounds:
        if ground.zone in seen:
            raise ImpossibleGround(found="two surveys", zone=ground.zone, accepted="one")
        seen.add(ground.zone)
    counted = [ground for ground in grounds if ground.zone in open_zones]
    if not counted:
        raise NoOpenGround(surveyed=", ".join(sorted(seen)) or "none")
    biomass = sum((_in(ground.biomass, ground, unit) for ground in counted), Fraction(0))
    return Standing(
        biomass=biomass,
        unit=unit,
        variation=_variation(counted, biomass, unit),
        counted=tuple(ground.zone for ground in counted),
        left_out=tuple(ground.zone for ground in grounds if ground.zone not in open_zones),
    )


def _in(value: Fraction, ground: Ground, unit: str) -> Fraction:
    return quantities.converted(value, from_unit=ground.unit, to_unit=unit)


def _variation(counted: Collection[Ground], biomass: Fraction, unit: str) -> float | None:
    errors = [
        _in(ground.standard_error, ground, unit)
        for ground in counted
        if ground.standard_error is not None
    ]
    if len(errors) < len(counted) or biomass == 0:
        return None
    return math.sqrt(sum(error**2 for error in errors)) / float(biomass)


def take_at_rate(*, standing: Standing, rate: Fraction) -> Fraction:
    """Return the rate of what stands, exact, for the caller to round down.

    :raises ImpossibleRate: unless the rate is from 0 to 1.
    """
    if not 0 <= rate <= 1:
        raise ImpossibleRate(found=rate)
    return standing.biomass * rate


def chance_above_rate(*, standing: Standing, take: Fraction, rate: Fraction) -> float | None:
    """Return the chance that a take is more than the rate of what really stands.

    The true biomass is taken as lognormal with the survey's biomass as its median; None where
    the survey's error is not known.

    :raises ImpossibleRate: unless the rate is from 0 to 1.
    """
    aimed = take_at_rate(standing=standing, rate=rate)
    if standing.variation is None:
        return None
    if take == 0 or aimed == 0 or standing.variation == 0:
        return float(take > aimed)
    deviation = math.sqrt(math.log1p(standing.variation**2))
    return NormalDist().cdf(math.log(take / aimed) / deviation)
