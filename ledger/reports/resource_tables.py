"""The tables of the resource: what was observed, what is estimated, and the risk table."""

import bisect
import math

from governance.advice.records import Advice, EstimateRow, RiskRow, StockHistory, SurveyRisk
from ledger.reports import advice_words, numbers, outline
from ledger.reports.figures import ResourceFigures, SeasonFigures
from ledger.reports.measured import Measured
from ledger.reports.outline import Cell, Sheet, Table

# Chances from which a cell is a shade darker; the first is where people count 1 in 20.
_FILL_FROM = (0.025, 0.1, 0.3, 0.6, 0.9)
_DARKER = "A darker cell is a greater chance."
_FRAMED = (
    "A bold frame marks a fixed take whose chance is beyond what the book accepts of its rule."
)


def proposal(advice: Advice, *, resource: Measured) -> Table:
    """Return the step from the present allowable to the proposed one."""
    steps = (
        ("Allowable of this season", advice.present),
        ("What the rule alone gives", advice.before_bounds),
        ("Proposed allowable", advice.proposed),
    )
    return Table(
        sheet=Sheet.ADVICE,
        caption=f"From the present allowable of {resource.name} to the proposed one",
        columns=("", numbers.unit_word(resource.unit)),
        rows=outline.aligned(
            (
                outline.text(label),
                outline.amount(value, base=resource.base, unit=resource.unit),
            )
            for label, value in steps
        ),
        empty="",
    )


def estimates(figures: SeasonFigures, advice: Advice) -> Table:
    """Return what was estimated about the resource, and the reference points."""
    name = figures.resource(advice.resource).name
    return Table(
        sheet=Sheet.ADVICE,
        caption=f"What is estimated about {name}",
        columns=("Name", "Meaning", "Value", "Low", "High", "Unit"),
        rows=tuple(_estimate(figures, row) for row in advice.estimates + advice.reference_points),
        empty="Nothing was estimated.",
        note=f"Low and high: {advice.interval}." if advice.interval else "",
    )


def _estimate(figures: SeasonFigures, row: EstimateRow) -> tuple[Cell, ...]:
    return (
        outline.text(advice_words.readable(figures, row.name)),
        outline.text(row.meaning),
        outline.estimate(row.value),
        outline.estimate(row.low),
        outline.estimate(row.high),
        outline.text(numbers.unit_word(row.unit)),
    )


def risk(advice: Advice, *, resource: Measured) -> Table:
    """Return the candidates in the order of their size; a frame marks a broken threshold."""
    if advice.survey_risk is not None:
        return _survey_risk(advice.survey_risk, resource=resource)
    table = advice.risk
    if table is None:
        return Table(
            sheet=Sheet.RISK,
            caption=f"Risk table of {resource.name}",
            columns=(),
            rows=(),
            empty="Neither runs nor a survey's error stand behind this advice; no risk is known.",
        )
    unit = numbers.unit_word(resource.unit)
    rows = sorted(table.rows, key=lambda row: row.candidate)
    return Table(
        sheet=Sheet.RISK,
        caption=(
            f"Risk table of {resource.name}: a comparison, as if this were taken every year"
            " whatever comes"
        ),
        columns=(
            f"Allowable, {unit}",
            "What it is",
            f"Chance of falling below {table.limit_words} within {table.horizon_years} years",
            f"Chance that {table.cut_words}",
            f"Mean take a year, {unit}",
            f"Median stock at the end, {unit}",
        ),
        rows=tuple(_risk(row, resource=resource) for row in rows),
        empty="No candidate was tried.",
        note=_risk_note(advice, resource=resource),
        looks=_DARKER if table.at_most is None else f"{_FRAMED} {_DARKER}",
    )


def _survey_risk(table: SurveyRisk, *, resource: Measured) -> Table:
    unit = numbers.unit_word(resource.unit)
    found = numbers.amount_with_unit(table.found, base=resource.base, unit=resource.unit)
    return Table(
        sheet=Sheet.RISK,
        caption=f"Risk table of {resource.name}: what the survey's error means",
        columns=(
            f"Allowable, {unit}",
            "What it is",
            f"Chance that it is more than {table.rate} of what stands",
        ),
        rows=tuple(
            (
                outline.amount(row.candidate, base=resource.base, unit=resource.unit),
                outline.text(row.label),
                _cell(
                    row.chance_above,
                    words=numbers.reckoned_chance(row.chance_above)
                    if row.candidate
                    else numbers.percent(0),
                ),
            )
            for row in table.rows
        ),
        empty="No candidate was tried.",
        note=(
            f"The survey found {found}, with an error of"
            f" {numbers.percent(table.variation)} (coefficient of variation, all grounds together)."
            " What really stands is taken as lognormal around that. A take at the rate itself is as"
            " likely to be above the rate of what really stands as below it, so a chance of a half"
            " there is no alarm."
        ),
        looks=_DARKER,
    )


