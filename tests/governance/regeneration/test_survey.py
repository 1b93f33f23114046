"""A rate of what a survey found on the grounds that are open."""

import math
from fractions import Fraction

import pytest

from governance import quantities
from governance.regeneration import survey


def ground(
    zone: str, biomass: int | Fraction, *, error: int | None = None, unit: str = "kg"
) -> survey.Ground:
    return survey.Ground(
        zone=zone,
        biomass=Fraction(biomass),
        standard_error=None if error is None else Fraction(error),
        unit=unit,
    )


def test_a_fifth_of_sixty_thousand() -> None:
    """Worked by hand; whole legal-size animals in the manner of Chilean abalone areas."""
    standing = survey.standing(
        grounds=[ground("north", 60_000, unit="1")], open_zones={"north"}, unit="1"
    )
    assert survey.take_at_rate(standing=standing, rate=quantities.percent("20 %")) == 12_000


def test_only_open_grounds_count() -> None:
    standing = survey.standing(
        grounds=[ground("a", 100), ground("b", 250), ground("c", 40)],
        open_zones={"c", "a", "not surveyed"},
        unit="kg",
    )
    assert standing.biomass == 140
    assert standing.counted == ("a", "c")
    assert standing.left_out == ("b",)


def test_units_meet_in_one_and_stay_exact() -> None:
    standing = survey.standing(
        grounds=[ground("a", Fraction(3, 2), unit="t"), ground("b", 7)],
        open_zones=["a", "b"],
        unit="g",
    )
    assert standing.biomass == 1_507_000
    taken = survey.take_at_rate(standing=standing, rate=Fraction(1, 3))
    assert taken == Fraction(1_507_000, 3)
    assert quantities.rounded(taken, quantities.Rounding.DOWN) == 502_333


def test_a_ground_in_another_measure_is_refused() -> None:
    with pytest.raises(quantities.UnitMismatch):
        survey.standing(grounds=[ground("a", 1, unit="m3")], open_zones=["a"], unit="kg")


def test_errors_of_grounds_add_up_as_independent() -> None:
    """Cochran 1977 (from memory): the root of the sum of squares; 3-4-5, in two units."""
    standing = survey.standing(
        grounds=[ground("a", 60, error=3), ground("b", 40_000, error=4_000, unit="g")],
        open_zones=["a", "b"],
        unit="kg",
    )
    assert standing.variation == pytest.approx(0.05)


@pytest.mark.parametrize("grounds", [(60, 3, 40, None), (0, 0, 0, 0)])
def test_an_unknown_error_stays_unknown(grounds: tuple[int, int, int, int | None]) -> None:
    first, first_error, second, second_error = grounds
    standing = survey.standing(
        grounds=[ground("a", first, error=first_error), ground("b", second, error=second_error)],
        open_zones=["a", "b"],
        unit="kg",
    )
    assert standing.variation is None
    assert (
        survey.chance_above_rate(standing=standing, take=Fraction(5), rate=Fraction(1, 10)) is None
    )


class TestChanceAboveRate:
    standing = survey.standing(grounds=[ground("a", 1_000, error=200)], open_zones=["a"], unit="kg")

    def chance(self, take: int | Fraction) -> float | None:
        return survey.chance_above_rate(
            standing=self.standing, take=Fraction(take), rate=Fraction(1, 10)
        )

    def test_the_rate_itself_is_even(self) -> None:
        assert self.chance(100) == pytest.approx(0.5)

    def test_one_deviation_of_the_logarithm(self) -> None:
        """The normal distribution holds 84.13447 % below one deviation (standard table)."""
        deviation = math.sqrt(math.log(1 + 0.2**2))
        assert self.chance(Fraction(100 * math.exp(deviation))) == pytest.approx(0.8413447)
        assert self.chance(Fraction(100 * math.exp(-deviation))) == pytest.approx(0.1586553)

    def test_nothing_is_never_too_much(self) -> None:
        assert self.chance(0) == 0

    def test_a_survey_without_error_knows(self) -> None:
        sure = survey.standing(grounds=[ground("a", 1_000, error=0)], open_zones=["a"], unit="kg")
        chances = [
            survey.chance_above_rate(standing=sure, take=Fraction(take), rate=Fraction(1, 10))
            for take in (100, 101)
        ]
        assert chances == [0, 1]


def test_nothing_open() -> None:
    with pytest.raises(survey.NoOpenGround):
        survey.standing(grounds=[ground("a", 5)], open_zones={"b"}, unit="kg")
    with pytest.raises(survey.NoOpenGround):
        survey.standing(grounds=[], open_zones={"b"}, unit="kg")


def test_impossible_grounds() -> None:
    with pytest.raises(survey.ImpossibleGround):
        ground("a", -1)
    with pytest.raises(survey.ImpossibleGround):
        ground("a", 1, error=-1)
    with pytest.raises(survey.ImpossibleGround):
        survey.standing(grounds=[ground("a", 5), ground("a", 6)], open_zones={"a"}, unit="kg")


@pytest.mark.parametrize("rate", [Fraction(-1, 100), Fraction(101, 100)])
def test_a_rate_is_a_part(rate: Fraction) -> None:
    standing = TestChanceAboveRate.standing
    with pytest.raises(survey.ImpossibleRate):
        survey.take_at_rate(standing=standing, rate=rate)
