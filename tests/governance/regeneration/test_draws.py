"""Draws against an integration over a grid that is written out here a second time."""

import dataclasses
import functools
import math

import numpy as np
import pytest

from governance.regeneration import draws, fitting, growth, likelihood, series
from tests.governance.regeneration import albacore

COUNT = 10_000


@functools.cache
def albacore_fit() -> fitting.Fit:
    return fitting.fit(
        series=series.Series(years=albacore.YEARS, catches=albacore.CATCHES, index=albacore.INDEX),
        setting=likelihood.Setting(
            p=1.0,
            order=growth.Order.GROW_THEN_TAKE,
            timing=likelihood.IndexTiming.START_OF_YEAR,
        ),
    )


@functools.cache
def albacore_draws(seed: int = 7) -> draws.Draws:
    return draws.plausible(fit=albacore_fit(), draws=COUNT, generator=np.random.default_rng(seed))


@dataclasses.dataclass
class Grid:
    """The chance of each (r, K), flat on r and ln K, with what follows from it."""

    chance: np.ndarray
    r: np.ndarray
    K: np.ndarray
    rss: np.ndarray
    log_q: np.ndarray
    biomass: np.ndarray

    def mean(self, values: np.ndarray) -> float:
        return float((self.chance * values).sum())


@functools.cache
def grid() -> Grid:
    r, log_K = np.meshgrid(np.linspace(0.01, 1.2, 700), np.linspace(4.5, 8.2, 900), indexing="ij")
    K = np.exp(log_K)
    now, ratios, alive = K.copy(), [], np.ones(K.shape, bool)
    for caught, seen in zip(albacore.CATCHES, albacore.INDEX, strict=True):
        ratios.append(math.log(seen) - np.log(now))
        now = now + r * now * (1 - now / K) - caught
        alive &= now > 0
        now = np.maximum(now, 1e-9)
    log_q = np.mean(ratios, axis=0)
    rss = sum((ratio - log_q) ** 2 for ratio in ratios)
    n = len(albacore.CATCHES)
    chance = np.where(alive, rss ** (-(n - 1) / 2), 0.0)
    return Grid(chance=chance / chance.sum(), r=r, K=K, rss=rss, log_q=log_q, biomass=now)


def close(values: np.ndarray, expected: float) -> None:
    """Hold a mean of draws to five of its standard errors, and a little for the grid."""
    error = float(np.std(values)) / math.sqrt(len(values))
    assert float(np.mean(values)) == pytest.approx(expected, abs=5 * error + 1e-3 * abs(expected))


def test_parameters_are_drawn_by_their_chance() -> None:
    held, truth = albacore_draws(), grid()
    close(held.r, truth.mean(truth.r))
    close(np.log(held.K), truth.mean(np.log(truth.K)))
    close(np.log(held.biomass), truth.mean(np.log(truth.biomass)))
    for edge in (0.15, 0.3, 0.45):
        close(1.0 * (held.r < edge), truth.mean(1.0 * (truth.r < edge)))


def test_error_and_catchability_are_drawn_with_them() -> None:
    held, truth = albacore_draws(), grid()
    n = len(albacore.CATCHES)
    # The mean of 1 over chi-squared with n-1 degrees of freedom is 1/(n-3).
    close(held.sigma**2, truth.mean(truth.rss) / (n - 3))
    close(np.log(held.q), truth.mean(truth.log_q))
    spread = truth.mean(truth.log_q**2) - truth.mean(truth.log_q) ** 2
    spread += truth.mean(truth.rss) / (n - 3) / n
    assert float(np.var(np.log(held.q))) == pytest.approx(spread, rel=0.06)


def test_biomass_is_where_the_history_of_the_draw_ends() -> None:
    held = albacore_draws()
    paths = draws.histories(fit=albacore_fit(), draws=held)
    assert paths.shape == (len(albacore.YEARS) + 1, COUNT)
    np.testing.assert_array_equal(paths[0], held.K)
    np.testing.assert_allclose(paths[-1], held.biomass, rtol=1e-12)
    assert (held.biomass > 0).all()


def test_one_seed_one_answer() -> None:
    again = draws.plausible(fit=albacore_fit(), draws=COUNT, generator=np.random.default_rng(7))
    for name in ("r", "K", "q", "sigma", "biomass"):
        np.testing.assert_array_equal(getattr(albacore_draws(), name), getattr(again, name))
        assert (getattr(albacore_draws(), name) != getattr(albacore_draws(8), name)).any()


def test_the_draws_are_worth_nearly_their_number() -> None:
    held = albacore_draws()
    assert len(held) == COUNT
    assert 0.9 * COUNT < held.effective <= COUNT
    assert len(np.unique(held.r)) > 0.9 * COUNT


@pytest.mark.parametrize(
    ("weights", "expected"),
    [((1, 1, 1, 1), 4), ((1, 0, 0, 0), 1), ((2, 1, 1), 16 / 6), ((0.3, 0.3), 2)],
)
def test_effective_size(weights: tuple[float, ...], expected: float) -> None:
    """Kish 1965 (from memory): (sum w)² / sum w²; worked by hand."""
    assert draws.effective_size(np.array(weights)) == pytest.approx(expected)


def test_a_sharp_truth_is_found_in_a_wide_region() -> None:
    """Data with an error of a millionth: draws lie within it, and the sampler still mixes."""
    noise = np.random.default_rng(3).normal(0, 1e-6, 10)
    now, index = 1000.0, []
    catches = (100.0, 150.0, 200.0, 180.0, 120.0, 80.0, 60.0, 90.0, 110.0, 130.0)
    for caught, each in zip(catches, noise, strict=True):
        index.append(0.001 * now * math.exp(each))
        now = now + 0.5 * now * (1 - now / 1000) - caught
    fit = fitting.fit(
        series=series.Series(years=tuple(range(10)), catches=catches, index=tuple(index)),
        setting=albacore_fit().setting,
    )
    held = draws.plausible(fit=fit, draws=1_000, generator=np.random.default_rng(1))
    assert held.effective > 500
    assert np.abs(held.r - 0.5).max() < 1e-3
    assert np.abs(held.biomass - now).max() < 1


@pytest.mark.parametrize("order", growth.Order)
def test_every_draw_could_bear_its_catches(order: growth.Order) -> None:
    """The largest catch comes after the index has ended, so that only this rules a draw out."""
    made = series.Series(
        years=tuple(range(8)),
        catches=(20.0, 30.0, 30.0, 30.0, 30.0, 30.0, 30.0, 190.0),
        index=(10.0, 9.4, 8.7, 8.6, 8.0, 8.1, None, None),
    )
    setting = likelihood.Setting(p=1.0, order=order, timing=likelihood.IndexTiming.START_OF_YEAR)
    fit = fitting.fit(series=made, setting=setting)
    held = draws.plausible(fit=fit, draws=1_000, generator=np.random.default_rng(1))
    before = draws.histories(fit=fit, draws=held)[-2]
    there = before
    if order is growth.Order.GROW_THEN_TAKE:
        there = before + held.r * before * (1 - before / held.K)
    assert (there > 190).all()
    assert there.min() < 220
    best = np.array([fit.biomass[-2]])
    if order is growth.Order.GROW_THEN_TAKE:
        best = best + fit.model.production(best)
    assert best[0] >= 190


def test_arrays_of_one_length_that_nobody_changes() -> None:
    held = albacore_draws()
    with pytest.raises(ValueError, match="read-only"):
        held.r[0] = 1
    with pytest.raises(draws.UnequalDraws):
        dataclasses.replace(held, r=held.r[:-1].copy())
