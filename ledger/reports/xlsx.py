"""The season report as a workbook: numbers as numbers, texts that never become formulas."""

import io
import math
from datetime import UTC, date
from typing import Any

from ledger.reports import sections
from ledger.reports.figures import SeasonFigures
from ledger.reports.outline import Cell, Kind, Report, Section, Sheet, Table

_WIDTH_MIN, _WIDTH_MAX = 9, 44
_SENTENCE_COLUMNS = 6
_LINE_POINTS = 15
_FILLS = ("", "#EAF3F9", "#D3E6F2", "#B9D8EA", "#9CC8E1", "#7AB5D6")
# A print header holds at most 255 signs, with the proof line and the mark, and a & counts twice.
_HEADER_NAME_MAX = 60


def season_xlsx(figures: SeasonFigures, /) -> bytes:
    """Return the season report as a workbook, the same bytes for the same figures."""
    import xlsxwriter

    report = sections.report(figures)
    page = io.BytesIO()
    book = xlsxwriter.Workbook(
        page,
        {"in_memory": True, "strings_to_formulas": False, "strings_to_urls": False},
    )
    book.set_properties(
        {
            "title": report.title,
            "company": report.commons,
            "created": report.made_at.astimezone(UTC).replace(tzinfo=None),
        }
    )
    formats = _Formats(book)
    for sheet in Sheet:
        _Page(
            book.add_worksheet(sheet.value), report=report, sheet_kind=sheet, formats=formats
        ).fill()
    book.close()
    return page.getvalue()


class _Formats:
    """The formats of a book, each made once."""

    def __init__(self, book: Any) -> None:
        self._book = book
        self._made: dict[tuple[tuple[str, Any], ...], Any] = {}

    def get(self, **properties: Any) -> Any:
        key = tuple(sorted(properties.items()))
        if key not in self._made:
            self._made[key] = self._book.add_format(properties)
        return self._made[key]

    def of(self, cell: Cell) -> Any:
        properties: dict[str, Any] = {"valign": "top"}
        match cell.kind:
            case Kind.DAY:
                properties |= {"num_format": "yyyy-mm-dd", "align": "left"}
            case Kind.PERCENT:
                properties |= {"num_format": "0.0%"}
            case Kind.NUMBER:
                properties |= {"num_format": _number_format(cell), "align": "right"}
            case Kind.TEXT:
                properties |= {"text_wrap": True}
        if cell.fill:
            properties |= {"bg_color": _FILLS[cell.fill]}
        if cell.framed:
            properties |= {"bold": True, "border": 2}
        return self.get(**properties)


def _number_format(cell: Cell) -> str:
    """Return the format that shows a number as its text does: a year has no thousands mark."""
    decimals = len(cell.text.partition(".")[2])
    grouped = isinstance(cell.value, int | float) and (abs(cell.value) < 1000 or "," in cell.text)
    return ("#,##0" if grouped else "0") + ("." + "0" * decimals if decimals else "")


