"""Harvest control rules against advice and rules that others publish."""

import math
from collections.abc import Callable

import numpy as np
import pytest

from governance.regeneration import growth, rules


def full(fraction: float) -> growth.HarvestFraction:
    return growth.HarvestFraction(of_biomass=fraction)


def one_take(rule: rules.Rule, biomass: float) -> float:
    return float(rules.take(rule=rule, biomass=np.array([biomass]))[0])


class TestIcesAdviceRule:
    """F = Fmsy·min(1, SSB/MSYBtrigger): a ramp that points at the origin."""

    def ramped(self, *, biomass: float, limit: float, trigger: float) -> float:
        part = rules.multiplier(
            biomass=np.array([biomass]), limit=limit, trigger=trigger, ramp=rules.Ramp.FROM_ZERO
        )
        return float(part[0])

    def test_sea_bass_in_biscay_2024(self) -> None:
        """ICES advice 2023, stock bss.27.8ab: printed F 0.129, and 0.109 for the lower one."""
        part = self.ramped(biomass=15569, limit=0, trigger=16688)
        assert part == pytest.approx(0.9329458, rel=1e-6)
        assert 0.138 * part == pytest.approx(0.128747, rel=1e-5)
        assert round(0.138 * part, 3) == 0.129
        assert 0.117 * part == pytest.approx(0.109155, rel=1e-5)
        assert round(0.117 * part, 3) == 0.109

    def test_above_half_and_at_nothing(self) -> None:
        """ICES advice basis; computed, Fmsy = 0.2."""
        assert 0.2 * self.ramped(biomass=100, limit=0, trigger=100) == 0.2
        assert 0.2 * self.ramped(biomass=170, limit=0, trigger=100) == 0.2
        assert 0.2 * self.ramped(biomass=50, limit=0, trigger=100) == 0.1
        assert self.ramped(biomass=0, limit=0, trigger=100) == 0

    def test_a_limit_may_demand_nothing_at_one_stroke(self) -> None:
        rule = rules.HockeyStick(
            limit=40, trigger=100, fraction=full(0.2), ramp=rules.Ramp.FROM_ZERO
        )
        assert one_take(rule, 40) == 0
        assert one_take(rule, 50) == pytest.approx(0.2 * 0.5 * 50)

    def test_a_ramp_from_the_limit_is_another_rule(self) -> None:
        rule = rules.HockeyStick(
            limit=40, trigger=100, fraction=full(0.2), ramp=rules.Ramp.FROM_LIMIT
        )
        assert one_take(rule, 40) == 0
        assert one_take(rule, 70) == pytest.approx(0.2 * 0.5 * 70)
        assert one_take(rule, 100) == pytest.approx(20)


class TestFortyTen:
    """B0 = 10000, F = 0.06."""

    @pytest.mark.parametrize(
        ("depletion", "expected"),
        [
            *((0.05, 0), (0.10, 0), (0.15, 40), (0.25, 120), (0.30, 160)),
            *((0.39, 232), (0.40, 240), (0.60, 360)),
        ],
    )
    def test_straight_line_in_catch(self, depletion: float, expected: float) -> None:
        """Pacific groundfish default policy; rule verified in words, numbers computed."""
        rule = rules.FortyTen(
            unfished=10_000, fraction=full(0.06), reading=rules.Reading.LINE_IN_CATCH
        )
        assert one_take(rule, depletion * 10_000) == pytest.approx(expected, rel=1e-6, abs=1e-9)

    @pytest.mark.parametrize(
        ("depletion", "expected"),
        [(0.05, 0), (0.15, 15), (0.25, 75), (0.30, 120), (0.39, 226.2), (0.40, 240), (0.60, 360)],
    )
    def test_ramp_in_fraction(self, depletion: float, expected: float) -> None:
        """Common practice; computed."""
        rule = rules.FortyTen(
            unfished=10_000, fraction=full(0.06), reading=rules.Reading.RAMP_IN_FRACTION
        )
        assert one_take(rule, depletion * 10_000) == pytest.approx(expected, rel=1e-6, abs=1e-9)

    @pytest.mark.parametrize(
        ("depletion", "expected"), [(0.05, 0), (0.15, 75), (0.20, 112.5), (0.25, 150), (0.50, 300)]
    )
    def test_twenty_five_five(self, depletion: float, expected: float) -> None:
        """The flatfish policy named in 50 CFR 660.40; numbers computed."""
        rule = rules.FortyTen(
            unfished=10_000,
            fraction=full(0.06),
            reading=rules.Reading.LINE_IN_CATCH,
            lower=0.05,
            upper=0.25,
        )
        assert one_take(rule, depletion * 10_000) == pytest.approx(expected, rel=1e-6, abs=1e-9)


class TestConstantEscapement:
    """Schaefer r = 0.4, K = 1000, escapement 500, from B = 1000."""

    def run(self, order: growth.Order, seasons: int) -> np.ndarray:
        """Return rows of biomass and take."""
        model = growth.Schaefer(r=0.4, K=1000)
        rule = rules.ConstantEscapement(escapement=500)
        biomass, seen = np.array([1000.0]), []
        for _ in range(seasons):
            take = rules.take(rule=rule, biomass=biomass)
            done = growth.step(model=model, biomass=biomass, take=take, order=order)
            seen.append((float(biomass[0]), float(done.taken[0])))
            biomass = done.biomass
        return np.array(seen)

    def test_take_then_grow(self) -> None:
        """Reed 1979, J. Environ. Econ. Manage. 6:350-363; computed. 100 is the MSY."""
        seen = self.run(growth.Order.TAKE_THEN_GROW, 6)
        np.testing.assert_allclose(seen, [(1000, 500)] + [(600, 100)] * 5, rtol=1e-12)

    def test_grow_then_take(self) -> None:
        """The same rule in the other order; algebra, computed."""
        seen = self.run(growth.Order.GROW_THEN_TAKE, 60)
        expected = [(1000, 500), (500, 0), (600, 100), (596, 96), (596.3136, 96.3136)]
        np.testing.assert_allclose(seen[:5], expected, rtol=1e-9)
        np.testing.assert_allclose(seen[-1], (596.291, 96.291), atol=5e-4)


@pytest.mark.parametrize(
    "make",
    [
        lambda: rules.HockeyStick(
            limit=100, trigger=100, fraction=full(0.1), ramp=rules.Ramp.FROM_LIMIT
        ),
        lambda: rules.HockeyStick(
            limit=-1, trigger=100, fraction=full(0.1), ramp=rules.Ramp.FROM_LIMIT
        ),
        lambda: rules.HockeyStick(
            limit=math.nan, trigger=100, fraction=full(0.1), ramp=rules.Ramp.FROM_LIMIT
        ),
        lambda: rules.FortyTen(unfished=0, fraction=full(0.1), reading=rules.Reading.LINE_IN_CATCH),
        lambda: rules.FortyTen(
            unfished=10,
            fraction=full(0.1),
            reading=rules.Reading.LINE_IN_CATCH,
            lower=0.4,
            upper=0.1,
        ),
        lambda: rules.ConstantEscapement(escapement=-1),
        lambda: rules.ConstantEscapement(escapement=math.inf),
    ],
)
def test_a_rule_that_contradicts_itself_is_refused(make: Callable[[], rules.Rule]) -> None:
    with pytest.raises(rules.ImpossibleRule):
        make()