def _risk(row: RiskRow, *, resource: Measured) -> tuple[Cell, ...]:
    mean_take, end = (
        outline.rough_amount(value, base=resource.base, unit=resource.unit)
        for value in (row.mean_take, row.end_median)
    )
    return (
        outline.amount(row.candidate, base=resource.base, unit=resource.unit),
        outline.text(row.label),
        _chance(row.chance_below, framed=row.breaks),
        _chance(row.chance_cut, framed=False),
        mean_take,
        end,
    )


def _chance(probability: float, *, framed: bool) -> Cell:
    return _cell(probability, words=numbers.chance(probability), framed=framed)


def _cell(probability: float, *, words: str, framed: bool = False) -> Cell:
    return Cell(
        kind=outline.Kind.PERCENT,
        text=words,
        value=probability,
        fill=bisect.bisect(_FILL_FROM, probability),
        framed=framed,
    )


def _risk_note(advice: Advice, *, resource: Measured) -> str:
    table = advice.risk
    assert table is not None
    limit = numbers.rough_amount(table.limit, base=resource.base, unit=resource.unit)
    # The widest half-interval of a share seen in so many independent runs, at 95 %.
    error = 1.96 * 0.5 / math.sqrt(table.runs)
    sentences = [
        f"{numbers.sentence_case(advice_words.level(table.limit_words))}, is {limit}. A row says"
        " what would follow if its allowable were taken every year whatever comes; nobody proposes"
        f" that. {advice_words.risk(table)}"
    ]
    sentences.append(
        f"Every row was tried on the same {table.runs:,} runs; the counting alone leaves a chance"
        f" uncertain by at most {numbers.tenths(error * 100)} points of a hundred."
    )
    return " ".join(sentences)


def stock(advice: Advice, *, resource: ResourceFigures) -> Table:
    """Return the stock by year: observed, median and bands."""
    history = advice.stock
    return Table(
        sheet=Sheet.STOCK,
        caption=f"Stock of {resource.name} by year, {numbers.unit_word(resource.unit)}",
        columns=("Year", "How known", "Observed", "Median", *("Low", "High") * 3),
        groups=(("", 4), ("50 of 100 runs", 2), ("80 of 100 runs", 2), ("95 of 100 runs", 2)),
        rows=() if history is None else _stock_rows(history, resource=resource),
        empty="The method of this advice estimates no course of the stock.",
        note=(
            "Medians and ranges are those of the runs; the most likely value of the stock stands"
            " among the estimates and lies a little off the median. Projected years have the take"
            " set anew each season by the rule."
        ),
    )


def _stock_rows(
    history: StockHistory, *, resource: ResourceFigures
) -> tuple[tuple[Cell, ...], ...]:
    def amount(value: int) -> Cell:
        return outline.rough_amount(value, base=resource.base, unit=resource.unit)

    observed = {row.year: row.amount for row in history.observed}
    bands = {row.year: row for row in history.bands}
    rows = []
    for year in sorted(observed.keys() | bands.keys()):
        band = bands.get(year)
        rows.append(
            (
                outline.label_number(year),
                outline.text("projected" if year >= history.first_projected else "estimated"),
                amount(observed[year]) if year in observed else outline.blank(),
                *(
                    (outline.blank(),) * 7
                    if band is None
                    else map(
                        amount,
                        (
                            *(band.median, band.low_50, band.high_50),
                            *(band.low_80, band.high_80, band.low_95, band.high_95),
                        ),
                    )
                ),
            )
        )
    return tuple(rows)


def observations(figures: SeasonFigures) -> Table:
    """Return the readings of the resources."""
    return Table(
        sheet=Sheet.OBSERVATIONS,
        caption="Observations of the resources",
        columns=("Resource", "Kind", "Zone", "Year", "Value", "Unit"),
        rows=tuple(
            (
                outline.text(figures.resource(row.resource).name),
                outline.text(row.kind),
                outline.text(row.zone),
                outline.label_number(row.year),
                outline.exact(row.value),
                outline.text(numbers.unit_word(row.unit)),
            )
            for row in figures.observations
        ),
        empty="No observation is recorded.",
    )
