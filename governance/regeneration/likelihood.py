"""How well stocks agree with a series: many (r, K) at once, by observation error.

A stock begins unfished (B = K) and follows the model and the recorded catches without chance;
each index is q·B times a lognormal error of one size. Source: Polacheck, Hilborn & Punt 1993
(CJFAS 50:2597-2607).
"""

import enum
import math
from dataclasses import dataclass
from typing import assert_never

import numpy as np
from numpy.typing import NDArray

from governance.regeneration import growth
from governance.regeneration.growth import FloatArray
from governance.regeneration.series import Series

# With r of 2 or more, a stock jumps from one side of K to the other for ever.
R_BOUNDS = (0.01, 2.0)
# K lies between the largest catch, which came out of it at once, and this many times that.
K_LARGEST_CATCHES = 100.0
# What is left, as a part of K, when catches take more than there was: it keeps a logarithm finite.
_FLOOR = 1e-6
# Data without error would have a likelihood without end; the mean squared residual stops here.
LEAST_VARIANCE = 1e-18


class IndexTiming(enum.StrEnum):
    """Which biomass of a year its index goes with."""

    START_OF_YEAR = "start_of_year"
    # The mean of the biomass at the start and at the end of the year.
    MID_YEAR = "mid_year"


@dataclass(frozen=True, slots=True, kw_only=True)
class Setting:
    """What the data do not say: the shape of growth (1 Schaefer, 0 Fox), the order, the timing.

    :raises ImpossibleParameter: if the shape is negative.
    """

    p: float
    order: growth.Order
    timing: IndexTiming

    def __post_init__(self) -> None:
        growth.check_shape(self.p)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Surface:
    """How each of many stocks does against a series.

    ``biomass`` is (years + 1, stocks), the last row the start of the season to come;
    ``residuals`` is (index years, stocks), ln I - ln qB; ``log_q`` and ``rss`` are (stocks,);
    ``feasible`` (stocks,) says whether every catch was there to take.
    """

    biomass: FloatArray
    residuals: FloatArray
    log_q: FloatArray
    rss: FloatArray
    feasible: NDArray[np.bool_]

    def nll(self) -> FloatArray:
        """Return (n/2)·ln(s²) + (n/2)·(1+ln 2π) of each stock, s² its mean squared residual."""
        n = len(self.residuals)
        variance = np.maximum(self.rss / n, LEAST_VARIANCE)
        return n / 2 * (np.log(variance) + 1 + math.log(2 * math.pi))


def surface(*, series: Series, setting: Setting, r: FloatArray, K: FloatArray) -> Surface:
    """Return how each stock (r, K) does, its q taken in closed form as exp(mean ln(I/B))."""
    biomass, feasible = histories(series=series, setting=setting, r=r, K=K)
    match setting.timing:
        case IndexTiming.START_OF_YEAR:
            seen = biomass[:-1]
        case IndexTiming.MID_YEAR:
            seen = (biomass[:-1] + biomass[1:]) / 2
        case _:
            assert_never(setting.timing)
    residuals = series.log_index()[:, np.newaxis] - np.log(seen[series.rows()])
    log_q = residuals.mean(axis=0)
    residuals -= log_q
    return Surface(
        biomass=biomass,
        residuals=residuals,
        log_q=log_q,
        rss=np.square(residuals).sum(axis=0),
        feasible=feasible,
    )


def histories(
    *, series: Series, setting: Setting, r: FloatArray, K: FloatArray
) -> tuple[FloatArray, NDArray[np.bool_]]:
    """Return biomass (years + 1, stocks) from B = K on, and whether every catch was there."""
    biomass = np.empty((len(series.years) + 1, len(r)))
    biomass[0] = K
    floor = _FLOOR * K
    feasible = np.ones(len(r), dtype=np.bool_)
    for year, caught in enumerate(series.catches):
        before = biomass[year]
        match setting.order:
            case growth.Order.TAKE_THEN_GROW:
                left = before - caught
                feasible &= left >= floor
                np.maximum(left, floor, out=left)
                left += growth.production(biomass=left, r=r, K=K, p=setting.p)
            case growth.Order.GROW_THEN_TAKE:
                left = before + growth.production(biomass=before, r=r, K=K, p=setting.p) - caught
                feasible &= left >= floor
            case _:
                assert_never(setting.order)
        np.maximum(left, floor, out=biomass[year + 1])
    return biomass, feasible


Bounds = tuple[tuple[float, float], tuple[float, float]]


def bounds(series: Series) -> Bounds:
    """Return the lowest and highest ln r, and the lowest and highest ln K, that are looked at."""
    largest = max(series.catches)
    return (
        (math.log(R_BOUNDS[0]), math.log(R_BOUNDS[1])),
        (math.log(largest), math.log(largest * K_LARGEST_CATCHES)),
    )
