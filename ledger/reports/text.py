"""The season report as lines of plain text, for a terminal."""

import textwrap
from collections.abc import Iterator
from itertools import zip_longest

from ledger.reports import sections
from ledger.reports.figures import SeasonFigures
from ledger.reports.outline import Kind, Section, Table

WIDTH = 100
_HEADER_WIDTH = 16
_CELL_WIDTH = 44
_NO_BREAK = "\u00a0"


def season_text(figures: SeasonFigures, /, *, keys: tuple[str, ...]) -> Iterator[str]:
    """Yield the lines of some sections, in the report's order; a key may end in ``*``.

    :param keys: section keys, such as ``summary``, or beginnings of them, such as ``resource-*``.
    """
    for section in sections.report(figures).sections:
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
        yield from _table(table) if table.rows else [f"  {table.empty}"]


def _table(table: Table) -> Iterator[str]:
    """Yield a table: words to the left, numbers to the right, long cells over several lines."""
    kinds = [column.kind for column in table.headed]
    titles = [textwrap.wrap(column.title, _HEADER_WIDTH) or [""] for column in table.headed]
    body = [[textwrap.wrap(cell.text, _CELL_WIDTH) or [""] for cell in row] for row in table.rows]
    widths = [
        max(len(line) for lines in column for line in lines)
        for column in zip(titles, *body, strict=True)
    ]
    if table.groups:
        yield _groups(table, widths)
    lead = max(map(len, titles))
    yield from _row([[""] * (lead - len(title)) + title for title in titles], kinds, widths)
    yield "  " + "  ".join("-" * width for width in widths)
    for row in body:
        yield from _row(row, kinds, widths)
    if table.note:
        yield from textwrap.wrap(table.note, WIDTH, initial_indent="  ", subsequent_indent="  ")


def _groups(table: Table, widths: list[int]) -> str:
    """Return the titles that stand over runs of columns, each over its own run."""
    placed, start = "", 0
    for title, count in table.groups:
        run = widths[start : start + count]
        placed += "  " + title.center(sum(run) + 2 * (len(run) - 1))
        start += count
    return placed.rstrip()


def _row(cells: list[list[str]], kinds: list[Kind], widths: list[int]) -> Iterator[str]:
    for parts in zip_longest(*cells, fillvalue=""):
        placed = (
            part.ljust(width) if kind is Kind.TEXT else part.rjust(width)
            for part, kind, width in zip(parts, kinds, widths, strict=True)
        )
        yield ("  " + "  ".join(placed)).rstrip()
