"""The recursion and the likelihood of given parameters, against numbers worked out elsewhere."""

import math

import numpy as np
import pytest

from governance.regeneration import growth, likelihood, series
from tests.governance.regeneration import albacore

SERIES = series.Series(years=albacore.YEARS, catches=albacore.CATCHES, index=albacore.INDEX)
SETTING = likelihood.Setting(
    p=1.0,
    order=growth.Order.GROW_THEN_TAKE,
    timing=likelihood.IndexTiming.START_OF_YEAR,
)


def one(*, r: float, K: float, setting: likelihood.Setting = SETTING) -> likelihood.Surface:
    return likelihood.surface(series=SERIES, setting=setting, r=np.array([r]), K=np.array([K]))


def test_biomass_without_fitting() -> None:
    """The series of Polacheck, Hilborn & Punt 1993 at r = 0.328, K = 239.6; computed."""
    biomass = one(r=0.328, K=239.6).biomass[:, 0]
    expected = {
        **{1968: 223.7000, 1970: 184.5699, 1975: 138.5328, 1980: 130.4739},
        **{1985: 125.6082, 1989: 75.4984, 1990: 67.1588},
    }
    for year, value in expected.items():
        assert biomass[year - 1967] == pytest.approx(value, abs=5e-5)


def test_closed_form_catchability_and_squares() -> None:
    """The same; q comes to 0.2671, as published."""
    found = one(r=0.328, K=239.6)
    assert math.exp(found.log_q[0]) == pytest.approx(0.26714925, rel=1e-7)
    assert found.rss[0] == pytest.approx(0.28133669, rel=1e-7)
    assert found.feasible[0]


def test_many_stocks_at_once_are_each_as_alone() -> None:
    r, K = np.array([0.2, 0.328, 0.5]), np.array([300.0, 239.6, 200.0])
    together = likelihood.surface(series=SERIES, setting=SETTING, r=r, K=K)
    for at in range(3):
        alone = one(r=float(r[at]), K=float(K[at]))
        assert together.nll()[at] == pytest.approx(alone.nll()[0], rel=1e-14)


@pytest.mark.parametrize("order", growth.Order)
@pytest.mark.parametrize("p", [0.0, 0.19, 1.0])
def test_history_is_the_models_own_steps(order: growth.Order, p: float) -> None:
    setting = likelihood.Setting(p=p, order=order, timing=likelihood.IndexTiming.MID_YEAR)
    biomass = one(r=0.3, K=260.0, setting=setting).biomass[:, 0]
    model, now = growth.of_shape(r=0.3, K=260.0, p=p), np.array([260.0])
    for year, caught in enumerate(albacore.CATCHES):
        now = growth.step(model=model, biomass=now, take=np.array([caught]), order=order).biomass
        assert biomass[year + 1] == pytest.approx(now[0], rel=1e-12)


@pytest.mark.parametrize("order", growth.Order)
def test_a_stock_too_small_for_its_catches_is_not_feasible(order: growth.Order) -> None:
    setting = likelihood.Setting(p=1.0, order=order, timing=likelihood.IndexTiming.START_OF_YEAR)
    found = one(r=0.05, K=60.0, setting=setting)
    assert not found.feasible[0]
    assert np.isfinite(found.nll()).all()


def test_a_negative_shape_is_refused() -> None:
    with pytest.raises(growth.ImpossibleParameter):
        likelihood.Setting(
            p=-0.5,
            order=growth.Order.GROW_THEN_TAKE,
            timing=likelihood.IndexTiming.START_OF_YEAR,
        )
