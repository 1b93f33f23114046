"""How a stock grows: surplus-production models, their reference points, and one season's step.

Biomass, catch and carrying capacity are floats in one unit that the caller chooses; growth is per
season. Sources: Schaefer 1954; Pella & Tomlinson 1969 (IATTC Bulletin 13:421-496); Fox 1970;
Fletcher 1978; Polacheck, Hilborn & Punt 1993 (CJFAS 50:2597-2607).
"""

import enum
import math
from dataclasses import dataclass
from typing import ClassVar, assert_never

import numpy as np
from numpy.typing import NDArray

from governance.errors import StintbookError

FloatArray = NDArray[np.float64]

# Stands in for nothing inside a logarithm: far below any biomass, and still a number over any K.
NEXT_TO_NOTHING = 1e-200


class ImpossibleParameter(StintbookError):
    """A number describes no stock."""

    code: ClassVar[str] = "growth.impossible_parameter"
    message: ClassVar[str] = "Found {name} = {found}; accepted is {accepted}."


def _require(*, name: str, found: float, holds: bool, accepted: str) -> None:
    if not (math.isfinite(found) and holds):
        raise ImpossibleParameter(name=name, found=found, accepted=accepted)


@dataclass(frozen=True, slots=True, kw_only=True, order=True)
class HarvestFraction:
    """The part of the biomass at the start of a season that is taken in it.

    It may pass 1 as a reference point of a fast stock; a take never passes the biomass.

    :raises ImpossibleParameter: if it is negative or not finite.
    """

    of_biomass: float

    def __post_init__(self) -> None:
        held = self.of_biomass
        _require(name="harvest fraction", found=held, holds=held >= 0, accepted="0 or more")


@dataclass(frozen=True, slots=True, kw_only=True, order=True)
class InstantaneousRate:
    """A rate of loss per season that acts at every moment of it (F or M of the textbooks).

    It is another thing than a harvest fraction: nothing here turns one into the other.

    :raises ImpossibleParameter: if it is negative or not finite.
    """

    per_season: float

    def __post_init__(self) -> None:
        held = self.per_season
        _require(name="instantaneous rate", found=held, holds=held >= 0, accepted="0 or more")


def catch_of_fraction(*, biomass: FloatArray, fraction: HarvestFraction) -> FloatArray:
    """Return the catch of a harvest fraction, never more than the biomass."""
    return biomass * min(fraction.of_biomass, 1.0)


def catch_of_rate(*, biomass: FloatArray, fishing: InstantaneousRate) -> FloatArray:
    """Return the catch of an instantaneous rate where nothing else dies: B·(1-exp(-F))."""
    return biomass * -math.expm1(-fishing.per_season)


def catch_of_rate_with_natural_mortality(
    *, biomass: FloatArray, fishing: InstantaneousRate, natural: InstantaneousRate
) -> FloatArray:
    """Return the catch where fish die of both at once: F/(F+M)·(1-exp(-F-M))·B (Baranov 1918)."""
    total = fishing.per_season + natural.per_season
    if total == 0:
        return np.zeros_like(biomass)
    return biomass * (fishing.per_season / total * -math.expm1(-total))


def production(
    *, biomass: FloatArray, r: float | FloatArray, K: float | FloatArray, p: float
) -> FloatArray:
    """Return the surplus production (r/p)·B·(1-(B/K)^p) of one season; arrays broadcast.

    Shape 1 is Schaefer's r·B·(1-B/K), shape 0 the limit r·B·ln(K/B) of Fox. Above K it is negative.
    """
    if p == 1:
        return r * biomass * (1 - biomass / K)
    logarithm = np.log(np.maximum(biomass, NEXT_TO_NOTHING) / K)
    # expm1 keeps its digits where (B/K)^p is next to 1, which is what a small shape makes it.
    bend = logarithm if p == 0 else np.expm1(p * logarithm) / p
    return -r * biomass * bend


def _check_stock(*, r: float, K: float) -> None:
    _require(name="r", found=r, holds=r > 0, accepted="more than 0")
    _require(name="K", found=K, holds=K > 0, accepted="more than 0")


def check_shape(p: float) -> None:
    """Refuse a shape that no model here has.

    :raises ImpossibleParameter: if it is below 0 or not finite.
    """
    _require(name="p", found=p, holds=p >= 0, accepted="0 or more")


