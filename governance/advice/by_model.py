"""Advice from a growth model fitted to catches and an index, and a harvest control rule."""

from dataclasses import dataclass
from fractions import Fraction
from typing import ClassVar

import numpy as np

from governance import quantities
from governance.advice import bounds, candidates, levels
from governance.advice.records import (
    Advice,
    EstimateRow,
    ObservedStock,
    RiskRow,
    RiskTable,
    StockHistory,
    YearBand,
)
from governance.advice.request import Request
from governance.bylaws import clauses
from governance.errors import StintbookError
from governance.quantities import Rounding
from governance.regeneration import draws, fitting, likelihood, projection, prospects, rules
from governance.regeneration.growth import FloatArray
from governance.regeneration.series import Series

DRAWS = 10_000
SEASONS = 20
# How far a stock strays from its model in a year, as the deviation of a logarithm: an assumption
# that the advice states, for so few data cannot tell it from the error of the index.
PROCESS_SD = 0.10
INTERVAL = 0.95
_EDGES = (0.5 - INTERVAL / 2, 0.5 + INTERVAL / 2)


class CatchMissing(StintbookError):
    """A year of the series has no catch on record, which is not the same as a catch of nought."""

    code: ClassVar[str] = "advice.catch_missing"
    message: ClassVar[str] = (
        "Found no catch for {years}; accepted is a catch for every year from {first} to {last},"
        " nought where nothing was taken."
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class _Stock:
    """A fitted stock, the stocks that the data do not rule out, and what lies ahead of them."""

    request: Request
    method: clauses.ByGrowthModel
    fit: fitting.Fit
    plausible: draws.Draws
    ahead: prospects.Prospects
    levels: levels.Levels
    rule: rules.Rule

    def base_units(self, biomass: float) -> int:
        """Return biomass of the series' unit in whole base units, rounded down."""
        units = self.request.units
        exact = quantities.converted(Fraction(biomass), from_unit=units.unit, to_unit=units.base)
        return quantities.rounded(exact, Rounding.DOWN)

    def read_units(self, amount: int) -> float:
        """Return whole base units in the series' unit."""
        units = self.request.units
        return float(
            quantities.converted(Fraction(amount), from_unit=units.base, to_unit=units.unit)
        )


def series_of(request: Request) -> Series:
    """Return the catches and the index of the years before the season, in the unit for reading.

    A year without an index has none; a year without a catch on record is refused, for a catch
    that nobody wrote down would make the stock look better than it is.

    :raises CatchMissing: if a year from the first to the last has none.
    :raises governance.regeneration.series.TooFewYears: and the like, if no fit can rest on them.
    """
    units = request.units
    catches: dict[int, float] = {}
    index: dict[int, float] = {}
    for reading in request.observations:
        if reading.kind == "catch":
            exact = quantities.converted(reading.value, from_unit=reading.unit, to_unit=units.unit)
            catches[reading.year] = float(exact)
        elif reading.kind == "index":
            index[reading.year] = float(reading.value)
    for year, amount in request.catches.items():
        exact = quantities.converted(Fraction(amount), from_unit=units.base, to_unit=units.unit)
        catches[year] = float(exact)
    known = [year for year in {*catches, *index} if year < request.year]
    years = tuple(range(min(known), max(known) + 1)) if known else ()
    missing = [str(year) for year in years if year not in catches]
    if missing:
        raise CatchMissing(years=", ".join(missing), first=years[0], last=years[-1])
    return Series(
        years=years,
        catches=tuple(catches[year] for year in years),
        index=tuple(index.get(year) for year in years),
    )


def advise(
    *, request: Request, method: clauses.ByGrowthModel, generator: np.random.Generator
) -> Advice:
    """Return the advice: fit, reference points, rule, bounds, risk table, history and reasons.

    :raises CatchMissing: if a year of the series has no catch on record.
    :raises governance.regeneration.series.TooFewYears: and the like, if no fit can rest on the
        observations.
    """
    stock = _stock(request, method, generator)
    start = np.array([stock.fit.biomass[-1]])
    by_rule = stock.base_units(float(rules.take(rule=stock.rule, biomass=start)[0]))
    kept = bounds.bounded(
        clause=request.clause,
        proposed=by_rule,
        present=request.present,
        below_exception=_below_exception(stock),
        units=request.units,
    )
    series = stock.fit.series
    risk = _risk(stock, kept.amount)
    return Advice(
        resource=request.units.resource,
        clause=request.clause.head.id,
        season=request.season,
        method="A growth model is fitted to catches and an index; a rule reads the take from it.",
        model=_model_words(method),
        data_first_year=series.years[0],
        data_last_year=series.years[-1],
        interval=f"{INTERVAL:.0%} of the stocks not ruled out by the data lie between them",
        estimates=_estimates(stock),
        reference_points=_reference_points(stock),
        rule=_rule_words(method.rule),
        present=request.present,
        before_bounds=by_rule,
        proposed=kept.amount,
        bounds=kept.words,
        risk=risk,
        survey_risk=None,
        stock=_history(stock),
        reasons=_reasons(stock, by_rule, kept, risk),
        cautions=_cautions(stock),
        runs=DRAWS,
        seed=request.seed,
        made_on=request.made_on,
    )


def _stock(
    request: Request, method: clauses.ByGrowthModel, generator: np.random.Generator
) -> _Stock:
    setting = likelihood.Setting(
        p=1.0 if method.shape is None else float(method.shape),
        order=levels.ORDERS[method.sequence],
        timing=likelihood.IndexTiming.START_OF_YEAR,
    )
    fit = fitting.fit(series=series_of(request), setting=setting)
    plausible = draws.plausible(fit=fit, draws=DRAWS, generator=generator)
    of_model = levels.Levels.of(fit.model)
    return _Stock(
        request=request,
        method=method,
        fit=fit,
        plausible=plausible,
        ahead=prospects.drawn(
            draws=plausible, seasons=SEASONS, process_sd=PROCESS_SD, generator=generator
        ),
        levels=of_model,
        rule=of_model.rule(method.rule),
    )


def _below_exception(stock: _Stock) -> bool:
    reference = stock.request.clause.unless_below
    return reference is not None and stock.fit.biomass[-1] < stock.levels.biomass(reference)


def _risk_level(stock: _Stock) -> clauses.Reference:
    bound = stock.request.clause.risk
    return levels.limit_of(stock.method.rule) if bound is None else bound.below


def _risk(stock: _Stock, proposed: int) -> RiskTable:
    level = _risk_level(stock)
    request, bound = stock.request, stock.request.clause.risk
    unit_size = quantities.rounded(
        quantities.converted(Fraction(1), from_unit=request.units.unit, to_unit=request.units.base),
        Rounding.HALF_UP,
    )
    named = (proposed, request.present)
    amounts = candidates.spread(named=named, unit_size=unit_size)
    limits = stock.levels.biomass_of(level, stock.plausible.K)
    rows = projection.under_takes(
        ahead=stock.ahead,
        candidates=[stock.read_units(amount) for amount in amounts],
        rule=stock.rule,
        limit=limits,
        order=stock.fit.setting.order,
    )
    under_rule = projection.under_rule(
        ahead=stock.ahead, rule=stock.rule, limit=limits, order=stock.fit.setting.order
    )
    at_most = None if bound is None else float(bound.at_most)
    return RiskTable(
        limit=stock.base_units(stock.levels.biomass(level)),
        limit_words=levels.words(level),
        cut_words="the next allowable is lower",
        horizon_years=SEASONS,
        at_most=at_most,
        runs=DRAWS,
        under_rule=float(under_rule.below_ever),
        rows=tuple(
            RiskRow(
                candidate=amount,
                label=candidates.label(amount, proposed=proposed, present=request.present),
                chance_below=float(row.below_ever),
                chance_cut=float(row.cut_next),
                mean_take=stock.base_units(row.mean_take),
                end_median=stock.base_units(row.end_median),
                breaks=at_most is not None and bool(row.below_ever > at_most),
            )
            for amount, row in zip(amounts, rows, strict=True)
        ),
    )


def _history(stock: _Stock) -> StockHistory:
    """Return the stock over the years of the series, then ahead under the book's rule.

    The rule sets the take anew each season from the stock as it then is: nobody plans to take the
    same for twenty years whatever comes.
    """
    fit = stock.fit
    past = projection.fan_of(draws.histories(fit=fit, draws=stock.plausible))
    future = projection.fan(ahead=stock.ahead, policy=stock.rule, order=fit.setting.order)
    first_ahead = fit.series.years[-1] + 1
    trigger = levels.trigger_of(stock.method.rule)
    limit = levels.limit_of(stock.method.rule)
    return StockHistory(
        bands=(
            *_bands(stock, past, first=fit.series.years[0], skip_last=True),
            *_bands(stock, future, first=first_ahead, skip_last=False),
        ),
        observed=tuple(
            ObservedStock(year=year, amount=stock.base_units(value / fit.q))
            for year, value in zip(fit.series.years, fit.series.index, strict=True)
            if value is not None
        ),
        first_projected=first_ahead,
        limit=stock.base_units(stock.levels.biomass(limit)),
        trigger=None if trigger is None else stock.base_units(stock.levels.biomass(trigger)),
        runs=DRAWS,
    )


def _bands(stock: _Stock, fan: projection.Fan, *, first: int, skip_last: bool) -> list[YearBand]:
    moments = len(fan.median) - (1 if skip_last else 0)
    half, four_fifths, nearly_all = fan.bands
    return [
        YearBand(
            year=first + place,
            median=stock.base_units(fan.median[place]),
            low_50=stock.base_units(half.low[place]),
            high_50=stock.base_units(half.high[place]),
            low_80=stock.base_units(four_fifths.low[place]),
            high_80=stock.base_units(four_fifths.high[place]),
            low_95=stock.base_units(nearly_all.low[place]),
            high_95=stock.base_units(nearly_all.high[place]),
        )
        for place in range(moments)
    ]


def _estimates(stock: _Stock) -> tuple[EstimateRow, ...]:
    fit, plausible, unit = stock.fit, stock.plausible, stock.request.units.unit
    now = fit.biomass[-1]
    year = fit.series.years[-1] + 1
    return (
        _row("r", "how fast a small stock grows", fit.model.r, plausible.r, "1/a"),
        _row("K", "the stock without any take", fit.model.K, plausible.K, unit),
        _row(f"B{year}", "the stock now", now, plausible.biomass, unit),
        _row(
            f"B{year}/K",
            "the stock now, as a part of K",
            now / fit.model.K,
            plausible.biomass / plausible.K,
            "1",
        ),
        _row("q", "the index for each unit of stock", fit.q, plausible.q, "1"),
        _row("sigma", "the error of the index", fit.sigma, plausible.sigma, "1"),
    )


def _reference_points(stock: _Stock) -> tuple[EstimateRow, ...]:
    points, plausible, unit = stock.levels.points, stock.plausible, stock.request.units.unit
    fraction_of_r = points.fmsy.of_biomass / stock.fit.model.r
    part_of_K = points.bmsy / stock.fit.model.K
    fractions = fraction_of_r * plausible.r
    biomasses = part_of_K * plausible.K
    most = "the largest take that can go on for ever"
    return (
        _row("MSY", most, points.msy, fractions * biomasses, unit),
        _row("Bmsy", "the stock that gives it", points.bmsy, biomasses, unit),
        _row("Fmsy", "the part of it taken", points.fmsy.of_biomass, fractions, "1"),
    )


def _row(name: str, meaning: str, value: float, spread: FloatArray, unit: str) -> EstimateRow:
    low, high = (float(edge) for edge in np.quantile(spread, _EDGES))
    return EstimateRow(name=name, meaning=meaning, value=value, low=low, high=high, unit=unit)


def _model_words(method: clauses.ByGrowthModel) -> str:
    match method.growth:
        case clauses.Growth.SCHAEFER:
            name = "Schaefer"
        case clauses.Growth.PELLA_TOMLINSON:
            assert method.shape is not None, "a Pella–Tomlinson model has a shape"
            name = f"Pella–Tomlinson, shape {quantities.decimal_text(method.shape)}"
    order = {
        clauses.Sequence.TAKE_THEN_GROW: "the take comes before the growth",
        clauses.Sequence.GROW_THEN_TAKE: "the growth comes before the take",
    }[method.sequence]
    return f"{name}; in each season {order}."


def _rule_words(rule: clauses.Rule) -> str:
    match rule:
        case clauses.HockeyStick():
            return (
                f"Nothing at or below {levels.words(rule.limit)}; a rising part of the stock up to"
                f" {levels.words(rule.trigger)}; from there {levels.words(rule.fraction)}."
            )
        case clauses.FortyTen():
            reading = {
                clauses.FortyTenReading.STRAIGHT_LINE_IN_CATCH: "the take rises in a straight line",
                clauses.FortyTenReading.RAMP_IN_FRACTION: "the fraction rises in a straight line",
            }[rule.reading]
            return (
                f"Nothing at or below {levels.words(rule.lower)}; up to"
                f" {levels.words(rule.upper)} {reading}; from there {levels.words(rule.fraction)}."
            )
        case clauses.ConstantEscapement():
            return f"Whatever stands above {levels.words(rule.leave)}."


def _reasons(stock: _Stock, by_rule: int, kept: bounds.Bounded, risk: RiskTable) -> tuple[str, ...]:
    part = stock.fit.biomass[-1] / stock.fit.model.K
    said = [
        f"The stock now is put at {part:.0%} of what there would be without any take.",
        f"The rule gives {stock.read_units(by_rule):,.0f} {stock.request.units.unit}.",
        *(f"The book allows {bound}, so the proposal stops there." for bound in kept.words),
        *_risk_words(risk),
    ]
    if stock.fit.at_bounds:
        names = " and ".join(stock.fit.at_bounds)
        said.append(f"The search for {names} stopped at its bounds: the data do not hold it.")
    return tuple(said)


def _risk_words(risk: RiskTable) -> tuple[str, ...]:
    """Return what the board has to know where even the rule passes the risk that it accepts."""
    if risk.at_most is None or risk.under_rule <= risk.at_most:
        return ()
    return (
        f"Even where the rule sets the take anew each season, the stock comes below"
        f" {risk.limit_words} at some time in {risk.horizon_years} seasons with a chance of"
        f" {risk.under_rule:.1%}; the book accepts {risk.at_most:.1%}.",
    )


def _cautions(stock: _Stock) -> tuple[str, ...]:
    return (
        "The model knows one stock, one place and one kind of growth; it knows nothing of ages,"
        " of neighbours' takes, of unreported takes, or of a changing climate.",
        f"From season to season the stock is let stray by about {PROCESS_SD:.0%}; that number is"
        " an assumption, not an estimate.",
        f"The index is read as the stock at the start of its year;"
        f" {len([one for one in stock.fit.series.index if one is not None])} years have one.",
        f"{DRAWS:,} draws, worth {stock.plausible.effective:,.0f} independent ones.",
    )
