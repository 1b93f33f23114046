"""A book's references and rule with a stock's numbers in; Schaefer: Bmsy K/2, Fmsy r/2."""

from fractions import Fraction

import numpy as np
import pytest

from governance.advice import levels
from governance.bylaws import clauses
from governance.regeneration import growth, rules
from tests.governance.advice import asked

SCHAEFER = levels.Levels.of(growth.Schaefer(r=0.4, K=1_000.0))


def reference(multiple: str, of: str) -> clauses.Reference:
    return clauses.Reference(multiple=Fraction(multiple), of=of)


def test_biomass_and_fraction() -> None:
    assert SCHAEFER.biomass(reference("0.2", "K")) == pytest.approx(200)
    assert SCHAEFER.biomass(reference("0.5", "Bmsy")) == pytest.approx(250)
    assert SCHAEFER.fraction(reference("0.8", "Fmsy")).of_biomass == pytest.approx(0.16)


def test_levels_of_other_stocks_of_the_same_shape() -> None:
    of_each = SCHAEFER.biomass_of(reference("1", "Bmsy"), np.array([100.0, 400.0]))
    assert of_each == pytest.approx([50, 200])


def test_a_bent_model_has_its_own_bmsy() -> None:
    """Pella–Tomlinson with p = 2: Bmsy/K = 3 to the power of -1/2 (computed)."""
    bent = levels.Levels.of(growth.of_shape(r=1.1, K=1_000.0, p=2.0))
    assert bent.biomass(reference("1", "Bmsy")) == pytest.approx(577.350269)


@pytest.mark.parametrize("of", ["Fmsy", "B0"])
def test_a_reference_that_is_no_biomass(of: str) -> None:
    with pytest.raises(levels.UnknownReference) as refused:
        SCHAEFER.biomass(reference("0.8", of))
    assert f"0.8 {of}" in str(refused.value) and "K or Bmsy" in str(refused.value)


def test_a_reference_that_is_no_fraction() -> None:
    with pytest.raises(levels.UnknownReference) as refused:
        SCHAEFER.fraction(reference("0.5", "K"))
    assert "accepted is a multiple of Fmsy" in str(refused.value)


def test_a_hockey_stick() -> None:
    """At 350, half way from 200 to 500: half of 0.16 of it."""
    rule = SCHAEFER.rule(asked.HOCKEY_STICK)
    taken = rules.take(rule=rule, biomass=np.array([100.0, 200.0, 350.0, 500.0, 800.0]))
    assert taken == pytest.approx([0, 0, 28, 80, 128])
    assert levels.limit_of(asked.HOCKEY_STICK) == reference("0.2", "K")
    assert levels.trigger_of(asked.HOCKEY_STICK) == reference("0.5", "K")


@pytest.mark.parametrize(
    ("reading", "taken"),
    [
        # The two published readings at B/K = 0.25, F = 0.06: 120 and 75 of 10,000.
        (clauses.FortyTenReading.STRAIGHT_LINE_IN_CATCH, 120),
        (clauses.FortyTenReading.RAMP_IN_FRACTION, 75),
    ],
)
def test_both_readings_of_forty_ten(reading: clauses.FortyTenReading, taken: float) -> None:
    """Pacific groundfish default policy; with r = 0.12, Fmsy is 0.06 (numbers computed)."""
    rule = clauses.FortyTen(
        lower=reference("0.1", "K"),
        upper=reference("0.4", "K"),
        fraction=reference("1", "Fmsy"),
        reading=reading,
    )
    stock = levels.Levels.of(growth.Schaefer(r=0.12, K=10_000.0))
    found = rules.take(rule=stock.rule(rule), biomass=np.array([2_500.0, 6_000.0]))
    assert found == pytest.approx([taken, 360])
    assert levels.limit_of(rule) == reference("0.1", "K")
    assert levels.trigger_of(rule) == reference("0.4", "K")


def test_constant_escapement() -> None:
    rule = clauses.ConstantEscapement(leave=reference("1", "Bmsy"))
    found = rules.take(rule=SCHAEFER.rule(rule), biomass=np.array([400.0, 600.0]))
    assert found == pytest.approx([0, 100])
    assert levels.limit_of(rule) == reference("1", "Bmsy")
    assert levels.trigger_of(rule) is None
