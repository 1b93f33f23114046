"""Charts parse back: the numbers in the drawing are the numbers of the record."""

import dataclasses
import gzip
import re
from collections.abc import Sequence
from datetime import date, timedelta
from itertools import accumulate
from xml.etree import ElementTree

import pytest

from governance.advice import records as advised
from ledger.reports import charts, figures
from tests.ledger.reports import example

SVG = "{http://www.w3.org/2000/svg}"
LINK = "{http://www.w3.org/1999/xlink}href"


def _take(resource: figures.ResourceFigures) -> str:
    return charts.take_svg(resource=resource, proof=example.PROOF, description="What it shows.")


def _stock(history: advised.StockHistory, *, name: str = "bay mullet") -> str:
    return charts.stock_svg(
        name=name,
        base="g",
        unit="kg",
        history=history,
        proof=example.PROOF,
        description="What it shows.",
    )


def _group(svg: str, name: str) -> ElementTree.Element:
    root = ElementTree.fromstring(svg)  # noqa: S314 (our own drawing)
    return next(group for group in root.iter(f"{SVG}g") if group.get("id") == name)


def _points(svg: str, name: str) -> list[tuple[float, float]]:
    group = _group(svg, name)
    path = next(group.iter(f"{SVG}path")).get("d", "")
    # An area is defined once and then placed: its points count from that place.
    placed = next(group.iter(f"{SVG}use"), None) if group.find(f"{SVG}defs") is not None else None
    down = 0.0 if placed is None or "band" not in name else float(placed.get("y", "nan"))
    return [(float(x), float(y) + down) for x, y in re.findall(r"[ML] (\S+) (\S+)", path)]


def _scale(svg: str) -> tuple[float, float]:
    """Return height of zero and heights per unit, read from the ticks' marks and labels."""
    root = ElementTree.fromstring(svg)  # noqa: S314
    ticks = []
    for group in root.iter(f"{SVG}g"):
        if (group.get("id") or "").startswith("ytick_"):
            text = "".join(next(group.iter(f"{SVG}text")).itertext())
            # The mark of the axis is the last one; a grid line may stand before it.
            mark = list(group.iter(f"{SVG}use"))[-1]
            ticks.append((float(text.replace(",", "")), float(mark.get("y", "nan"))))
    (low, low_y), (high, high_y) = ticks[0], ticks[-1]
    slope = (high_y - low_y) / (high - low)
    return low_y - slope * low, slope


def _values(svg: str, points: Sequence[tuple[float, float]]) -> list[float]:
    zero, slope = _scale(svg)
    return [(y - zero) / slope for _, y in points]


def _rises(values: Sequence[float]) -> list[float]:
    """Return a step line's levels: each corner is drawn twice, once at the level it leaves."""
    return list(dict.fromkeys(round(value, 1) for value in values))


def test_the_taken_line_is_the_cumulative_take() -> None:
    resource = example.mullet()
    svg = _take(resource)
    sums = [0, *accumulate(row.amount for row in resource.daily)]
    levels = _rises(_values(svg, _points(svg, "taken")))
    assert len(levels) == len(sums)
    # The drawing has six decimals of a point, and 197 points stand for 76,160 kg.
    assert levels == pytest.approx([value / 1000 for value in sums], abs=0.15)


def test_the_allowable_line_steps_on_its_day() -> None:
    svg = _take(example.mullet())
    points = _points(svg, "allowable")
    assert _rises(_values(svg, points)) == [64_000.0, 68_000.0]
    # 50 of the 120 days before 20 April, from the left edge to the right one.
    left, right = points[0][0], points[-1][0]
    step = next(x for x, y in points if y == points[-1][1])
    assert (step - left) / (right - left) * 120 == pytest.approx(50, abs=1e-3)


def test_the_take_of_a_day_is_drawn_at_that_days_end() -> None:
    day = figures.DayTake(day=example.OPENS + timedelta(days=29), amount=5_000)
    points = _points(_take(example.mullet(daily=(day,))), "taken")
    left, right = points[0][0], points[-1][0]
    rise = next(x for x, y in points if y == points[-1][1])
    assert (rise - left) / (right - left) * 120 == pytest.approx(30, abs=1e-3)


@pytest.mark.parametrize("count", [0, 1, 2])
def test_few_days_are_drawn(count: int) -> None:
    svg = _take(example.mullet(daily=example.mullet().daily[:count]))
    assert len(_rises(_values(svg, _points(svg, "taken")))) == count + 1


