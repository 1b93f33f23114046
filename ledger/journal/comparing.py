"""Tables that stand beside the entries of a journal, held against what the entries say."""

from collections import Counter
from collections.abc import Callable, Collection, Iterable, Iterator, Mapping
from dataclasses import dataclass

from ledger.journal import queries
from ledger.journal.leaves import EntryRecord
from ledger.journal.verification import Problem

_SIGNS_MAX = 80


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """A row beside an entry: as it stands, or as the entry says that it should.

    ``table`` is a plain word; ``name`` tells the rows of one table that stand beside one entry
    apart. A field that the entry does not tell of is not compared.
    """

    table: str
    entry: int
    name: str
    fields: Mapping[str, object]


def against_entries(
    *,
    commons_id: int,
    kinds: Collection[str],
    kept: Callable[[], Iterable[Row]],
    told: Callable[[EntryRecord], Iterable[Row]],
) -> tuple[Problem, ...]:
    """Return where the rows that are kept are not those that the entries of some kinds tell of.

    Posting may go on meanwhile: an entry appended after the rows were read is not missed.

    :param kept: reads the rows as they stand.
    :param told: returns the rows that an entry tells of; entries come in order of number.
    :raises ledger.journal.queries.JournalNotOpen: if the commons has no journal.
    """
    before = queries.head(commons_id=commons_id).size
    standing = tuple(kept())
    expected = [
        row for entry in queries.entries(commons_id=commons_id, kinds=kinds) for row in told(entry)
    ]
    return tuple(_differences(expected, standing, before))


def fields_that_differ(
    *, expected: Mapping[str, object], found: Mapping[str, object]
) -> Iterator[str]:
    """Yield, of each expected field that is found otherwise, a sentence that names both values."""
    for name, value in expected.items():
        if name not in found:
            yield f"{name} is absent; it should be {_shown(value)}"
        elif found[name] != value or type(found[name]) is not type(value):
            yield f"{name} is {_shown(found[name])}; it should be {_shown(value)}"


def _differences(
    expected: Iterable[Row], standing: Collection[Row], before: int
) -> Iterator[Problem]:
    counted = Counter(_place(row) for row in standing)
    by_place = {_place(row): row for row in standing}
    places = set()
    for row in expected:
        place = _place(row)
        places.add(place)
        if place in by_place:
            for what in fields_that_differ(expected=row.fields, found=by_place[place].fields):
                yield _problem(row, what)
        elif row.entry <= before:
            yield _problem(row, "its row is missing")
    for place, row in by_place.items():
        if place not in places:
            yield _problem(row, "a row stands there that no such entry tells of")
        elif counted[place] > 1:
            yield _problem(row, f"its row stands there {counted[place]} times")


def _place(row: Row) -> tuple[str, int, str]:
    return row.table, row.entry, row.name


def _problem(row: Row, what: str) -> Problem:
    return Problem(invariant=row.table, number=row.entry or None, what=f"{row.name}: {what}")


def _shown(value: object) -> str:
    text = str(value)
    return text if len(text) <= _SIGNS_MAX else f"{text[:_SIGNS_MAX]}…"
