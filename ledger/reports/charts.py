"""Two charts as SVG: take against allowable over a season, and the stock with its bands.

Text stays text, the same figures give the same bytes, and each chart carries the proof line.
"""

from collections.abc import Sequence
from datetime import date, timedelta
from itertools import accumulate
from typing import TYPE_CHECKING, Any, ClassVar

from governance.advice.records import StockHistory, YearBand
from ledger.foundation.errors import LedgerError
from ledger.reports import canvas, numbers
from ledger.reports.measured import Drawn, Measured

if TYPE_CHECKING:
    from matplotlib.axes import Axes

MIN_RUNS = 200
"""A band drawn from fewer runs would show their chance more than the stock's."""

# Lighter towards the edge, in grey as well as in colour: 95, 80 and 50 of 100 runs.
_BAND_TINTS = ("#dfe7ec", "#b9d0de", "#8cb6d0")

_MONTHS = "Jan Feb Mar Apr May Jun Jul Aug Sep Oct Nov Dec".split()


class TooFewRuns(LedgerError):
    """Bands were asked for from too few runs."""

    code: ClassVar[str] = "reports.too_few_runs"
    message: ClassVar[str] = "Bands need at least {needed} runs; there are {found}."


def take_svg(*, resource: Drawn, proof: str, description: str) -> str:
    """Draw the cumulative take under the allowable in force, by local day, in reading units.

    :param description: the sentence that says what the chart shows.
    """
    unit = numbers.unit_word(resource.unit)
    with canvas.opened(proof) as (figure, axes):
        title = f"{numbers.sentence_case(resource.name)}: taken and allowable, {unit}"
        axes.set_title(title, loc="left")
        days, sums = _cumulative(resource)
        steps, levels = _allowable(resource)
        axes.step(steps, levels, where="post", color=canvas.BLACK, linewidth=1.4, gid="allowable")
        axes.step(days, sums, where="post", color=canvas.BLUE, linewidth=2.0, gid="taken")
        axes.set_xlim(resource.opens.toordinal(), resource.closes.toordinal() + 1)
        axes.set_ylim(0, 1.12 * max([*levels, *sums, 1]))
        _label_months(axes, first=resource.opens, last=resource.closes)
        ends = [("allowable", levels[-1], canvas.BLACK)] if levels else []
        ends.append(("taken", sums[-1], canvas.BLUE))
        _label_ends(axes, ends)
        return canvas.svg(figure, title=title, description=description)


def stock_svg(
    *, name: str, base: str, unit: str, history: StockHistory, proof: str, description: str
) -> str:
    """Draw the stock with its 50, 80 and 95 % bands, observed and projected, in reading units.

    :raises TooFewRuns: if the bands rest on fewer than ``MIN_RUNS`` runs.
    """
    if history.runs < MIN_RUNS:
        raise TooFewRuns(needed=MIN_RUNS, found=history.runs)

    def read(amount: int) -> float:
        return float(numbers.reading(amount, base=base, unit=unit))

    with canvas.opened(proof) as (figure, axes):
        title = f"Stock of {name} by year, {numbers.unit_word(unit)}"
        axes.set_title(title, loc="left")
        years = [band.year for band in history.bands]
        # A single year has no width: markers then show what the areas cannot.
        single = "_" if len(years) == 1 else ""
        for (share, low, high), tint in zip(_bands(history.bands), _BAND_TINTS, strict=True):
            axes.fill_between(
                years, [*map(read, low)], [*map(read, high)], color=tint, linewidth=0, gid=share
            )
        median = [read(band.median) for band in history.bands]
        axes.plot(years, median, color=canvas.BLUE, linewidth=1.0, marker=single, gid="median")
        dots = [read(row.amount) for row in history.observed]
        seen = [row.year for row in history.observed]
        axes.plot(seen, dots, "o", color=canvas.BLACK, markersize=3, gid="observed")
        highest = [read(band.high_95) for band in history.bands]
        levels = [read(level) for level in (history.limit, history.trigger) if level is not None]
        axes.set_ylim(0, 1.15 * max([*highest, *dots, *levels, 1]))
        _label_years(axes, [*years, *seen] or [history.first_projected])
        _mark_projection(axes, history)
        _mark_levels(axes, limit=history.limit, trigger=history.trigger, read=read)
        if history.bands:
            _label_bands(axes, history.bands[-1], read=read)
        return canvas.svg(figure, title=title, description=description)


def _cumulative(resource: Drawn) -> tuple[list[int], list[float]]:
    """Return day ordinals and the sum taken so far, from zero on the first day to the last."""
    days = [row.day for row in resource.daily]
    sums = list(accumulate(row.amount for row in resource.daily))
    # The take of a day stands from that day's end on: the step rises on the next midnight.
    x = [min([resource.opens, *days]), *(day + timedelta(days=1) for day in days)]
    y = [0, *sums]
    x.append(max(resource.closes + timedelta(days=1), x[-1]))
    y.append(y[-1])
    return [day.toordinal() for day in x], [_read(resource, value) for value in y]


