"""Fits against optima found elsewhere, published estimates, and stocks whose truth is known."""

import math

import numpy as np
import pytest

from governance.regeneration import fitting, growth, likelihood, series
from tests.governance.regeneration import albacore

START, MID = likelihood.IndexTiming.START_OF_YEAR, likelihood.IndexTiming.MID_YEAR


def albacore_fit(
    *, p: float = 1.0, timing: likelihood.IndexTiming = START
) -> tuple[fitting.Fit, growth.ReferencePoints]:
    found = fitting.fit(
        series=series.Series(years=albacore.YEARS, catches=albacore.CATCHES, index=albacore.INDEX),
        setting=likelihood.Setting(p=p, order=growth.Order.GROW_THEN_TAKE, timing=timing),
    )
    return found, growth.reference_points(found.model)


class TestAlbacore:
    """Polacheck, Hilborn & Punt 1993 series; optima by Nelder-Mead from 18 starts, computed."""

    def test_schaefer_with_start_of_year_index(self) -> None:
        found, points = albacore_fit()
        assert found.model == growth.Schaefer(r=found.model.r, K=found.model.K)
        assert found.model.r == pytest.approx(0.31972, rel=1e-3)
        assert found.model.K == pytest.approx(243.366, rel=1e-3)
        assert found.q == pytest.approx(0.264203, rel=1e-3)
        assert found.sigma == pytest.approx(0.110365, rel=1e-4)
        assert found.nll == pytest.approx(-18.055545, abs=1e-4)
        assert points.msy == pytest.approx(19.4525, rel=1e-3)
        assert found.biomass[-2] / found.model.K == pytest.approx(0.30825, rel=1e-3)
        assert found.biomass[-1] == pytest.approx(66.310, rel=1e-3)
        assert found.at_bounds == ()

    def test_schaefer_with_mid_year_index(self) -> None:
        found, points = albacore_fit(timing=MID)
        assert found.model.r == pytest.approx(0.32429, rel=1e-3)
        assert found.model.K == pytest.approx(242.000, rel=1e-3)
        assert found.q == pytest.approx(0.270802, rel=1e-3)
        assert found.sigma == pytest.approx(0.109053, rel=1e-4)
        assert found.nll == pytest.approx(-18.330641, abs=1e-4)
        assert points.msy == pytest.approx(19.6196, rel=1e-3)

    def test_fox(self) -> None:
        """Of the form r·B·ln(K/B); r of the form r·B·(1-lnB/lnK) is 1.342378."""
        found, points = albacore_fit(p=0.0)
        assert found.model.r == pytest.approx(0.246388, rel=1e-3)
        assert found.model.K == pytest.approx(232.346, rel=1e-3)
        assert found.q == pytest.approx(0.292512, rel=1e-3)
        assert found.sigma == pytest.approx(0.106415, rel=1e-4)
        assert found.nll == pytest.approx(-18.893837, abs=1e-4)
        assert points.msy == pytest.approx(21.0601, rel=1e-3)
        assert found.model.r * math.log(found.model.K) == pytest.approx(1.342378, rel=1e-3)

    def test_published_estimates(self) -> None:
        """Polacheck et al. 1993, estimates from memory; their optimum is a little off ours."""
        found, points = albacore_fit()
        assert found.model.r == pytest.approx(0.328, rel=0.05)
        assert found.model.K == pytest.approx(239.6, rel=0.03)
        assert found.q == pytest.approx(0.2671, rel=0.03)
        assert points.msy == pytest.approx(19.65, rel=0.02)

    def test_residuals_are_of_the_index_and_have_no_mean(self) -> None:
        found, _ = albacore_fit()
        expected = [
            math.log(seen / (found.q * biomass))
            for seen, biomass in zip(albacore.INDEX, found.biomass, strict=False)
        ]
        assert found.residuals == pytest.approx(expected, abs=1e-12)
        assert sum(expected) == pytest.approx(0, abs=1e-12)

    def test_the_likelihood_is_flat_in_r(self) -> None:
        """Likelihood-ratio interval on a grid of 0.005; computed."""
        found, _ = albacore_fit()
        interval = fitting.interval_of_r(fit=found, grid=np.arange(0.05, 0.8, 0.005))
        assert interval.low == pytest.approx(0.16, abs=0.0051)
        assert interval.high == pytest.approx(0.485, abs=0.0051)

    def test_an_interval_that_runs_off_the_grid_has_no_end(self) -> None:
        found, _ = albacore_fit()
        interval = fitting.interval_of_r(fit=found, grid=np.arange(0.3, 0.4, 0.01))
        assert interval == fitting.Interval(low=None, high=None)

    def test_the_same_series_gives_the_same_fit(self) -> None:
        assert albacore_fit()[0] == albacore_fit()[0]


CATCHES = (100.0, 150.0, 200.0, 180.0, 120.0, 80.0, 60.0, 90.0, 110.0, 130.0)
# r = 0.5, K = 1000, q = 0.001, grow then take; by algebra.
BIOMASS = (
    *(1000, 900, 795, 676.4875, 605.913581, 605.304738, 644.760194, 699.282437),
    *(714.425692, 706.436503, 680.128488),
)


class TestKnownTruth:
    """Data made without error: the fit has to return what made them."""

    def recovered(
        self, index: list[float | None], *, order: growth.Order, p: float = 1.0
    ) -> fitting.Fit:
        made = series.Series(years=tuple(range(1, 11)), catches=CATCHES, index=tuple(index))
        setting = likelihood.Setting(p=p, order=order, timing=START)
        return fitting.fit(series=made, setting=setting)

    def test_grow_then_take(self) -> None:
        found = self.recovered(
            [0.001 * each for each in BIOMASS[:-1]], order=growth.Order.GROW_THEN_TAKE
        )
        assert found.model.r == pytest.approx(0.5, rel=1e-5)
        assert found.model.K == pytest.approx(1000, rel=1e-5)
        assert found.q == pytest.approx(0.001, rel=1e-5)
        assert found.biomass == pytest.approx(BIOMASS, rel=1e-6)

    def test_years_without_an_index(self) -> None:
        index: list[float | None] = [0.001 * each for each in BIOMASS[:-1]]
        index[2] = index[6] = None
        found = self.recovered(index, order=growth.Order.GROW_THEN_TAKE)
        assert found.model.r == pytest.approx(0.5, rel=1e-5)
        assert found.model.K == pytest.approx(1000, rel=1e-5)
        assert [at for at, each in enumerate(found.residuals) if each is None] == [2, 6]

    def test_take_then_grow_fox(self) -> None:
        biomass, seen = 1000.0, []
        for caught in CATCHES:
            seen.append(0.02 * biomass)
            left = biomass - caught
            biomass = left + 0.3 * left * math.log(1000 / left)
        found = self.recovered(list(seen), order=growth.Order.TAKE_THEN_GROW, p=0.0)
        assert found.model.r == pytest.approx(0.3, rel=1e-5)
        assert found.model.K == pytest.approx(1000, rel=1e-5)
        assert found.q == pytest.approx(0.02, rel=1e-5)
        assert found.biomass[-1] == pytest.approx(biomass, rel=1e-5)


def test_data_that_hold_no_parameter_say_so() -> None:
    """Small catches and an index that only trembles: any larger stock would do as well."""
    made = series.Series(
        years=tuple(range(10)), catches=(1.0,) * 10, index=(1.0, 1.01, 0.99) * 3 + (1.0,)
    )
    setting = likelihood.Setting(p=1.0, order=growth.Order.GROW_THEN_TAKE, timing=START)
    assert fitting.fit(series=made, setting=setting).at_bounds
