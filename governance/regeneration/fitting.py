"""Fit a growth model to a series, and say how far the data hold its parameters.

Sources: Polacheck, Hilborn & Punt 1993 (CJFAS 50:2597-2607), observation-error estimator; Venzon &
Moolgavkar 1988 (Applied Statistics 37:87-94) for intervals from a profile (from memory).
"""

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from governance.regeneration import growth, likelihood
from governance.regeneration.growth import FloatArray
from governance.regeneration.series import Series

_STARTS = 6
_GRID = 41
# Stands for a stock too small for its own catches; infinity would upset the search's arithmetic.
_OUT_OF_REACH = 1e12
# Half the 95 % point of chi-squared with one degree of freedom.
LIKELIHOOD_RATIO_CUT = 1.92

Height = Callable[[FloatArray, FloatArray], FloatArray]


@dataclass(frozen=True, slots=True, kw_only=True)
class Fit:
    """The most likely parameters, and how well they do.

    ``biomass`` has one value more than the series has years: the last is the start of the season
    to come. ``residuals`` are ln I - ln qB, None in a year without an index. ``nll`` is
    (n/2)·ln(sigma²) + (n/2)·(1+ln 2π). ``at_bounds`` names the parameters, of r and K, that the
    search was stopped at: the data do not hold them.
    """

    series: Series
    setting: likelihood.Setting
    model: growth.Growth
    q: float
    sigma: float
    nll: float
    biomass: tuple[float, ...]
    residuals: tuple[float | None, ...]
    at_bounds: tuple[str, ...]


def fit(*, series: Series, setting: likelihood.Setting) -> Fit:
    """Return the most likely r and K, with the q and sigma that follow from them.

    The search is bounded in ln r and ln K, begins in the best hollows of a grid, and uses no
    chance: the same series gives the same fit.
    """
    from scipy import optimize

    height = _height(series, setting)

    def height_at(point: FloatArray) -> float:
        return float(height(point[:1], point[1:])[0])

    results = [
        optimize.minimize(
            height_at,
            start,
            method="Nelder-Mead",
            bounds=likelihood.bounds(series),
            options={"xatol": 1e-9, "fatol": 1e-11, "maxiter": 600, "maxfev": 1200},
        )
        for start in _starts(series, height)
    ]
    log_r, log_K = min(results, key=lambda result: float(result.fun)).x
    return _described(series, setting, log_r=float(log_r), log_K=float(log_K))


def _height(series: Series, setting: likelihood.Setting) -> Height:
    def height(log_r: FloatArray, log_K: FloatArray) -> FloatArray:
        found = likelihood.surface(series=series, setting=setting, r=np.exp(log_r), K=np.exp(log_K))
        # Such a stock is no candidate, however well its index runs.
        return np.where(found.feasible, found.nll(), _OUT_OF_REACH)

    return height


def _starts(series: Series, height: Height) -> list[FloatArray]:
    """Return the points of a grid that are no higher than all around them, lowest first."""
    (r_low, r_high), (K_low, K_high) = likelihood.bounds(series)
    log_r, log_K = np.meshgrid(
        np.linspace(r_low, r_high, _GRID), np.linspace(K_low, K_high, _GRID), indexing="ij"
    )
    heights = height(log_r.ravel(), log_K.ravel()).reshape(log_r.shape)
    ringed = np.pad(heights, 1, constant_values=np.inf)
    around = np.lib.stride_tricks.sliding_window_view(ringed, (3, 3)).min(axis=(2, 3))
    hollows = np.argwhere((heights == around) & (heights < _OUT_OF_REACH))
    lowest_first = np.argsort([heights[i, j] for i, j in hollows], kind="stable")
    return [np.array([log_r[i, j], log_K[i, j]]) for i, j in hollows[lowest_first[:_STARTS]]]


def _described(series: Series, setting: likelihood.Setting, *, log_r: float, log_K: float) -> Fit:
    r, K = math.exp(log_r), math.exp(log_K)
    found = likelihood.surface(series=series, setting=setting, r=np.array([r]), K=np.array([K]))
    residuals: list[float | None] = [None] * len(series.years)
    for row, residual in zip(series.rows(), found.residuals[:, 0], strict=True):
        residuals[int(row)] = float(residual)
    variance = max(float(found.rss[0]) / len(found.residuals), likelihood.LEAST_VARIANCE)
    return Fit(
        series=series,
        setting=setting,
        model=growth.of_shape(r=r, K=K, p=setting.p),
        q=math.exp(float(found.log_q[0])),
        sigma=math.sqrt(variance),
        nll=float(found.nll()[0]),
        biomass=tuple(float(each) for each in found.biomass[:, 0]),
        residuals=tuple(residuals),
        at_bounds=_at_bounds(likelihood.bounds(series), log_r=log_r, log_K=log_K),
    )


def _at_bounds(limits: likelihood.Bounds, *, log_r: float, log_K: float) -> tuple[str, ...]:
    placed = zip(("r", "K"), (log_r, log_K), limits, strict=True)
    return tuple(
        name for name, at, (low, high) in placed if min(abs(at - low), abs(at - high)) < 1e-3
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Interval:
    """The values that the data do not rule out; an end is None where it lies beyond the grid."""

    low: float | None
    high: float | None


def interval_of_r(*, fit: Fit, grid: FloatArray) -> Interval:
    """Return where on a rising grid of r the best K keeps the likelihood within the 95 % cut.

    The grid has to hold values near the fitted r.
    """
    inside = np.flatnonzero(_best_over_K(fit, grid) <= fit.nll + LIKELIHOOD_RATIO_CUT)
    assert len(inside), "no value of the grid lies in the interval"
    first, last = int(inside[0]), int(inside[-1])
    return Interval(
        low=float(grid[first]) if first > 0 else None,
        high=float(grid[last]) if last < len(grid) - 1 else None,
    )


def _best_over_K(fit: Fit, grid: FloatArray) -> FloatArray:
    """Return, for each r, the lowest negative log-likelihood over K, closing in by steps."""
    height = _height(fit.series, fit.setting)
    low, high = (np.full(len(grid), edge) for edge in likelihood.bounds(fit.series)[1])
    for _ in range(4):
        log_K = np.linspace(low, high, 81)
        log_r = np.broadcast_to(np.log(grid), log_K.shape)
        heights = height(log_r.ravel(), log_K.ravel()).reshape(log_K.shape)
        best = log_K[heights.argmin(axis=0), np.arange(len(grid))]
        step = (high - low) / 80
        low, high = best - step, best + step
    return height(np.log(grid), best)
