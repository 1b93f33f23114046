"""What every growth model and every rule keeps to, whichever it is.

A model or rule that is added without an example here fails the first tests of its half.
"""

import dataclasses
import inspect
from typing import get_args

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from governance.regeneration import growth, rules

MODELS: tuple[growth.Growth, ...] = (
    growth.Schaefer(r=0.33, K=240.0),
    growth.Schaefer(r=1.4, K=8e9),
    growth.PellaTomlinson(r=0.33, K=240.0, p=0.0),
    growth.PellaTomlinson(r=0.33, K=240.0, p=1e-8),
    growth.PellaTomlinson(r=0.33, K=240.0, p=0.19),
    growth.PellaTomlinson(r=0.9, K=1e12, p=2.5),
)

FIFTH = growth.HarvestFraction(of_biomass=0.2)
RULES: tuple[rules.Rule, ...] = (
    *(rules.HockeyStick(limit=20, trigger=80, fraction=FIFTH, ramp=ramp) for ramp in rules.Ramp),
    rules.HockeyStick(limit=0, trigger=80, fraction=FIFTH, ramp=rules.Ramp.FROM_ZERO),
    *(rules.FortyTen(unfished=200, fraction=FIFTH, reading=reading) for reading in rules.Reading),
    rules.FortyTen(
        unfished=200,
        fraction=growth.HarvestFraction(of_biomass=1.6),
        reading=rules.Reading.LINE_IN_CATCH,
        lower=0.0,
        upper=0.25,
    ),
    rules.ConstantEscapement(escapement=70),
    rules.ConstantEscapement(escapement=0),
    rules.ConstantFraction(fraction=FIFTH),
    rules.ConstantFraction(fraction=growth.HarvestFraction(of_biomass=2.0)),
)


class TestEveryModel:
    def test_has_an_example_here(self) -> None:
        assert {type(model) for model in MODELS} == set(get_args(growth.Growth))

    def test_is_one_of_the_union(self) -> None:
        growing = {
            found
            for _, found in inspect.getmembers(growth, inspect.isclass)
            if callable(getattr(found, "production", None))
        }
        assert growing == set(get_args(growth.Growth))

    @pytest.mark.parametrize("model", MODELS)
    def test_produces_nothing_from_nothing_and_nothing_at_capacity(
        self, model: growth.Growth
    ) -> None:
        ends = model.production(np.array([0.0, model.K]))
        np.testing.assert_allclose(ends / model.K, 0.0, atol=1e-15)

    @pytest.mark.parametrize("model", MODELS)
    def test_grows_between_and_shrinks_above(self, model: growth.Growth) -> None:
        between = np.linspace(0.001, 0.999, 500) * model.K
        assert (model.production(between) > 0).all()
        assert (model.production(np.linspace(1.001, 3, 50) * model.K) < 0).all()

    @pytest.mark.parametrize("model", MODELS)
    def test_reference_points_are_those_of_a_search(self, model: growth.Growth) -> None:
        biomass = np.linspace(0, 1, 200_001) * model.K
        produced = model.production(biomass)
        points = growth.reference_points(model)
        assert points.msy == pytest.approx(produced.max(), rel=1e-9)
        assert points.bmsy == pytest.approx(biomass[produced.argmax()], rel=1e-4)
        assert points.fmsy.of_biomass == pytest.approx(points.msy / points.bmsy, rel=1e-12)

    @pytest.mark.parametrize("model", MODELS)
    def test_leaves_what_it_reads(self, model: growth.Growth) -> None:
        biomass = np.array([0.0, 0.3, 1.0]) * model.K
        before = biomass.copy()
        assert model.production(biomass).shape == biomass.shape
        np.testing.assert_array_equal(biomass, before)


class TestEveryRule:
    def test_has_an_example_here(self) -> None:
        assert {type(rule) for rule in RULES} == set(get_args(rules.Rule))

    def test_is_one_of_the_union(self) -> None:
        records = {
            found
            for _, found in inspect.getmembers(rules, inspect.isclass)
            if dataclasses.is_dataclass(found) and found.__module__ == rules.__name__
        }
        assert records == set(get_args(rules.Rule))

    @pytest.mark.parametrize("rule", RULES)
    @settings(max_examples=25, deadline=None)
    @given(levels=st.lists(st.floats(min_value=0, max_value=1e9), min_size=1, max_size=20))
    def test_takes_from_nothing_up_to_all_and_more_of_more(
        self, rule: rules.Rule, levels: list[float]
    ) -> None:
        biomass = np.array(sorted(levels))
        taken = rules.take(rule=rule, biomass=biomass)
        assert (taken >= 0).all()
        assert (taken <= biomass).all()
        assert (np.diff(taken) >= -1e-12 * biomass[1:]).all()

    @pytest.mark.parametrize("rule", RULES)
    def test_takes_nothing_of_nothing(self, rule: rules.Rule) -> None:
        nothing = np.zeros(1)
        assert rules.take(rule=rule, biomass=nothing)[0] == 0
        assert rules.fraction(rule=rule, biomass=nothing)[0] == 0

    @pytest.mark.parametrize("rule", RULES)
    def test_says_the_same_as_a_take_and_as_a_fraction(self, rule: rules.Rule) -> None:
        biomass = np.linspace(0, 400, 81)
        before = biomass.copy()
        part = rules.fraction(rule=rule, biomass=biomass)
        assert ((part >= 0) & (part <= 1)).all()
        np.testing.assert_allclose(part * biomass, rules.take(rule=rule, biomass=biomass))
        np.testing.assert_array_equal(biomass, before)