def test_taking_more_than_the_allowable_stays_inside_the_axes() -> None:
    day = figures.DayTake(day=date(2026, 5, 1), amount=90_000_000)
    svg = _take(example.mullet(daily=(day,)))
    assert max(_values(svg, _points(svg, "taken"))) == pytest.approx(90_000, abs=0.2)
    assert min(y for _, y in _points(svg, "taken")) > _points(svg, "patch_2")[2][1]


def test_the_bands_median_and_dots_are_those_of_the_record() -> None:
    history = example.history()
    svg = _stock(history)
    median = _values(svg, _points(svg, "median"))
    assert median == pytest.approx([band.median / 1000 for band in history.bands], abs=0.2)
    for share in (50, 80, 95):
        drawn = _values(svg, _points(svg, f"band-{share}"))
        edges = [
            getattr(band, f"{end}_{share}") for band in history.bands for end in ("low", "high")
        ]
        assert min(drawn) == pytest.approx(min(edges) / 1000, abs=0.2)
        assert max(drawn) == pytest.approx(max(edges) / 1000, abs=0.2)
        missing = [e for e in edges if min(abs(e / 1000 - value) for value in drawn) > 0.2]
        assert missing == []
    zero, slope = _scale(svg)
    dots = [float(dot.get("y", "nan")) for dot in _group(svg, "observed").iter(f"{SVG}use")]
    assert [(y - zero) / slope for y in dots] == pytest.approx(
        [row.amount / 1000 for row in history.observed], abs=0.2
    )


def test_the_rule_stands_between_the_past_and_the_projection() -> None:
    svg = _stock(example.history())
    years = [x for x, _ in _points(svg, "median")]
    rule = _points(svg, "projection")[0][0]
    # 2025 is the last estimated year and 2026 the first projected one.
    assert years[25] < rule < years[26]
    assert rule == pytest.approx((years[25] + years[26]) / 2, abs=1e-3)
    assert "projection" not in _stock(example.history(years=20))


@pytest.mark.parametrize("runs", [0, 1, 199])
def test_bands_are_refused_from_too_few_runs(runs: int) -> None:
    with pytest.raises(charts.TooFewRuns, match="at least 200"):
        _stock(example.history(runs=runs))


def test_bands_are_drawn_from_just_enough_runs() -> None:
    assert _points(_stock(example.history(runs=200)), "median")


@pytest.mark.parametrize("years", [0, 1, 2])
def test_few_years_are_drawn(years: int) -> None:
    history = example.history(years=years)
    svg = _stock(dataclasses.replace(history, first_projected=2000, limit=None, trigger=None))
    marks = len(list(_group(svg, "median").iter(f"{SVG}use")))
    points = _points(svg, "median") if years > 1 else []
    # One year has no line; its mark shows it.
    assert (marks, len(points)) == {0: (0, 0), 1: (1, 0), 2: (0, 2)}[years]


@pytest.mark.parametrize("svg", [_take(example.mullet()), _stock(example.history())])
def test_a_chart_says_what_it_is_and_what_it_rests_on(svg: str) -> None:
    root = ElementTree.fromstring(svg)  # noqa: S314
    assert [child.tag for child in root][:2] == [f"{SVG}title", f"{SVG}desc"]
    assert root.get("role") == "img"
    texts = ["".join(text.itertext()) for text in root.iter(f"{SVG}text")]
    assert example.PROOF in texts
    assert root[0].text in texts
    assert root[1].text == "What it shows."
    assert len(gzip.compress(svg.encode())) <= 15_000
    # Nothing points outside the drawing, and nothing tells when it was made.
    assert all((use.get(LINK) or "").startswith("#") for use in root.iter(f"{SVG}use"))
    assert "DOCTYPE" not in svg
    assert "date" not in svg


def test_the_same_figures_give_the_same_bytes() -> None:
    assert _take(example.mullet()) == _take(example.mullet())
    assert _stock(example.history()) == _stock(example.history())


def test_hostile_names_stay_text() -> None:
    name = "<script>alert(1)</script> $\\frac{1}{2}$ & co"
    svg = _stock(example.history(), name=name)
    root = ElementTree.fromstring(svg)  # noqa: S314
    assert root[0].text == f"Stock of {name} by year, kg"
    assert "<script" not in svg
    assert any(name in "".join(text.itertext()) for text in root.iter(f"{SVG}text"))