def _allowable(resource: Drawn) -> tuple[list[int], list[float]]:
    steps = resource.allowable_steps
    if not steps:
        return [], []
    x = [max(step.from_day, resource.opens).toordinal() for step in steps]
    y = [_read(resource, step.amount) for step in steps]
    return [*x, resource.closes.toordinal() + 1], [*y, y[-1]]


def _read(resource: Measured, amount: int) -> float:
    return float(numbers.reading(amount, base=resource.base, unit=resource.unit))


def _bands(
    bands: Sequence[YearBand],
) -> tuple[tuple[str, list[int], list[int]], ...]:
    return (
        ("band-95", [b.low_95 for b in bands], [b.high_95 for b in bands]),
        ("band-80", [b.low_80 for b in bands], [b.high_80 for b in bands]),
        ("band-50", [b.low_50 for b in bands], [b.high_50 for b in bands]),
    )


def _label_months(axes: "Axes", *, first: date, last: date) -> None:
    """Mark the first day and each month's first on the axis of days."""
    ticks = {first: f"{first.day} {_MONTHS[first.month - 1]}"}
    day = first
    while day <= last:
        if day.day == 1:
            ticks[day] = f"1 {_MONTHS[day.month - 1]}"
        day += timedelta(days=1)
    # A first day shortly before a month's first would run into its label.
    ordered = sorted(ticks)
    if len(ordered) > 1 and (ordered[1] - first).days < (last - first).days / 10:
        del ticks[first]
    axes.set_xticks([day.toordinal() for day in ticks], list(ticks.values()))


def _label_years(axes: "Axes", years: Sequence[int]) -> None:
    from matplotlib.ticker import FuncFormatter, MaxNLocator

    first, last = min(years), max(years)
    margin = 0.5 if first < last else 1.5
    axes.set_xlim(first - margin, last + margin)
    axes.xaxis.set_major_locator(MaxNLocator(integer=True, nbins=8))
    axes.xaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:.0f}"))


def _label_ends(axes: "Axes", ends: Sequence[tuple[str, float, str]]) -> None:
    """Write each line's word and last value at the right of the axes, apart from each other."""
    downwards = sorted(ends, key=lambda end: end[1], reverse=True)
    top = axes.get_ylim()[1]
    places = canvas.spread([value / top for _, value, _ in downwards], gap=2.3 * canvas.LINE_HEIGHT)
    for (word, value, colour), place in zip(downwards, places, strict=True):
        axes.text(
            *(1.015, place, f"{word}\n{value:,.10g}"),
            transform=axes.transAxes,
            color=colour,
            va="center",
        )


def _label_bands(axes: "Axes", band: YearBand, *, read: Any) -> None:
    labels = (
        ("95 of 100 runs", band.high_95),
        ("80 of 100", band.high_80),
        ("50 of 100", band.high_50),
        ("median", band.median),
    )
    top = axes.get_ylim()[1]
    places = canvas.spread([read(value) / top for _, value in labels], gap=canvas.LINE_HEIGHT)
    for (word, _), place in zip(labels, places, strict=True):
        colour = canvas.BLUE if word == "median" else canvas.BLACK
        axes.text(1.015, place, word, transform=axes.transAxes, color=colour, va="center", size=8)


def _mark_projection(axes: "Axes", history: StockHistory) -> None:
    if not any(band.year >= history.first_projected for band in history.bands):
        return
    border = history.first_projected - 0.5
    axes.axvline(border, color=canvas.BLACK, linewidth=0.8, gid="projection")
    for words, side, shift in (("past", "right", -3), ("under the rule", "left", 3)):
        axes.annotate(
            words,
            (border, 1.0),
            xycoords=("data", "axes fraction"),
            xytext=(shift, -2),
            textcoords="offset points",
            ha=side,
            va="top",
            size=8,
        )


def _mark_levels(axes: "Axes", *, limit: int | None, trigger: int | None, read: Any) -> None:
    for level, words, dashes in (
        (trigger, "below this the rule lowers the take", (6, 3)),
        (limit, "lowest level the bylaw accepts", (2, 2)),
    ):
        if level is None:
            continue
        axes.axhline(read(level), color=canvas.BLACK, linewidth=0.9, dashes=dashes)
        # At the right, where no observation stands.
        axes.annotate(
            words,
            (1.0, read(level)),
            xycoords=("axes fraction", "data"),
            xytext=(-3, 3),
            textcoords="offset points",
            ha="right",
            size=8,
        )