@dataclass(frozen=True, slots=True, kw_only=True)
class Schaefer:
    """Growth of r·B·(1-B/K): highest at half the carrying capacity K (Schaefer 1954).

    :raises ImpossibleParameter: if r or K is not above 0.
    """

    r: float
    K: float
    p: ClassVar[float] = 1.0

    def __post_init__(self) -> None:
        _check_stock(r=self.r, K=self.K)

    def production(self, biomass: FloatArray) -> FloatArray:
        """Return the surplus production of one season at each biomass."""
        return production(biomass=biomass, r=self.r, K=self.K, p=self.p)


@dataclass(frozen=True, slots=True, kw_only=True)
class PellaTomlinson:
    """Growth of (r/p)·B·(1-(B/K)^p); shape p = 1 is Schaefer's, p = 0 is Fox's r·B·ln(K/B).

    Another form of Fox, r·B·(1-lnB/lnK), depends on the unit of biomass: its r is this r·lnK.

    :raises ImpossibleParameter: if r or K is not above 0, or p is below 0.
    """

    r: float
    K: float
    p: float

    def __post_init__(self) -> None:
        _check_stock(r=self.r, K=self.K)
        check_shape(self.p)

    def production(self, biomass: FloatArray) -> FloatArray:
        """Return the surplus production of one season at each biomass."""
        return production(biomass=biomass, r=self.r, K=self.K, p=self.p)


Growth = Schaefer | PellaTomlinson


def of_shape(*, r: float, K: float, p: float) -> Growth:
    """Return the model of a shape: 1 is Schaefer's, 0 Fox's limit of Pella and Tomlinson's."""
    return Schaefer(r=r, K=K) if p == 1 else PellaTomlinson(r=r, K=K, p=p)


def from_fletcher(*, msy: float, K: float, n: float) -> Growth:
    """Return the model of g·MSY·(B/K-(B/K)^n) with g = n^(n/(n-1))/(n-1) (Fletcher 1978).

    :raises ImpossibleParameter: if n is below 1, or MSY or K not above 0.
    """
    _require(name="n", found=n, holds=n >= 1, accepted="1 or more")
    p = n - 1
    return of_shape(r=msy / K * math.exp((p + 1) * _log1p_over(p)), K=K, p=p)


@dataclass(frozen=True, slots=True, kw_only=True)
class ReferencePoints:
    """The highest catch that can go on for ever, the biomass that gives it, and its fraction."""

    msy: float
    bmsy: float
    fmsy: HarvestFraction


def reference_points(model: Growth) -> ReferencePoints:
    """Return MSY = rK/(p+1)^((p+1)/p), Bmsy = K/(p+1)^(1/p) and Fmsy = r/(p+1)."""
    p = model.p
    bmsy = model.K * math.exp(-_log1p_over(p))
    fmsy = model.r / (p + 1)
    return ReferencePoints(msy=fmsy * bmsy, bmsy=bmsy, fmsy=HarvestFraction(of_biomass=fmsy))


def _log1p_over(p: float) -> float:
    """Return ln(1+p)/p, which is 1 in the limit of p = 0."""
    return math.log1p(p) / p if p else 1.0


class Order(enum.StrEnum):
    """What happens first in a season; the same rule gives other catches under each."""

    # B' = (B-C) + P(B-C): Reed 1979, J. Environ. Econ. Manage. 6:350-363.
    TAKE_THEN_GROW = "take_then_grow"
    # B' = B + P(B) - C: Polacheck, Hilborn & Punt 1993.
    GROW_THEN_TAKE = "grow_then_take"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Step:
    """The biomass at the start of the next season, and what could be taken in this one."""

    biomass: FloatArray
    taken: FloatArray


def step(*, model: Growth, biomass: FloatArray, take: FloatArray, order: Order) -> Step:
    """Carry biomass through one season; a take ends where the stock does, and none is below 0."""
    match order:
        case Order.TAKE_THEN_GROW:
            taken = np.minimum(take, biomass)
            left = biomass - taken
            return Step(biomass=np.maximum(left + model.production(left), 0.0), taken=taken)
        case Order.GROW_THEN_TAKE:
            grown = np.maximum(biomass + model.production(biomass), 0.0)
            taken = np.minimum(take, grown)
            return Step(biomass=grown - taken, taken=taken)
        case _:
            assert_never(order)
