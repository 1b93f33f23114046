"""Carry many plausible stocks through the seasons to come, under given takes or under a rule.

Every candidate and every rule meets the same prospects, so that two rows of a risk table differ by
their takes and by nothing else. Source: Punt & Hilborn 1997 (Reviews in Fish Biology and Fisheries
7:35-63) for decision tables over draws (from memory).
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from governance.regeneration import growth, prospects, rules
from governance.regeneration.growth import FloatArray

BAND_LEVELS = (0.50, 0.80, 0.95)


@dataclass(frozen=True, slots=True, kw_only=True)
class RiskRow:
    """What one candidate, or one rule, leads to; chances are parts of the draws.

    ``candidate`` is the take of every season, None under a rule. Below means below the limit at
    the end of a season: ``below_by_season`` in each, ``below_ever`` in any, ``below_at_end`` in the
    last. ``short_ever`` is the chance that some take cannot be had in full; ``cut_next`` that the
    rule allows less after the first season than was allowed in it. ``mean_take`` is over draws and
    seasons; ``end_median`` is the median biomass at the end of the last season. ``lowest_season``,
    counted from 0, is the one that ends with the lowest mean biomass, which is ``lowest_biomass``.
    """

    candidate: float | None
    below_by_season: tuple[float, ...]
    below_ever: float
    below_at_end: float
    end_median: float
    short_ever: float
    cut_next: float
    mean_take: float
    lowest_season: int
    lowest_biomass: float


def under_takes(
    *,
    ahead: prospects.Prospects,
    candidates: Sequence[float],
    rule: rules.Rule,
    limit: float | FloatArray,
    order: growth.Order,
) -> tuple[RiskRow, ...]:
    """Return one row for each candidate take, the same every season, in the order given.

    :param rule: what next season's allowable will be set by, for the chance of a cut.
    :param limit: the biomass not to be below: one for all draws, or one for each.
    :raises ImpossibleProjection: if a candidate is negative.
    """
    for each in candidates:
        prospects.require(name="candidate", found=each, holds=each >= 0, accepted="0 or more")
    plans = [_Plan(candidate=float(each), rule=rule) for each in candidates]
    return _rows(ahead, plans, limit, order)


def under_rule(
    *, ahead: prospects.Prospects, rule: rules.Rule, limit: float | FloatArray, order: growth.Order
) -> RiskRow:
    """Return the row of a rule that sets every season's take from that season's true biomass."""
    return _rows(ahead, [_Plan(candidate=None, rule=rule)], limit, order)[0]


@dataclass(frozen=True, slots=True, kw_only=True)
class Band:
    """The middle part of the draws by season: ``level`` of them lie between low and high."""

    level: float
    low: tuple[float, ...]
    high: tuple[float, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Fan:
    """Median and 50, 80 and 95 % bands of biomass, one value for each moment."""

    median: tuple[float, ...]
    bands: tuple[Band, ...]


def fan_of(paths: FloatArray) -> Fan:
    """Return the fan of biomass (moments, draws).

    :raises TooFewDraws: if fewer than 200 draws are given.
    """
    if paths.shape[1] < prospects.FEWEST_DRAWS:
        raise prospects.TooFewDraws(found=paths.shape[1], accepted=prospects.FEWEST_DRAWS)
    edges = [0.5]
    for level in BAND_LEVELS:
        edges += [(1 - level) / 2, (1 + level) / 2]
    median, *pairs = np.quantile(paths, edges, axis=1).tolist()
    bands = tuple(
        Band(level=level, low=tuple(pairs[2 * at]), high=tuple(pairs[2 * at + 1]))
        for at, level in enumerate(BAND_LEVELS)
    )
    return Fan(median=tuple(median), bands=bands)


def fan(*, ahead: prospects.Prospects, policy: prospects.Policy, order: growth.Order) -> Fan:
    """Return the fan of biomass under a take or a rule: now, then the end of each season.

    :raises ImpossibleProjection: if the take is negative.
    """
    if isinstance(policy, int | float):
        prospects.require(name="candidate", found=policy, holds=policy >= 0, accepted="0 or more")
    paths = np.empty((len(ahead.luck) + 1, len(ahead.draws)))
    paths[0] = ahead.draws.biomass
    for block in prospects.blocks(ahead):
        for season, passed in enumerate(prospects.seasons_of(block, policy, order)):
            paths[season + 1, block.rows] = passed.biomass
    return fan_of(paths)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Plan:
    candidate: float | None
    rule: rules.Rule

    @property
    def policy(self) -> prospects.Policy:
        return self.rule if self.candidate is None else self.candidate


class _Tally:
    """What is counted while one plan is carried through, block by block."""

    def __init__(self, *, seasons: int, draws: int) -> None:
        self.below: NDArray[np.int64] = np.zeros(seasons, dtype=np.int64)
        self.biomass: FloatArray = np.zeros(seasons)
        self.ever: NDArray[np.bool_] = np.zeros(draws, dtype=np.bool_)
        self.short: NDArray[np.bool_] = np.zeros(draws, dtype=np.bool_)
        self.last: FloatArray = np.zeros(draws)
        self.taken = 0.0
        self.cut = 0

    def row(self, plan: _Plan) -> RiskRow:
        count, seasons = len(self.ever), len(self.below)
        below = tuple(float(each) / count for each in self.below)
        return RiskRow(
            candidate=plan.candidate,
            below_by_season=below,
            below_ever=np.count_nonzero(self.ever) / count,
            below_at_end=below[-1],
            end_median=float(np.median(self.last)),
            short_ever=np.count_nonzero(self.short) / count,
            cut_next=self.cut / count,
            mean_take=self.taken / (count * seasons),
            lowest_season=int(self.biomass.argmin()),
            lowest_biomass=float(self.biomass.min()) / count,
        )


def _rows(
    ahead: prospects.Prospects,
    plans: Sequence[_Plan],
    limit: float | FloatArray,
    order: growth.Order,
) -> tuple[RiskRow, ...]:
    seasons, count = ahead.luck.shape
    limits = np.ascontiguousarray(np.broadcast_to(np.asarray(limit, dtype=np.float64), (count,)))
    tallies = [_Tally(seasons=seasons, draws=count) for _ in plans]
    # Blocks outside, plans inside: the luck of a block is read from memory once for all plans.
    for block in prospects.blocks(ahead):
        for plan, tally in zip(plans, tallies, strict=True):
            _count(block, plan, order, limits[block.rows], tally)
    return tuple(tally.row(plan) for plan, tally in zip(plans, tallies, strict=True))


def _count(
    block: prospects.Block, plan: _Plan, order: growth.Order, limit: FloatArray, tally: _Tally
) -> None:
    ever, short = tally.ever[block.rows], tally.short[block.rows]
    mask = np.empty_like(ever)
    for season, passed in enumerate(prospects.seasons_of(block, plan.policy, order)):
        biomass = passed.biomass
        if season == 0:
            next_take = rules.take(rule=plan.rule, biomass=biomass)
            tally.cut += int(np.count_nonzero(next_take < passed.allowed))
        tally.taken += _total(passed.allowed, len(biomass))
        if passed.lack is not None:
            tally.taken += float(passed.lack.sum())
            short |= np.less(passed.lack, 0.0, out=mask)
        ever |= np.less(biomass, limit, out=mask)
        tally.below[season] += np.count_nonzero(mask)
        tally.biomass[season] += biomass.sum()
    tally.last[block.rows] = biomass


def _total(allowed: float | FloatArray, count: int) -> float:
    return allowed * count if isinstance(allowed, int | float) else float(allowed.sum())
