"""Sheets and pages, cell by cell: every error names the file, the row and the column."""

import csv
import io
import re
from collections.abc import Collection, Iterator, Mapping
from dataclasses import dataclass
from datetime import UTC, date, datetime, time
from decimal import Decimal
from pathlib import Path
from typing import ClassVar
from zoneinfo import ZoneInfo

import yaml

from ledger.foundation.errors import LedgerError


class ScenarioError(LedgerError):
    """A scenario cannot be read."""

    code: ClassVar[str] = "scenario"


class FileMissing(ScenarioError):
    """A file of the scenario is not there."""

    code: ClassVar[str] = "scenario.file_missing"
    message: ClassVar[str] = "The scenario has no file {file} in {folder}."


class UnreadableFile(ScenarioError):
    """A file is not UTF-8 text, or a page is not YAML that holds keys and values."""

    code: ClassVar[str] = "scenario.unreadable_file"
    message: ClassVar[str] = "{file}, row {row}: {found}"


class WrongColumns(ScenarioError):
    """A row or a page has other columns than it should."""

    code: ClassVar[str] = "scenario.wrong_columns"
    message: ClassVar[str] = (
        "{file}, row {row}: found the columns {found}; accepted are {accepted}."
    )


class UnreadableCell(ScenarioError):
    """A cell does not say what it should."""

    code: ClassVar[str] = "scenario.unreadable_cell"
    message: ClassVar[str] = (
        "{file}, row {row}, column {column}: found {found!r}; accepted is {accepted}."
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Cell:
    """A text and where it stands; ``row`` counts lines of the file from 1."""

    file: str
    row: int
    column: str
    text: str

    def wrong(self, accepted: str) -> UnreadableCell:
        """Return the error that says what would be accepted here."""
        return UnreadableCell(
            file=self.file, row=self.row, column=self.column, found=self.text, accepted=accepted
        )

    def words(self) -> str:
        """Return a text that is not blank."""
        if not self.text.strip():
            raise self.wrong("a text")
        return self.text

    def whole(self) -> int:
        """Return a whole number of 0 or more."""
        if not re.fullmatch(r"\d{1,9}", self.text, re.ASCII):
            raise self.wrong("a whole number, such as 12")
        return int(self.text)

    def number(self) -> Decimal:
        """Return an exact decimal of 0 or more."""
        if not re.fullmatch(r"\d{1,12}(\.\d{1,6})?", self.text, re.ASCII):
            raise self.wrong("a number, such as 40.5")
        return Decimal(self.text)

    def above_zero(self) -> Decimal:
        """Return an exact decimal above 0."""
        found = self.number()
        if found == 0:
            raise self.wrong("a number above 0")
        return found

    def day(self) -> date:
        """Return a date."""
        return self._stamp("%Y-%m-%d", "a date, such as 2026-03-01").date()

    def clock(self) -> time:
        """Return a time of day."""
        return self._stamp("%H:%M", "a time of day, such as 07:45").time()

    def instant(self, *, zone: ZoneInfo) -> datetime:
        """Return a local date and time as an instant."""
        found = self._stamp("%Y-%m-%d %H:%M", "a date and time, such as 2026-03-01 07:45")
        return self._in_zone(found, zone)

    def instant_on(self, day: date, *, zone: ZoneInfo) -> datetime:
        """Return a local time of day on a date as an instant."""
        return self._in_zone(datetime.combine(day, self.clock()), zone)

    def one_of(self, accepted: Collection[str]) -> str:
        """Return a text that is one of those accepted."""
        if self.text not in accepted:
            raise self.wrong("one of " + ", ".join(accepted))
        return self.text

    def known(self, numbers: Collection[int], *, what: str) -> int:
        """Return a number that something is kept under."""
        found = self.whole()
        if found not in numbers:
            raise self.wrong(f"the number of a {what}")
        return found

    def _stamp(self, shape: str, accepted: str) -> datetime:
        # strptime takes "7:5" as well; two digits everywhere keep one way to write a moment.
        try:
            found = datetime.strptime(self.text, shape)  # noqa: DTZ007  (local; zoned by callers)
        except ValueError:
            raise self.wrong(accepted) from None
        if found.strftime(shape) != self.text:
            raise self.wrong(accepted)
        return found

    def _in_zone(self, local: datetime, zone: ZoneInfo) -> datetime:
        found = local.replace(tzinfo=zone)
        if found.astimezone(UTC).astimezone(zone).replace(tzinfo=None) != local:
            raise self.wrong("a time that the clocks did not skip")
        return found


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """One row of a sheet."""

    file: str
    row: int
    cells: Mapping[str, str]

    def __getitem__(self, column: str) -> Cell:
        return Cell(file=self.file, row=self.row, column=column, text=self.cells[column])

    def given(self, column: str) -> Cell | None:
        """Return a cell, or None if it is blank."""
        cell = self[column]
        return cell if cell.text else None

    def replaced(self, changes: Mapping[str, str]) -> "Row":
        """Return the row with other texts in some columns."""
        return Row(file=self.file, row=self.row, cells={**self.cells, **changes})


def sheet(*, folder: Path, file: str, columns: tuple[str, ...]) -> tuple[Row, ...]:
    """Return the rows of a CSV sheet with exactly these columns.

    :raises FileMissing: if there is no such file.
    :raises UnreadableFile: if it is not UTF-8.
    :raises WrongColumns: if the first line or a row has other columns.
    """
    reader = csv.reader(io.StringIO(_text(folder, file)))
    found = tuple(next(reader, ()))
    if found != columns:
        raise _columns(file, 1, found, columns)
    rows = []
    for texts in reader:
        if len(texts) != len(columns):
            raise _columns(file, reader.line_num, texts, columns)
        cells = dict(zip(columns, texts, strict=True))
        rows.append(Row(file=file, row=reader.line_num, cells=cells))
    return tuple(rows)


def _text(folder: Path, file: str) -> str:
    try:
        return (folder / file).read_text(encoding="utf-8")
    except FileNotFoundError:
        raise FileMissing(file=file, folder=folder) from None
    except UnicodeDecodeError as error:
        row = error.object[: error.start].count(b"\n") + 1
        raise UnreadableFile(file=file, row=row, found="the text is not UTF-8.") from None


def _columns(
    file: str, row: int, found: Collection[str], accepted: Collection[str]
) -> WrongColumns:
    return WrongColumns(
        file=file, row=row, found=", ".join(found) or "none", accepted=", ".join(accepted)
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Page:
    """A mapping of a YAML file; its scalars are texts, whatever they look like."""

    file: str
    node: yaml.MappingNode

    @property
    def row(self) -> int:
        """Return the line that it begins on."""
        return int(self.node.start_mark.line) + 1

    def keys(self) -> tuple[str, ...]:
        """Return the keys in order."""
        return tuple(str(key.value) for key, _ in self.node.value)

    def only(self, *accepted: str) -> "Page":
        """Return the page, once it is sure that no key stands twice or is not accepted.

        :raises WrongColumns: if one does.
        """
        keys = self.keys()
        if len(set(keys)) < len(keys) or not set(keys) <= set(accepted):
            raise _columns(self.file, self.row, keys, accepted)
        return self

    def __contains__(self, key: str) -> bool:
        return key in self.keys()

    def __getitem__(self, key: str) -> Cell:
        return self._cell(key, self._node(key))

    def page(self, key: str) -> "Page":
        """Return the mapping under a key."""
        return self._page(key, self._node(key))

    def pages(self, key: str) -> Iterator["Page"]:
        """Yield the mappings of the list under a key."""
        for node in self._list(key):
            yield self._page(key, node)

    def list_of(self, key: str) -> Iterator[Cell]:
        """Yield the scalars of the list under a key."""
        for node in self._list(key):
            yield self._cell(key, node)

    def _node(self, key: str) -> yaml.Node:
        for found, node in self.node.value:
            if found.value == key:
                return node  # type: ignore[no-any-return]
        raise _columns(self.file, self.row, self.keys(), (key,))

    def _list(self, key: str) -> list[yaml.Node]:
        node = self._node(key)
        if not isinstance(node, yaml.SequenceNode):
            raise self._wrong(key, node, "a list")
        return list(node.value)

    def _cell(self, key: str, node: yaml.Node) -> Cell:
        if not isinstance(node, yaml.ScalarNode):
            raise self._wrong(key, node, "a single value")
        row = int(node.start_mark.line) + 1
        return Cell(file=self.file, row=row, column=key, text=str(node.value))

    def _page(self, key: str, node: yaml.Node) -> "Page":
        if not isinstance(node, yaml.MappingNode):
            raise self._wrong(key, node, "keys and values")
        return Page(file=self.file, node=node)

    def _wrong(self, key: str, node: yaml.Node, accepted: str) -> UnreadableCell:
        row = int(node.start_mark.line) + 1
        if isinstance(node, yaml.ScalarNode):
            found = str(node.value)
        else:
            found = "a list" if isinstance(node, yaml.SequenceNode) else "keys and values"
        return UnreadableCell(file=self.file, row=row, column=key, found=found, accepted=accepted)


def page(*, folder: Path, file: str) -> Page:
    """Return a YAML file that holds one mapping.

    :raises FileMissing: if there is no such file.
    :raises UnreadableFile: if it is not YAML, or holds something else.
    """
    try:
        # Only the tree is built: no value is turned into anything, so no tag can do harm.
        node = yaml.compose(_text(folder, file), Loader=yaml.SafeLoader)
    except yaml.MarkedYAMLError as error:
        line = error.problem_mark.line + 1 if error.problem_mark else 1
        raise UnreadableFile(file=file, row=line, found=error.problem) from None
    if not isinstance(node, yaml.MappingNode):
        raise UnreadableFile(file=file, row=1, found="the file does not hold keys and values.")
    return Page(file=file, node=node)
