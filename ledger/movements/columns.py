"""Entries of movements as the columns that the rules read."""

from collections.abc import Callable, Iterable, Sequence
from datetime import datetime
from typing import Any

from governance import facts, periods
from ledger.journal.leaves import Row

_EPOCH = datetime.fromisoformat("1970-01-01T00:00:00+00:00")


def _microseconds(instant: datetime) -> int:
    elapsed = instant - _EPOCH
    return (elapsed.days * 86_400 + elapsed.seconds) * 1_000_000 + elapsed.microseconds


def withdrawals(*, rows: Iterable[Row], resource: str, base: str) -> facts.Withdrawals:
    """Return the takes of one resource, a row for each line of a slip, in order of entry."""
    zones: dict[str, int] = {}
    lines = [
        (
            row.number,
            row.subject,
            periods.day_number(row.day),
            _microseconds(row.occurred_at),
            _microseconds(datetime.fromisoformat(row.facts["handed_in"])),
            line["amount"],
            zones.setdefault(line["zone"], len(zones)),
        )
        for row in rows
        for line in row.facts["lines"]
        if line["resource"] == resource
    ]
    entry, member, day, instant, reported, amount, zone = _turned(lines, width=7)
    return facts.Withdrawals(
        resource=resource,
        base=base,
        zones=tuple(zones),
        entry=entry,
        member=member,
        day=day,
        instant=instant,
        reported=reported,
        amount=amount,
        zone=zone,
    )


def contributions(
    *, rows: Sequence[Row], kind: str, base: str, amount_of: Callable[[dict[str, Any]], int]
) -> facts.Contributions:
    """Return what members gave of one kind."""
    duties: dict[str, int] = {}
    lines = [
        (
            row.number,
            row.subject,
            periods.day_number(row.day),
            amount_of(row.facts),
            duties.setdefault(row.facts["clause"], len(duties)),
        )
        for row in rows
    ]
    entry, member, day, amount, duty = _turned(lines, width=5)
    return facts.Contributions(
        kind=kind,
        base=base,
        duties=tuple(duties),
        entry=entry,
        member=member,
        day=day,
        amount=amount,
        duty=duty,
    )


def _turned(lines: Sequence[Sequence[Any]], *, width: int) -> tuple[facts.Column, ...]:
    if not lines:
        return tuple(facts.column([]) for _ in range(width))
    return tuple(facts.column(values) for values in zip(*lines, strict=True))
