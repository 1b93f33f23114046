"""The shape of a report: sections of sentences, charts and tables, before any rendering.

The renderings differ in paper, not in content: each walks this outline, so that a figure is written
the same way in all of them.
"""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from datetime import date, datetime
from enum import StrEnum
from fractions import Fraction

from governance import quantities
from ledger.reports import numbers


class Sheet(StrEnum):
    """Which sheet of the workbook a table stands on, in the order of the sheets."""

    SUMMARY = "Summary"
    BY_DAY = "Use by day"
    STANDING = "Standing"
    MEMBERS = "Work and dues"
    FINDINGS = "Findings"
    CASES = "Cases"
    DUES = "Dues"
    REPORTING = "Reporting"
    ADVICE = "Advice"
    RISK = "Risk table"
    STOCK = "Stock by year"
    OBSERVATIONS = "Observations"
    SETTLEMENT = "Settlement"
    NEXT_SEASON = "Next season"
    NEXT_MEMBERS = "Next allotments"
    FINDING_LIST = "Findings one by one"
    CASE_LIST = "Cases one by one"
    CAUTIONS = "Cautions"


class Kind(StrEnum):
    """What a cell holds; a sheet needs to know, a page aligns by it."""

    TEXT = "text"
    NUMBER = "number"
    PERCENT = "percent"
    DAY = "day"


