"""Growth models against published formulas and numbers worked out from them elsewhere."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from governance.regeneration import growth

R, K = 1.1, 1000.0


def points_of(p: float) -> tuple[float, float, float]:
    points = growth.reference_points(growth.of_shape(r=R, K=K, p=p))
    return points.msy, points.bmsy, points.fmsy.of_biomass


class TestReferencePoints:
    def test_schaefer(self) -> None:
        """Schaefer 1954; Polacheck, Hilborn & Punt 1993; computed."""
        assert points_of(1.0) == pytest.approx((275, 500, 0.55), rel=1e-6)

    def test_a_shape_next_to_zero_is_fox(self) -> None:
        """Polacheck et al. 1993; Fox 1970; computed. MSY is rK/e and Bmsy is K/e."""
        assert points_of(1e-8) == pytest.approx((404.667386, 367.8794, 1.1), rel=1e-6)
        assert points_of(0.0) == pytest.approx((404.667385, 367.879441, 1.1), rel=1e-8)

    @pytest.mark.parametrize(
        ("p", "msy", "bmsy", "fmsy"),
        [
            (0.5, 325.925926, 444.444444, 0.733333),
            (2.0, 211.695099, 577.350269, 0.366667),
            (0.19, 370.024208, 400.298916, 0.924370),
        ],
    )
    def test_other_shapes(self, p: float, msy: float, bmsy: float, fmsy: float) -> None:
        """Pella & Tomlinson 1969 (IATTC Bulletin 13:421-496); computed."""
        assert points_of(p) == pytest.approx((msy, bmsy, fmsy), rel=1e-6)


class TestFletcher:
    @pytest.mark.parametrize(
        ("n", "g", "bmsy_over_K"),
        [
            (2.0, 4.0, 0.5),
            (1.5, 6.75, 0.444444),
            (3.0, 2.598076, 0.577350),
            (1.19, 15.646202, 0.400299),
        ],
    )
    def test_is_the_same_model_in_other_letters(
        self, n: float, g: float, bmsy_over_K: float
    ) -> None:
        """Fletcher 1978: P = g·MSY·(B/K-(B/K)^n); the numbers computed."""
        model = growth.from_fletcher(msy=275.0, K=K, n=n)
        biomass = np.linspace(1.0, 1200.0, 40)
        written_out = g * 275.0 * (biomass / K - (biomass / K) ** n)
        np.testing.assert_allclose(model.production(biomass), written_out, rtol=2e-6, atol=1e-4)
        points = growth.reference_points(model)
        assert points.bmsy / K == pytest.approx(bmsy_over_K, rel=2e-6)
        assert points.msy == pytest.approx(275.0, rel=1e-12)

    def test_n_of_one_is_fox(self) -> None:
        """Fletcher 1978; the limit of the formula is -e·MSY·(B/K)·ln(B/K)."""
        model = growth.from_fletcher(msy=275.0, K=K, n=1.0)
        share = np.array([0.1, 0.5, 0.9])
        expected = -math.e * 275.0 * share * np.log(share)
        np.testing.assert_allclose(model.production(share * K), expected, rtol=1e-12)

    def test_n_below_one_is_refused(self) -> None:
        with pytest.raises(growth.ImpossibleParameter):
            growth.from_fletcher(msy=275.0, K=K, n=0.9)


class TestTwoFoxForms:
    """Fox 1970 is written in two ways whose r differ by a factor of ln K; computed."""

    def test_r_b_log_k_over_b(self) -> None:
        points = growth.reference_points(growth.PellaTomlinson(r=R, K=K, p=0.0))
        assert points.msy == pytest.approx(404.667385, rel=1e-8)
        biomass = np.array([10.0, 300.0, 999.0])
        model = growth.PellaTomlinson(r=R, K=K, p=0.0)
        np.testing.assert_allclose(model.production(biomass), R * biomass * np.log(K / biomass))

    def test_r_b_one_less_log_b_over_log_k(self) -> None:
        model = growth.PellaTomlinson(r=R / math.log(K), K=K, p=0.0)
        assert growth.reference_points(model).msy == pytest.approx(58.581604, rel=1e-7)
        biomass = np.array([10.0, 300.0, 999.0])
        written_out = R * biomass * (1 - np.log(biomass) / np.log(K))
        np.testing.assert_allclose(model.production(biomass), written_out, rtol=1e-9)


class TestThreeMeaningsOfF:
    """B = 1000, F = 0.5, M = 0.2; Baranov 1918 for the last; computed."""

    biomass = np.array([1000.0])
    rate = growth.InstantaneousRate(per_season=0.5)

    def test_harvest_fraction(self) -> None:
        fraction = growth.HarvestFraction(of_biomass=0.5)
        assert growth.catch_of_fraction(biomass=self.biomass, fraction=fraction)[0] == 500

    def test_rate(self) -> None:
        caught = growth.catch_of_rate(biomass=self.biomass, fishing=self.rate)
        assert caught[0] == pytest.approx(393.469340, rel=1e-8)

    def test_rate_beside_natural_deaths(self) -> None:
        caught = growth.catch_of_rate_with_natural_mortality(
            biomass=self.biomass,
            fishing=self.rate,
            natural=growth.InstantaneousRate(per_season=0.2),
        )
        assert caught[0] == pytest.approx(359.5819, rel=1e-6)

    def test_nobody_dies_and_nobody_fishes(self) -> None:
        still = growth.InstantaneousRate(per_season=0.0)
        caught = growth.catch_of_rate_with_natural_mortality(
            biomass=self.biomass, fishing=still, natural=still
        )
        assert caught[0] == 0

    def test_one_is_not_taken_for_the_other(self) -> None:
        with pytest.raises(AttributeError):
            growth.catch_of_fraction(biomass=self.biomass, fraction=self.rate)  # type: ignore[arg-type]
        with pytest.raises(AttributeError):
            growth.catch_of_rate(
                biomass=self.biomass,
                fishing=growth.HarvestFraction(of_biomass=0.5),  # type: ignore[arg-type]
            )

    def test_a_fraction_above_one_takes_all_and_no_more(self) -> None:
        fraction = growth.HarvestFraction(of_biomass=1.3)
        assert growth.catch_of_fraction(biomass=self.biomass, fraction=fraction)[0] == 1000


@pytest.mark.parametrize("number", [-0.1, math.nan, math.inf])
def test_impossible_numbers_are_refused(number: float) -> None:
    for make in (
        lambda: growth.HarvestFraction(of_biomass=number),
        lambda: growth.InstantaneousRate(per_season=number),
        lambda: growth.Schaefer(r=number, K=K),
        lambda: growth.Schaefer(r=R, K=number),
        lambda: growth.PellaTomlinson(r=R, K=K, p=number),
    ):
        with pytest.raises(growth.ImpossibleParameter):
            make()


def test_a_stock_of_nothing_is_refused() -> None:
    with pytest.raises(growth.ImpossibleParameter):
        growth.Schaefer(r=0, K=K)
    with pytest.raises(growth.ImpossibleParameter):
        growth.Schaefer(r=R, K=0)


class TestStep:
    stocks = st.floats(min_value=0, max_value=3_000)

    def test_the_order_changes_the_catch_that_is_left(self) -> None:
        """Worked by hand: r = 0.4, K = 1000, B = 1000, C = 500."""
        model = growth.Schaefer(r=0.4, K=1000)
        full, half = np.array([1000.0]), np.array([500.0])
        first = growth.step(model=model, biomass=full, take=half, order=growth.Order.TAKE_THEN_GROW)
        second = growth.step(
            model=model, biomass=full, take=half, order=growth.Order.GROW_THEN_TAKE
        )
        assert (first.biomass[0], second.biomass[0]) == (600, 500)

    @settings(max_examples=60, deadline=None)
    @given(
        biomass=stocks,
        take=stocks,
        p=st.sampled_from([0.0, 1e-8, 0.3, 1.0, 2.5]),
        order=st.sampled_from(growth.Order),
    )
    def test_nobody_takes_what_is_not_there(
        self, biomass: float, take: float, p: float, order: growth.Order
    ) -> None:
        model = growth.of_shape(r=0.7, K=1000, p=p)
        done = growth.step(
            model=model, biomass=np.array([biomass]), take=np.array([take]), order=order
        )
        assert done.biomass[0] >= 0
        assert 0 <= done.taken[0] <= take
        if done.taken[0] < take and order is growth.Order.GROW_THEN_TAKE:
            assert done.biomass[0] == 0
