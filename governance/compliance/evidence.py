"""What a finding rests on: the acts behind it, and the digest of everything that was used."""

import hashlib
from collections.abc import Iterator, Sequence
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


def grouped(*, rows: facts.Column, by: facts.Column) -> Iterator[facts.Column]:
    """Yield the rows of each group, in order of the group's number in ``by``."""
    if not len(rows):
        return
    order = rows[np.argsort(by[rows], kind="stable")]
    groups = by[order]
    yield from np.split(order, np.flatnonzero(groups[1:] != groups[:-1]) + 1)


def acts(*, table: facts.Withdrawals, rows: facts.Column) -> tuple[Act, ...]:
    """Return rows of takes as records, in order of entry, whatever the order of the rows."""
    return tuple(
        sorted(
            Act(entry, member, table.resource, day, instant, reported, amount, table.zones[zone])
            for entry, member, day, instant, reported, amount, zone in zip(
                table.entry[rows].tolist(),
                table.member[rows].tolist(),
                table.day[rows].tolist(),
                table.instant[rows].tolist(),
                table.reported[rows].tolist(),
                table.amount[rows].tolist(),
                table.zone[rows].tolist(),
                strict=True,
            )
        )
    )


def entries(records: Sequence[Act]) -> tuple[int, ...]:
    """Return the numbers of the entries that acts stand in, each once, in order."""
    return tuple(sorted({act.entry for act in records}))


def day_of(records: Sequence[Act]) -> periods.DateRange:
    """Return the one day that acts were done on."""
    day = periods.date_of(records[0].day)
    return periods.DateRange(first=day, until=day + timedelta(days=1))


def digest(
    *, book: clauses.Book, key: findings.Key, limit: int, rows: Sequence[tuple[object, ...]]
) -> str:
    """Return the SHA-256 (hex) of what a finding was computed from.

    One line for the book's digest, one for the key, one for the limit, then one for each row;
    the fields of a line are parted by tabs. Rows come sorted, so that their order is no input.
    """
    named = (
        key.clause,
        key.subject_kind.value,
        key.subject,
        key.resource,
        key.window.first,
        key.window.until,
    )
    lines = ((book.digest,), named, (limit,), *rows)
    text = "\n".join("\t".join(map(str, line)) for line in lines)
    return hashlib.sha256(text.encode()).hexdigest()