@dataclass(frozen=True, slots=True, kw_only=True)
class Cell:
    """One figure: as written, and as the typed value that a sheet keeps.

    ``fill`` from 0 to 5 shades the cell as a second channel; ``framed`` draws a bold frame.
    """

    kind: Kind
    text: str
    value: str | int | float | date | None
    fill: int = 0
    framed: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """A table with a caption; the first cell of a row is its header.

    ``groups`` are titles over runs of columns (title, number of columns), or empty. ``empty`` is
    the sentence that stands in its place where it has no row. ``looks`` says what shades and frames
    mean, for renderings that have them.
    """

    sheet: Sheet
    caption: str
    columns: tuple[str, ...]
    rows: tuple[tuple[Cell, ...], ...]
    empty: str
    groups: tuple[tuple[str, int], ...] = ()
    note: str = ""
    looks: str = ""

    @property
    def full_note(self) -> str:
        """Return the note, with what shades and frames mean."""
        return " ".join(filter(None, (self.note, self.looks)))

    @property
    def headed(self) -> tuple["Column", ...]:
        """Return the columns with the kind of what stands in them; none where there is no row."""
        if not self.rows:
            return ()
        return tuple(
            Column(title=title, kind=_kind(cells))
            for title, cells in zip(self.columns, zip(*self.rows, strict=True), strict=True)
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """A column's title and the kind of most of its cells."""

    title: str
    kind: Kind


@dataclass(frozen=True, slots=True, kw_only=True)
class Chart:
    """A drawn chart: the sentence that it shows is ``alt``.

    It stands after so many of its section's sentences as ``after`` says.
    """

    key: str
    title: str
    alt: str
    svg: str
    after: int


@dataclass(frozen=True, slots=True, kw_only=True)
class PointList:
    """A list of sentences under a title, which may be empty."""

    title: str
    points: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Section:
    """One section: sentences first, then lists, charts and tables.

    ``sheet`` is where a workbook has the sentences and lists.
    """

    key: str
    heading: str
    sheet: Sheet
    sentences: tuple[str, ...] = ()
    lists: tuple[PointList, ...] = ()
    charts: tuple[Chart, ...] = ()
    tables: tuple[Table, ...] = ()

    @property
    def told(self) -> tuple[tuple[str, tuple[Chart, ...]], ...]:
        """Return the sentences, each with the charts that stand after it."""
        return tuple(
            (sentence, tuple(chart for chart in self.charts if chart.after == place))
            for place, sentence in enumerate(self.sentences, start=1)
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class Report:
    """The whole report: its title, what it rests on, and its sections in order.

    ``mark`` is what every sheet of it must say of itself, or empty.
    """

    mark: str
    commons: str
    season: str
    title: str
    facts: tuple[tuple[str, str], ...]
    proof: str
    made_at: datetime
    sections: tuple[Section, ...]


def _kind(cells: Sequence[Cell]) -> Kind:
    kinds = [cell.kind for cell in cells if cell.value is not None] or [Kind.TEXT]
    return max(Kind, key=kinds.count)


def text(value: str) -> Cell:
    """Return a cell of words."""
    return Cell(kind=Kind.TEXT, text=value, value=value)


def word(value: str) -> Cell:
    """Return a cell of a word in a column of numbers, aligned as they are."""
    return Cell(kind=Kind.NUMBER, text=value, value=value)


def blank() -> Cell:
    """Return a cell that holds nothing, written as a dash so that nobody takes it for an error."""
    return Cell(kind=Kind.NUMBER, text="–", value=None)


def count(value: int) -> Cell:
    """Return a cell of a whole number."""
    return Cell(kind=Kind.NUMBER, text=f"{value:,}", value=value)


def label_number(value: int) -> Cell:
    """Return a cell of a number that names something: a member, a year."""
    return Cell(kind=Kind.NUMBER, text=str(value), value=value)


def exact(value: Fraction) -> Cell:
    """Return a cell of an exact number, to at most six places."""
    return Cell(kind=Kind.NUMBER, text=quantities.decimal_text(value), value=float(value))


def tenths(value: Fraction | None) -> Cell:
    """Return a cell of a number to one decimal, or a blank one."""
    if value is None:
        return blank()
    return Cell(kind=Kind.NUMBER, text=numbers.tenths(value), value=float(value))


def hundredths(value: Fraction) -> Cell:
    """Return a cell of a number written to two decimals and kept as it is."""
    return Cell(kind=Kind.NUMBER, text=f"{float(value):,.2f}", value=float(value))


def amount(value: int, *, base: str, unit: str) -> Cell:
    """Return a cell of base units, in the unit of reading."""
    return exact(numbers.reading(value, base=base, unit=unit))


def rough_amount(value: int, *, base: str, unit: str) -> Cell:
    """Return a cell of base units that are only an estimate, in the unit of reading."""
    return estimate(float(numbers.reading(value, base=base, unit=unit)))


def money(minor: int, *, currency: str) -> Cell:
    """Return a cell of a sum of the smallest coin, in whole currency."""
    return Cell(
        kind=Kind.NUMBER,
        text=numbers.money(minor, currency=currency),
        value=float(numbers.coins(minor, currency=currency)),
    )


def share(value: Fraction | None) -> Cell:
    """Return a cell of a share in percent, or a blank one."""
    if value is None:
        return blank()
    return Cell(kind=Kind.PERCENT, text=numbers.percent(value), value=float(value))


def day(value: date) -> Cell:
    """Return a cell of a day."""
    return Cell(kind=Kind.DAY, text=numbers.day(value), value=value)


def estimate(value: float | None) -> Cell:
    """Return a cell of an estimate to four significant digits, or a blank one."""
    if value is None:
        return blank()
    return Cell(kind=Kind.NUMBER, text=numbers.significant(value), value=value)


def aligned(rows: Iterable[tuple[Cell, ...]]) -> tuple[tuple[Cell, ...], ...]:
    """Return the rows with the numbers of each column written to equally many decimals."""
    kept = tuple(rows)
    places = [max(map(_decimals, column), default=0) for column in zip(*kept, strict=True)]
    return tuple(
        tuple(_padded(cell, places=wanted) for cell, wanted in zip(row, places, strict=True))
        for row in kept
    )


def _decimals(cell: Cell) -> int:
    is_number = cell.kind is Kind.NUMBER and not isinstance(cell.value, str)
    return len(cell.text.partition(".")[2]) if is_number else 0


def _padded(cell: Cell, *, places: int) -> Cell:
    missing = places - _decimals(cell)
    if not isinstance(cell.value, int | float) or cell.kind is not Kind.NUMBER or not missing:
        return cell
    point = "" if "." in cell.text else "."
    return replace(cell, text=f"{cell.text}{point}{'0' * missing}")
