"""The risk table of many draws, by the program and by hand.

By hand means what a practitioner would write in numpy: all candidates at once, one array of
(candidates, draws) for every intermediate result of every season. Both sides get the same draws
and the same luck, and have to count the same before either is timed.
"""

import time
from collections.abc import Callable

import numpy as np

from governance.regeneration import draws, growth, projection, prospects, rules
from tests.bench import rounds

_BASELINE = "numpy, an array a step"
# Draws, seasons and candidates. The draws are the same: they decide what fits a cache.
_SIZES = {"small": (10_000, 10, 30), "full": (10_000, 20, 30)}
_FRACTION = 0.1
# A round takes a tenth of a second, so that many are cheap and outvote a busy machine.
_ROUNDS = 25


def measure(*, name: str, size: str, p: float, bound: float) -> rounds.Measurement:
    """Measure the risk table of one shape of growth, once both sides agree on it."""
    case = Case(p=p, size=size)
    count, seasons, candidates = _SIZES[size]
    agree(case)
    return rounds.measure(
        name=name,
        size=f"{size}: {count} draws, {seasons} seasons, {candidates} candidates",
        baseline=_BASELINE,
        program_side=_tables_per_second(case.by_the_program),
        baseline_side=_tables_per_second(case.by_hand),
        bound=bound,
        rounds=_ROUNDS,
    )


def _tables_per_second(side: Callable[[], object]) -> rounds.Side:
    def timed() -> float:
        started = time.perf_counter()
        side()
        return 1 / (time.perf_counter() - started)

    return timed


def agree(case: "Case") -> None:
    """Assert that both sides count the same draws and come to the same means."""
    for row, (chances, means, lowest_season) in zip(
        case.by_the_program(), case.by_hand(), strict=True
    ):
        assert (*row.below_by_season, row.below_ever, row.short_ever, row.cut_next) == chances
        ours = (row.mean_take, row.lowest_biomass, row.end_median)
        np.testing.assert_allclose(ours, means, rtol=1e-9)
        assert row.lowest_season == lowest_season


class Case:
    """One set of prospects and candidates, some of which no stock can bear for long."""

    def __init__(self, *, p: float, size: str) -> None:
        count, seasons, candidates = _SIZES[size]
        generator = np.random.default_rng(1)
        K, one = generator.lognormal(np.log(240), 0.2, count), np.ones(count)
        self.ahead = prospects.drawn(
            draws=draws.Draws(
                p=p,
                r=generator.lognormal(np.log(0.33), 0.25, count),
                K=K,
                q=one,
                sigma=one,
                biomass=K * generator.uniform(0.2, 0.5, count),
                effective=count,
            ),
            seasons=seasons,
            process_sd=0.1,
            generator=generator,
        )
        self.limit = 0.2 * K
        self.candidates = np.linspace(0, 40, candidates)

    def by_the_program(self) -> tuple[projection.RiskRow, ...]:
        """Return the risk table as the program makes it."""
        return projection.under_takes(
            ahead=self.ahead,
            candidates=self.candidates.tolist(),
            rule=rules.ConstantFraction(fraction=growth.HarvestFraction(of_biomass=_FRACTION)),
            limit=self.limit,
            order=growth.Order.GROW_THEN_TAKE,
        )

    def by_hand(self) -> list[tuple[tuple[float, ...], tuple[float, float, float], int]]:
        """Return chances, the three means and medians, and the lowest season by candidate."""
        r, K, p = self.ahead.draws.r, self.ahead.draws.K, self.ahead.draws.p
        take = self.candidates[:, np.newaxis]
        biomass = np.tile(self.ahead.draws.biomass, (len(take), 1))
        ever = short = np.zeros(biomass.shape, dtype=bool)
        below, means, taken = [], [], []
        for season, luck in enumerate(self.ahead.luck):
            if p == 1:
                grown = biomass + r * biomass * (1 - biomass / K)
            else:
                grown = biomass + r / p * biomass * (1 - (biomass / K) ** p)
            got = np.minimum(take, grown)
            biomass = (grown - got) * luck
            if season == 0:
                cut = (_FRACTION * biomass < take).mean(axis=1)
            is_below = biomass < self.limit
            ever, short = ever | is_below, short | (got < take)
            below.append(is_below.mean(axis=1))
            means.append(biomass.mean(axis=1))
            taken.append(got.mean(axis=1))
        chances = np.vstack((*below, ever.mean(axis=1), short.mean(axis=1), cut)).T
        middles = (np.mean(taken, axis=0), np.min(means, axis=0), np.median(biomass, axis=1))
        return [
            (tuple(each.tolist()), (float(mean_take), float(least), float(end)), int(season))
            for each, mean_take, least, end, season in zip(
                chances, *middles, np.argmin(means, axis=0), strict=True
            )
        ]
