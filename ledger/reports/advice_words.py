"""The sentences about the advice: what is proposed, on what it rests, and at what risk."""

import re
from fractions import Fraction

from governance.advice.records import Advice, EstimateRow, RiskTable
from ledger.reports import numbers
from ledger.reports.figures import ResourceFigures, SeasonFigures

_PARTS = {
    Fraction(1, 10): "a tenth of",
    Fraction(1, 5): "a fifth of",
    Fraction(1, 4): "a quarter of",
    Fraction(1, 3): "a third of",
    Fraction(2, 5): "two fifths of",
    Fraction(1, 2): "half of",
    Fraction(3, 5): "three fifths of",
    Fraction(3, 4): "three quarters of",
    Fraction(4, 5): "four fifths of",
    Fraction(1): "",
}
_REFERENCES = {
    "K": "the stock without any take",
    "Bmsy": "the stock that gives the largest take that can go on for ever",
    "Fmsy": "the part of the stock to take for the largest take that can go on for ever",
}
_LEVEL = re.compile(rf"(\d+(?:\.\d+)?) ({'|'.join(_REFERENCES)})")


def readable(figures: SeasonFigures, text: str) -> str:
    """Return a text of the advice with names in the place of codes.

    A code that is a plain word stays: it reads well, and may be meant as the word.
    """
    named = {row.code: row.name for row in figures.names if re.search(r"[a-z][_-]", row.code)}
    if not named:
        return text
    codes = "|".join(map(re.escape, sorted(named, key=len, reverse=True)))
    return re.sub(rf"(?<![\w.-])(?:{codes})(?![\w-])", lambda found: named[found[0]], text)


def level(words: str) -> str:
    """Return a level with what it means: ``0.2 K, a fifth of the stock without any take``."""
    found = _LEVEL.fullmatch(words)
    if found is None:
        return words
    multiple = Fraction(found[1])
    part = _PARTS.get(multiple, f"{numbers.percent(multiple)} of")
    return f"{words}, {part} {_REFERENCES[found[2]]}".replace("  ", " ")


def glossary(text: str) -> str:
    """Return what the reference points that a text names mean, or nothing."""
    said = [
        f"{name} is {meaning}"
        for name, meaning in _REFERENCES.items()
        if re.search(rf"\b{name}\b", text)
    ]
    return "; ".join(said) + "." if said else ""


def advice(figures: SeasonFigures, row: Advice) -> str:
    """Say what is proposed, how it compares with the present, and at what risk."""
    resource = figures.resource(row.resource)
    proposed, present = (
        numbers.whole_amount(value, base=resource.base, unit=resource.unit)
        for value in (row.proposed, row.present)
    )
    change = row.proposed - row.present
    if not change or not row.present:
        step = "as now" if not change else f"from {present} now"
    else:
        direction = "more" if change > 0 else "less"
        step = f"{numbers.percent(Fraction(abs(change), row.present))} {direction} than {present}"
    verdict = "" if row.risk is None else f" {risk(row.risk)}"
    return (
        f"For {figures.name_of(row.season)} the advice proposes an allowable of {proposed} of"
        f" {resource.name}, {step}.{verdict}"
    )


def risk(table: RiskTable) -> str:
    """Say the chance where the rule sets the take anew, and whether the book accepts that."""
    said = (
        "With the take set anew each season by the book's rule, the chance of falling below"
        f" {level(table.limit_words)}, at some time within {table.horizon_years} years is"
        f" {numbers.chance(table.under_rule)}"
    )
    if table.at_most is None:
        return f"{said}; the book names no chance that it accepts."
    side = "beyond" if table.under_rule > table.at_most else "within"
    return f"{said}: {side} the {numbers.percent(table.at_most)} that the book accepts."


def method(figures: SeasonFigures, row: Advice) -> tuple[str, ...]:
    """Say how the advice was made."""
    runs = "It uses no chance."
    if row.runs is not None:
        runs = f"It uses {row.runs:,} runs from the seed {row.seed}."
    years = str(row.data_first_year)
    if row.data_last_year != row.data_first_year:
        years = f"{row.data_first_year} to {row.data_last_year}"
    title = figures.name_of(row.clause)
    asks = f"“{title}” ({row.clause})" if title != row.clause else row.clause
    return (
        f"Clause {asks} asks for it. {readable(figures, row.method)}",
        f"Model: {row.model} Data: {years}. Made on {numbers.day(row.made_on)}. {runs}",
        f"Rule: {row.rule} {glossary(row.rule)}".rstrip(),
    )


def stock(row: Advice, *, resource: ResourceFigures) -> str:
    """Say where the stock stands at the start of the coming season and of the last one projected.

    Where it stands now is the estimate's most likely value, as everywhere in the report.
    """
    assert row.stock is not None
    bands, first = row.stock.bands, row.stock.first_projected
    if not bands:
        return f"The stock of {resource.name} has no estimated year."

    def rough(value: int) -> str:
        return numbers.rough_amount(value, base=resource.base, unit=resource.unit)

    estimate = next((one for one in row.estimates if one.name == f"B{first}"), None)
    past = [band for band in bands if band.year < first]
    now, last = (past or bands)[-1], bands[-1]
    if estimate is not None:
        sentence = _most_likely(estimate, year=first, name=resource.name, interval=row.interval)
    else:
        sentence = (
            f"The stock of {resource.name} is estimated at {rough(now.median)} in {now.year}, the"
            f" median of the runs; 95 of 100 runs lie between {rough(now.low_95)} and"
            f" {rough(now.high_95)}."
        )
    if last is now:
        return sentence
    return (
        f"{sentence} With the take set anew each season by the rule, the median of the runs in"
        f" {last.year} is {rough(last.median)}, and 95 of 100 lie between {rough(last.low_95)} and"
        f" {rough(last.high_95)}."
    )


def _most_likely(estimate: EstimateRow, *, year: int, name: str, interval: str) -> str:
    unit = numbers.unit_word(estimate.unit)
    sentence = (
        f"The stock of {name} at the start of {year} is put at"
        f" {numbers.significant(estimate.value)} {unit}, the most likely value"
    )
    if estimate.low is None or estimate.high is None:
        return f"{sentence}."
    low, high = (numbers.significant(value) for value in (estimate.low, estimate.high))
    return f"{sentence}, between {low} and {high} {unit} ({interval})."
