"""A rate of what the last survey found on the open grounds; figures worked by hand."""

import math
from fractions import Fraction

import pytest

from governance import facts
from governance.advice import by_survey
from governance.advice.request import Request
from governance.bylaws import clauses
from governance.regeneration import survey
from tests.governance.advice import asked


def found(
    zone: str,
    kilograms: str,
    *,
    year: int = 2026,
    error: str | None = None,
    unit: str = "kg",
) -> facts.Observation:
    return asked.reading(
        "survey",
        year,
        Fraction(kilograms),
        unit=unit,
        zone=zone,
        error=None if error is None else Fraction(error),
        resource="clams",
    )


def test_fifteen_parts_in_a_hundred() -> None:
    """15 % of 30,001 and 19,999.5 kg are 7,500.075 kg."""
    advice = asked.advised(asked.survey_request(found("north", "30001"), found("south", "19999.5")))
    assert advice.proposed == advice.before_bounds == 7_500_075
    assert advice.bounds == ()
    assert (advice.runs, advice.seed, advice.risk, advice.stock) == (None, None, None, None)
    assert (advice.data_first_year, advice.data_last_year) == (2026, 2026)
    assert "15 %" in advice.rule
    assert "50,000.5 kg" in advice.reasons[0]


def test_what_is_no_whole_gram_stays_in_the_water() -> None:
    """15 % of 1.111 kg are 166.65 g."""
    assert asked.advised(asked.survey_request(found("north", "1.111"))).proposed == 166


def test_a_closed_ground_is_left_out_and_named() -> None:
    advice = asked.advised(
        asked.survey_request(
            found("north", "100"), found("south", "400"), zones=frozenset({"north"})
        )
    )
    assert advice.proposed == 15_000
    assert "The ground south is closed and was left out." in advice.reasons


def test_with_no_open_ground_there_is_no_advice() -> None:
    with pytest.raises(survey.NoOpenGround):
        asked.advised(asked.survey_request(found("south", "1"), zones=frozenset({"north"})))
    with pytest.raises(survey.NoOpenGround):
        asked.advised(asked.survey_request())


def test_the_last_surveyed_year_and_its_last_reading_stand() -> None:
    request = asked.survey_request(
        found("north", "500", year=2025),
        found("south", "500", year=2025),
        found("north", "100"),
        found("north", "200"),
    )
    (last,) = by_survey.last_survey(request)
    assert (last.zone, int(last.value)) == ("north", 200)


def test_a_survey_of_the_seasons_own_year_counts() -> None:
    """It was walked before the season, for the advice is made before the season."""
    request = asked.survey_request(found("north", "500"), found("north", "100", year=2027))
    assert asked.advised(request).proposed == 15_000


def test_the_books_bounds_hold() -> None:
    method = clauses.BySurvey(rate=Fraction(15, 100))
    clause = asked.quota(method, resource="clams", up=Fraction(1, 10), down=Fraction(1, 10))
    request = asked.survey_request(found("north", "1000"), clause=clause, present=100_000)
    advice = asked.advised(request)
    assert (advice.before_bounds, advice.proposed) == (150_000, 110_000)
    assert "rise of 10 %" in advice.bounds[0]


class TestRisk:
    def request(self, *, error: str | None) -> Request:
        return asked.survey_request(
            found("north", "30000", error=error), found("south", "40000", error=error)
        )

    def test_a_survey_without_errors_gives_no_chances(self) -> None:
        assert asked.advised(self.request(error=None)).survey_risk is None

    def test_errors_of_grounds_add_as_independent(self) -> None:
        """A tenth of 30 and of 40 is 3 and 4, together 5 of 70."""
        risk = asked.advised(self.request(error="0.1")).survey_risk
        assert risk is not None
        assert risk.variation == pytest.approx(5 / 70)
        assert risk.found == 70_000_000

    def test_the_proposed_rate_is_passed_with_an_even_chance(self) -> None:
        risk = asked.advised(self.request(error="0.1")).survey_risk
        assert risk is not None
        (proposed,) = (row for row in risk.rows if row.label == "proposed")
        assert proposed.candidate == 10_500_000
        assert proposed.chance_above == pytest.approx(0.5)
        chances = [row.chance_above for row in risk.rows]
        assert chances == sorted(chances)
        assert len(chances) == 30

    def test_a_chance_worked_by_hand(self) -> None:
        """One deviation of the logarithm above the aim: the normal chance of 84.13 %."""
        deviation = math.sqrt(math.log(1 + (5 / 70) ** 2))
        present = round(10_500_000 * math.exp(deviation))
        request = asked.survey_request(
            found("north", "30000", error="0.1"),
            found("south", "40000", error="0.1"),
            present=present,
        )
        risk = asked.advised(request).survey_risk
        assert risk is not None
        (now,) = (row for row in risk.rows if row.label == "as now")
        assert now.chance_above == pytest.approx(0.841345, abs=1e-5)


def test_estimates_carry_two_standard_errors() -> None:
    advice = asked.advised(
        asked.survey_request(found("north", "100", error="0.1"), found("south", "2", unit="t"))
    )
    north, south = advice.estimates
    assert (north.value, north.low, north.high, north.unit) == (100, 80, 120, "kg")
    assert (south.value, south.low, south.high) == (2_000, None, None)
