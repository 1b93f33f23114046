"""Advice as a rate of what the last survey found on the grounds that are open."""

from fractions import Fraction

from governance import facts, quantities
from governance.advice import bounds, candidates
from governance.advice.records import Advice, EstimateRow, SurveyRisk, SurveyRiskRow
from governance.advice.request import Request
from governance.bylaws import clauses
from governance.quantities import Rounding
from governance.regeneration import survey


def last_survey(request: Request) -> tuple[facts.Observation, ...]:
    """Return the surveys of the last surveyed year, one for each zone.

    A survey of the season's own year counts, for the advice is made before the season. Where a
    zone was surveyed twice in that year, the later entry stands.
    """
    found = [
        reading
        for reading in request.observations
        if reading.kind == "survey" and reading.year <= request.year
    ]
    year = max((reading.year for reading in found), default=None)
    by_zone = {reading.zone: reading for reading in found if reading.year == year}
    return tuple(by_zone.values())


def advise(*, request: Request, method: clauses.BySurvey) -> Advice:
    """Return the advice: what stands, its rate, the book's bounds, and what the error means.

    :raises governance.regeneration.survey.NoOpenGround: if no open ground was surveyed.
    """
    units, readings = request.units, last_survey(request)
    found = survey.standing(
        grounds=[_ground(reading) for reading in readings],
        open_zones=request.zones,
        unit=units.base,
    )
    by_rate = quantities.rounded(
        survey.take_at_rate(standing=found, rate=method.rate), Rounding.DOWN
    )
    kept = bounds.bounded(
        clause=request.clause,
        proposed=by_rate,
        present=request.present,
        below_exception=False,
        units=units,
    )
    rate = f"{quantities.decimal_text(method.rate * 100)} %"
    stands = quantities.rounded(found.biomass, Rounding.DOWN)
    year = readings[0].year
    return Advice(
        resource=units.resource,
        clause=request.clause.head.id,
        season=request.season,
        method="The book's rate of what the survey found on the open grounds.",
        model="None; the survey is taken as it is.",
        data_first_year=year,
        data_last_year=year,
        interval="two standard errors of the survey to either side",
        estimates=tuple(_estimate(reading, units.unit) for reading in readings),
        reference_points=(),
        rule=f"{rate} of what stands on the open grounds.",
        present=request.present,
        before_bounds=by_rate,
        proposed=kept.amount,
        bounds=kept.words,
        risk=None,
        survey_risk=_risk(request, method, found, kept.amount, rate),
        stock=None,
        reasons=(
            f"The survey found {_words(stands, units)} on the grounds {', '.join(found.counted)}.",
            *(f"The ground {zone} is closed and was left out." for zone in found.left_out),
            f"{rate} of that is {_words(by_rate, units)}.",
            *(f"The book allows {bound}, so the proposal stops there." for bound in kept.words),
        ),
        cautions=(
            "A survey counts what it finds on its days; what lies between its stations, or was too"
            " small to be found, it does not count.",
            "The rate is the book's choice; whether a stock bears it only later surveys show.",
            "Whether what is taken may be eaten is for the authority to say, never for this book.",
        ),
        runs=None,
        seed=None,
        made_on=request.made_on,
    )


def _ground(reading: facts.Observation) -> survey.Ground:
    return survey.Ground(
        zone=reading.zone,
        biomass=reading.value,
        standard_error=None if reading.error is None else reading.error * reading.value,
        unit=reading.unit,
    )


def _estimate(reading: facts.Observation, unit: str) -> EstimateRow:
    value = quantities.converted(reading.value, from_unit=reading.unit, to_unit=unit)
    spread = None if reading.error is None else 2 * reading.error * value
    return EstimateRow(
        name=reading.zone,
        meaning="found on this ground",
        value=float(value),
        low=None if spread is None else float(max(value - spread, Fraction(0))),
        high=None if spread is None else float(value + spread),
        unit=unit,
    )


def _risk(
    request: Request,
    method: clauses.BySurvey,
    found: survey.Standing,
    proposed: int,
    rate: str,
) -> SurveyRisk | None:
    if found.variation is None:
        return None
    size = quantities.converted(
        Fraction(1), from_unit=request.units.unit, to_unit=request.units.base
    )
    amounts = candidates.spread(
        named=(proposed, request.present), unit_size=quantities.rounded(size, Rounding.HALF_UP)
    )
    rows = []
    for amount in amounts:
        chance = survey.chance_above_rate(standing=found, take=Fraction(amount), rate=method.rate)
        assert chance is not None, "the survey's error is known"
        label = candidates.label(amount, proposed=proposed, present=request.present)
        rows.append(SurveyRiskRow(candidate=amount, label=label, chance_above=chance))
    return SurveyRisk(
        rate=rate,
        found=quantities.rounded(found.biomass, Rounding.DOWN),
        variation=found.variation,
        rows=tuple(rows),
    )


def _words(amount: int, units: clauses.ResourceUnits) -> str:
    return quantities.amount_text(amount, base=units.base, unit_code=units.unit)
