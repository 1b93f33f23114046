"""What a finding rests on: the acts behind it, and the digest of everything that was used."""

import hashlib
import itertools
from collections.abc import Iterable, Iterator, Sequence
from datetime import timedelta
from typing import NamedTuple

import numpy as np

from governance import facts, periods
from governance.bylaws import clauses
from governance.compliance import findings


class Act(NamedTuple):
    """One row of takes, in the units of its table; ``zone`` is the zone's code."""

    entry: int
    member: int
    resource: str
    day: int
    instant: int
    reported: int
    amount: int
    zone: str


def acts(*, table: facts.Withdrawals, rows: facts.Column) -> tuple[Act, ...]:
    """Return rows of takes as records, in the order of the rows."""
    zones = [table.zones[zone] for zone in table.zone[rows].tolist()]
    columns = (table.day, table.instant, table.reported, table.amount)
    return tuple(
        map(
            Act,
            table.entry[rows].tolist(),
            table.member[rows].tolist(),
            itertools.repeat(table.resource),
            *(column[rows].tolist() for column in columns),
            zones,
        )
    )


def grouped(
    *, table: facts.Withdrawals, rows: facts.Column, by: facts.Column
) -> Iterator[tuple[int, tuple[Act, ...]]]:
    """Yield each group's number in ``by`` and its acts, sorted, whatever the order of the rows.

    :param by: a group for every row of the table; only the given rows are grouped.
    """
    ordered = rows[np.argsort(by[rows], kind="stable")]
    groups = by[ordered]
    records = acts(table=table, rows=ordered)
    edges = np.flatnonzero(groups[1:] != groups[:-1]) + 1
    bounds = [0, *edges.tolist(), len(records)] if records else []
    for begins, ends in itertools.pairwise(bounds):
        yield int(groups[begins]), tuple(sorted(records[begins:ends]))


def entries(records: Sequence[Act]) -> tuple[int, ...]:
    """Return the numbers of the entries that acts stand in, each once, in order."""
    return tuple(sorted({act.entry for act in records}))


def day_of(records: Sequence[Act]) -> periods.DateRange:
    """Return the one day that acts were done on."""
    day = periods.date_of(records[0].day)
    return periods.DateRange(first=day, until=day + timedelta(days=1))


def digest(*, book: clauses.Book, key: findings.Key, limit: int, rows: Iterable[str]) -> str:
    """Return the SHA-256 (hex) of what a finding was computed from.

    One line for the book's digest, one for the key, one for the limit, then one for each row;
    the fields of a line are parted by tabs. Rows come in order of entry, so that the order in
    which they were read is no input.
    """
    window = key.window
    named = (
        f"{key.clause}\t{key.subject_kind.value}\t{key.subject}\t{key.resource}"
        f"\t{window.first}\t{window.until}"
    )
    text = "\n".join((book.digest, named, str(limit), *rows))
    return hashlib.sha256(text.encode()).hexdigest()


def line(*fields: object) -> str:
    """Return a row of the digest from its fields."""
    return "\t".join(map(str, fields))


def lines(records: Iterable[Act]) -> Iterator[str]:
    """Yield the rows of the digest that acts are: their fields in the order of ``Act``."""
    for entry, member, resource, day, instant, reported, amount, zone in records:
        yield f"{entry}\t{member}\t{resource}\t{day}\t{instant}\t{reported}\t{amount}\t{zone}"
