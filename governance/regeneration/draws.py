"""Many stocks that a series does not rule out, each as plausible as the next.

The chances are those of a flat prior on r, ln K, ln q and ln sigma within the bounds of the fit;
q and sigma are integrated in closed form, so that two parameters are left to search. (Flat on ln r
would put weight without end on stocks that hardly grow, which no index can rule out.)
Sources: Rubin 1988 (Bayesian Statistics 3:395-402), sampling and importance resampling; McAllister
& Ianelli 1997 (CJFAS 54:284-300), the same for stocks; Kish 1965, Survey Sampling, effective size
(all three from memory).
"""

import math
from dataclasses import dataclass, fields
from typing import ClassVar

import numpy as np
from numpy.typing import NDArray

from governance.errors import StintbookError
from governance.regeneration import fitting, growth, likelihood
from governance.regeneration.growth import FloatArray

# A proposal for each draw wanted, this many times over.
_PROPOSALS_PER_DRAW = 4
_CELLS = 160
# Cells whose log density is further below the highest hold less than a millionth of the chance.
_DEPTH = 14.0
# This part of the proposals falls anywhere in the region, so that no corner of it is left out.
_ANYWHERE = 0.02


class UnequalDraws(StintbookError):
    """The arrays of the draws differ in length."""

    code: ClassVar[str] = "draws.unequal"
    message: ClassVar[str] = "Found arrays of {found} values; accepted are arrays of one length."


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Draws:
    """Equally plausible stocks of one shape; read-only arrays of one value a draw.

    ``biomass`` is that at the start of the season to come. ``effective`` is Kish's effective
    number of independent draws behind them, at most their count.

    :raises UnequalDraws: if the arrays differ in length.
    :raises ImpossibleParameter: if the shape is negative.
    """

    p: float
    r: FloatArray
    K: FloatArray
    q: FloatArray
    sigma: FloatArray
    biomass: FloatArray
    effective: float

    def __post_init__(self) -> None:
        growth.check_shape(self.p)
        lengths = {}
        for field in fields(self):
            value = getattr(self, field.name)
            if isinstance(value, np.ndarray):
                lengths[field.name] = len(value)
                value.flags.writeable = False
        if len(set(lengths.values())) > 1:
            raise UnequalDraws(found=lengths)

    def __len__(self) -> int:
        return len(self.r)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Region:
    """A rectangle of ln r and ln K that holds all but a trifle of the chance."""

    low: tuple[float, float]
    high: tuple[float, float]

    def points(self, unit: FloatArray) -> FloatArray:
        """Return points (2, n) of the rectangle from points of the unit square."""
        low, high = np.array(self.low)[:, np.newaxis], np.array(self.high)[:, np.newaxis]
        placed: FloatArray = low + unit * (high - low)
        return placed


def plausible(*, fit: fitting.Fit, draws: int, generator: np.random.Generator) -> Draws:
    """Return that many draws of r, K, q, sigma and the biomass to come; one seed, one answer."""
    region = _region(fit)
    chances = _cell_chances(fit, region)
    count = draws * _PROPOSALS_PER_DRAW
    cells = generator.choice(len(chances), size=count, p=chances)
    unit = (np.array(np.divmod(cells, _CELLS)) + generator.random((2, count))) / _CELLS
    points = region.points(unit)
    found = _surface(fit, points)
    log_weight = _log_density(found, points[0]) - np.log(chances[cells])
    weight = np.exp(log_weight - log_weight.max())
    kept = _resampled(weight, draws, generator)
    sigma, q = _error_and_catchability(found, kept, generator)
    return Draws(
        p=fit.setting.p,
        r=np.exp(points[0, kept]),
        K=np.exp(points[1, kept]),
        q=q,
        sigma=sigma,
        biomass=found.biomass[-1, kept],
        effective=min(effective_size(weight), float(draws)),
    )


def histories(*, fit: fitting.Fit, draws: Draws) -> FloatArray:
    """Return the biomass (years + 1, draws) that each draw had in the years of the series."""
    return likelihood.histories(series=fit.series, setting=fit.setting, r=draws.r, K=draws.K)[0]


def effective_size(weight: FloatArray) -> float:
    """Return how many equal weights carry as much: (sum w)² / sum w² (Kish)."""
    return float(weight.sum() ** 2 / np.square(weight).sum())


def _log_density(found: likelihood.Surface, log_r: FloatArray) -> FloatArray:
    """Return the log chance of each stock per unit of ln r and ln K, up to a constant."""
    n = len(found.residuals)
    rss = np.maximum(found.rss, n * likelihood.LEAST_VARIANCE)
    # A prior that is flat on r is as steep as r on ln r.
    return np.where(found.feasible, log_r - (n - 1) / 2 * np.log(rss), -np.inf)


def _surface(fit: fitting.Fit, points: FloatArray) -> likelihood.Surface:
    r, K = np.exp(points)
    return likelihood.surface(series=fit.series, setting=fit.setting, r=r, K=K)


def _at(fit: fitting.Fit, points: FloatArray) -> FloatArray:
    return _log_density(_surface(fit, points), points[0])


def _centres(region: _Region) -> FloatArray:
    steps = (np.arange(_CELLS) + 0.5) / _CELLS
    across, down = np.meshgrid(steps, steps, indexing="ij")
    return region.points(np.stack((across.ravel(), down.ravel())))


def _region(fit: fitting.Fit) -> _Region:
    """Close in on the rectangle, from the bounds of the fit, until it stops shrinking."""
    (r_low, r_high), (K_low, K_high) = likelihood.bounds(fit.series)
    region = _Region(low=(r_low, K_low), high=(r_high, K_high))
    best = np.array([[math.log(fit.model.r)], [math.log(fit.model.K)]])
    top = float(_at(fit, best)[0])
    for _ in range(12):
        centres = _centres(region)
        near = np.hstack((centres[:, _at(fit, centres) > top - _DEPTH], best))
        size = np.array(region.high) - np.array(region.low)
        margin = size / _CELLS
        low = np.maximum(near.min(axis=1) - margin, region.low)
        high = np.minimum(near.max(axis=1) + margin, region.high)
        region = _Region(low=(low[0], low[1]), high=(high[0], high[1]))
        if np.prod((high - low) / size) > 0.7:
            break
    return region


def _cell_chances(fit: fitting.Fit, region: _Region) -> FloatArray:
    density = _at(fit, _centres(region))
    relative = np.exp(density - density.max())
    chances: FloatArray = (1 - _ANYWHERE) * relative / relative.sum() + _ANYWHERE / len(density)
    return chances


def _resampled(weight: FloatArray, count: int, generator: np.random.Generator) -> NDArray[np.intp]:
    """Return positions drawn in proportion to weight, at even steps from one random start."""
    steps = (generator.random() + np.arange(count)) / count
    reached = np.cumsum(weight)
    positions: NDArray[np.intp] = np.searchsorted(reached, steps * reached[-1], side="right")
    return positions


def _error_and_catchability(
    found: likelihood.Surface, kept: NDArray[np.intp], generator: np.random.Generator
) -> tuple[FloatArray, FloatArray]:
    """Return sigma and q given r and K: rss/sigma² is chi-squared of n-1, ln q then normal."""
    n = len(found.residuals)
    sigma = np.sqrt(found.rss[kept] / generator.chisquare(n - 1, size=len(kept)))
    log_q = found.log_q[kept] + sigma / math.sqrt(n) * generator.standard_normal(len(kept))
    return sigma, np.exp(log_q)
