"""The season report as lines of plain text, for a terminal."""

import textwrap
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import accumulate, zip_longest

from ledger.reports import sections
from ledger.reports.figures import SeasonFigures
from ledger.reports.outline import Cell, Kind, Section, Table

WIDTH = 100
_NO_BREAK = "\u00a0"
# How wide titles and words may be before they go on below, and the gap between columns: the first
# that fits across is taken.
_FITS = ((16, 44, 2), (10, 30, 2), (10, 24, 2), (9, 24, 1))


def season_text(figures: SeasonFigures, /, *, keys: tuple[str, ...]) -> Iterator[str]:
    """Yield the lines of some sections, in the report's order; a key may end in ``*``.

    :param keys: section keys, such as ``summary``, or beginnings of them, such as ``resource-*``.
    """
    report = sections.report(figures)
    if report.mark:
        yield ""
        yield report.mark
    for section in report.sections:
        if any(_matches(section.key, key) for key in keys):
            for line in _section(section):
                yield line.replace(_NO_BREAK, " ")


def _matches(key: str, wanted: str) -> bool:
    return key.startswith(wanted[:-1]) if wanted.endswith("*") else key == wanted


def _section(section: Section) -> Iterator[str]:
    yield ""
    yield section.heading
    yield "=" * len(section.heading)
    for sentence in section.sentences:
        yield from textwrap.wrap(sentence, WIDTH)
    for points in section.lists:
        if points.title:
            yield ""
            yield points.title
        for point in points.points:
            yield from textwrap.wrap(point, WIDTH, initial_indent="  - ", subsequent_indent="    ")
    for table in section.tables:
        yield ""
        yield table.caption
        yield from table_lines(table) if table.rows else [f"  {table.empty}"]


def table_lines(table: Table, /) -> Iterator[str]:
    """Yield a table; one that is too wide leaves out the columns that hold nothing, and says so."""
    grid = _Grid.of(table, *_FITS[0])
    if grid.width > WIDTH:
        table = _without_idle_columns(table)
        grids = [_Grid.of(table, *fit) for fit in _FITS]
        grid = next((each for each in grids if each.width <= WIDTH), grids[-1])
    yield from grid.lines(table.groups)
    if table.note:
        yield from textwrap.wrap(table.note, WIDTH, initial_indent="  ", subsequent_indent="  ")


def _without_idle_columns(table: Table) -> Table:
    """Return the table without the columns of numbers that are nought in every row."""
    idle = {
        place
        for place, cells in enumerate(zip(*table.rows, strict=True))
        if place and all(cell.kind is not Kind.TEXT and not cell.value for cell in cells)
    }
    if not idle:
        return table
    kept = [place for place in range(len(table.columns)) if place not in idle]
    ends = list(accumulate(count for _, count in table.groups))
    runs = zip(table.groups, [0, *ends], ends, strict=False)
    names = dict.fromkeys(table.columns[place] for place in sorted(idle))
    return replace(
        table,
        columns=tuple(table.columns[place] for place in kept),
        rows=tuple(tuple(row[place] for place in kept) for row in table.rows),
        groups=tuple(
            (title, sum(start <= place < end for place in kept)) for (title, _), start, end in runs
        ),
        note=f"{table.note} Left out, as 0 in every row: {', '.join(names)}.".strip(),
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class _Grid:
    """A table set out in lines of signs: words to the left, numbers to the right."""

    kinds: tuple[Kind, ...]
    titles: list[list[str]]
    body: list[list[list[str]]]
    widths: list[int]
    gap: str

    @classmethod
    def of(cls, table: Table, title_width: int, cell_width: int, gap: int) -> "_Grid":
        """Set a table out, with long titles and cells over several lines."""
        titles = [_wrapped(column.title, title_width) for column in table.headed]
        body = [[_cell(cell, cell_width) for cell in row] for row in table.rows]
        return cls(
            kinds=tuple(column.kind for column in table.headed),
            titles=titles,
            body=body,
            widths=[
                max(len(line) for lines in column for line in lines)
                for column in zip(titles, *body, strict=True)
            ],
            gap=" " * gap,
        )

    @property
    def width(self) -> int:
        """Return how many signs the table is wide."""
        return 2 + sum(self.widths) + len(self.gap) * (len(self.widths) - 1)

    def lines(self, groups: Sequence[tuple[str, int]]) -> Iterator[str]:
        """Yield the titles, a rule and the rows."""
        if groups:
            yield self._groups(groups)
        lead = max(map(len, self.titles))
        yield from self._row([[""] * (lead - len(title)) + title for title in self.titles])
        yield "  " + self.gap.join("-" * width for width in self.widths)
        for row in self.body:
            yield from self._row(row)

    def _groups(self, groups: Sequence[tuple[str, int]]) -> str:
        """Return the titles that stand over runs of columns, each over its own run."""
        placed, start = [], 0
        for title, count in groups:
            run = self.widths[start : start + count]
            placed.append(title.center(sum(run) + len(self.gap) * (len(run) - 1)))
            start += count
        return ("  " + self.gap.join(placed)).rstrip()

    def _row(self, cells: list[list[str]]) -> Iterator[str]:
        for parts in zip_longest(*cells, fillvalue=""):
            placed = (
                part.ljust(width) if kind is Kind.TEXT else part.rjust(width)
                for part, kind, width in zip(parts, self.kinds, self.widths, strict=True)
            )
            yield ("  " + self.gap.join(placed)).rstrip()


def _wrapped(words: str, width: int) -> list[str]:
    return textwrap.wrap(words, width, break_long_words=False) or [""]


def _cell(cell: Cell, width: int) -> list[str]:
    return _wrapped(cell.text, width) if cell.kind is Kind.TEXT else [cell.text]