class _Page:
    """One sheet being filled from the top down."""

    def __init__(self, sheet: Any, *, report: Report, sheet_kind: Sheet, formats: _Formats) -> None:
        self._sheet, self._report, self._kind, self._formats = sheet, report, sheet_kind, formats
        self._row = 0
        parts = report.sections
        self._tables = [t for part in parts for t in part.tables if t.sheet is sheet_kind]
        self._texts = [part for part in parts if part.sheet is sheet_kind]
        self._widths = _widths(self._tables)

    def fill(self) -> None:
        """Write the head of the sheet, its tables and its texts."""
        for column, width in enumerate(self._widths):
            self._sheet.set_column(column, column, width)
        self._head()
        # Two sheets are there to be read; the others to be counted with.
        if self._kind in (Sheet.SUMMARY, Sheet.CAUTIONS):
            self._sheet.freeze_panes(self._row, 0)
            self._write_texts()
            self._write_tables()
        else:
            first = self._tables[0] if self._tables else None
            header_rows = (2 + bool(first.groups)) if first is not None and first.rows else 0
            self._sheet.freeze_panes(self._row + header_rows, 0)
            self._write_tables()
            self._write_texts()

    def _head(self) -> None:
        report = self._report
        bold = self._formats.get(bold=True, font_size=13)
        heading = f"{report.commons} · {report.title} · {self._kind.value}"
        self._sheet.write_string(0, 0, heading, bold)
        self._sheet.write_string(1, 0, report.proof, self._formats.get(font_color="#595959"))
        if report.mark:
            self._sheet.write_string(2, 0, report.mark, bold)
        name, proof = (
            text.replace("&", "&&") for text in (report.commons[:_HEADER_NAME_MAX], report.proof)
        )
        mark = f"\n{report.mark}" if report.mark else ""
        self._sheet.set_header(f"&L{name}\n{proof}{mark}&R&P of &N")
        self._sheet.set_paper(9)
        self._sheet.fit_to_pages(1, 0)
        self._row = 3

    def _write_tables(self) -> None:
        for table in self._tables:
            self._write_table(table)

    def _write_table(self, table: Table) -> None:
        self._sheet.write_string(self._row, 0, table.caption, self._formats.get(bold=True))
        self._row += 1
        if not table.rows:
            self._sentence(table.empty)
            self._row += 1
            return
        titled = self._formats.get(bold=True, bottom=1, text_wrap=True, valign="bottom")
        column = 0
        for title, span in table.groups:
            self._sheet.write_string(self._row, column, title, self._formats.get(bold=True))
            column += span
        self._row += bool(table.groups)
        for column, title in enumerate(table.columns):
            self._sheet.write_string(self._row, column, title, titled)
        for row in table.rows:
            self._row += 1
            for column, cell in enumerate(row):
                self._write_cell(column, cell)
        self._row += 1
        if table.full_note:
            self._sentence(table.full_note)
        self._row += 1

    def _write_cell(self, column: int, cell: Cell) -> None:
        place, look = (self._row, column), self._formats.of(cell)
        match cell.value:
            case None:
                self._sheet.write_blank(*place, None, look)
            case date() as day:
                self._sheet.write_datetime(*place, day, look)
            case int() | float() as number:
                self._sheet.write_number(*place, number, look)
            case str() as words:
                self._sheet.write_string(*place, words, look)

    def _write_texts(self) -> None:
        if self._kind is Sheet.SUMMARY:
            for label, words in self._report.facts:
                self._sentence(f"{label}: {words}")
            self._row += 1
        for part in self._texts:
            self._write_text(part)

    def _write_text(self, part: Section) -> None:
        bold = self._formats.get(bold=True)
        if part.sentences or part.lists:
            self._sheet.write_string(self._row, 0, part.heading, bold)
            self._row += 1
        for sentence in part.sentences:
            self._sentence(sentence)
        for points in part.lists:
            if points.title:
                self._sheet.write_string(self._row, 0, points.title, bold)
                self._row += 1
            for point in points.points:
                self._sentence(point)
        self._row += 1

    def _sentence(self, words: str) -> None:
        """Write a sentence over several columns, with the height that it needs."""
        across = sum(self._widths[:_SENTENCE_COLUMNS])
        look = self._formats.get(text_wrap=True, valign="top")
        row, last = self._row, _SENTENCE_COLUMNS - 1
        self._sheet.merge_range(row, 0, row, last, "", look)
        self._sheet.write_string(row, 0, words, look)
        self._sheet.set_row(row, _LINE_POINTS * math.ceil(1.1 * len(words) / across))
        self._row += 1


def _widths(tables: list[Table]) -> list[int]:
    """Return a width for each column: of its longest cell or title word, within bounds."""
    widths = [_WIDTH_MIN] * _SENTENCE_COLUMNS
    for table in tables:
        widths += [_WIDTH_MIN] * (len(table.columns) - len(widths))
        for row in table.rows:
            for column, cell in enumerate(row):
                widths[column] = max(widths[column], len(cell.text) + 2)
        for column, title in enumerate(table.columns):
            widths[column] = max(widths[column], *(len(word) + 2 for word in ["", *title.split()]))
    widths[0] = max(widths[0], 16)
    return [min(width, _WIDTH_MAX) for width in widths]
