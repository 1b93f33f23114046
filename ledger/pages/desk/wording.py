"""Entries and what remains, in words."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date
from decimal import Decimal
from typing import Any

from governance import quantities
from ledger.commons import queries as commons
from ledger.commons.queries import CommonsRecord, ResourceRecord
from ledger.journal.leaves import EntryRecord
from ledger.movements import queries as movements

KINDS = {
    "withdrawal": "Withdrawal",
    "reversal": "Reversal",
    "work_given": "Work given",
    "money_given_instead": "Money given instead of work",
    "duties_assessed": "Duties charged",
    "due_charged": "Due charged",
    "due_paid": "Due paid",
    "given_back": "Given back",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class EntryWords:
    """An entry as a page tells it."""

    entry: EntryRecord
    kind: str
    about: str
    author: str
    amounts: tuple[str, ...]
    remains: tuple[str, ...]


def kind(code: str) -> str:
    """Return what a kind of entry is called."""
    return KINDS.get(code, code.replace("_", " ").capitalize())


def entry(*, kept: CommonsRecord, found: EntryRecord) -> EntryWords:
    """Return an entry in words, with what remains of the allotments that it draws on."""
    (words,) = entries(kept=kept, found=[found])
    return words


def entries(*, kept: CommonsRecord, found: list[EntryRecord]) -> list[EntryWords]:
    """Return entries in words; what remains is told where there is one alone."""
    members = commons.members(commons_id=kept.commons_id)
    resources = commons.resources(commons_id=kept.commons_id)
    names = {number: record.name for number, record in members.items()}
    return [
        EntryWords(
            entry=each,
            kind=kind(each.kind),
            about="" if each.subject is None else names.get(each.subject, ""),
            author=names.get(each.by, "the book itself"),
            amounts=tuple(_amounts(each, resources)),
            remains=tuple(_remains(kept, each, resources)) if len(found) == 1 else (),
        )
        for each in found
    ]


def remaining(*, commons_id: int, member: int, resource: ResourceRecord, day: date) -> str:
    """Say what a member may still take of the season that a day lies in."""
    left = movements.left_on(commons_id=commons_id, member=member, resource=resource.code, day=day)
    if left is None:
        return (
            f"No open season of {resource.name} holds {day.isoformat()}; a slip is recorded all"
            " the same, and the bylaws say what follows."
        )
    amount = quantities.amount_text(abs(left), base=resource.base, unit_code=resource.unit)
    if left < 0:
        return (
            f"{amount} of {resource.name} more than the allotment is recorded; the bylaws say what"
            " follows."
        )
    return f"{amount} of {resource.name} remain."


def posting(*, resource: str, unit: str, amount: int, resources: Any) -> str:
    """Return a posting's amount with its unit, in the one that people read where there is one."""
    kept = resources.get(resource)
    if kept is not None and kept.base == unit:
        return quantities.amount_text(amount, base=unit, unit_code=kept.unit)
    if resource == "money":
        return quantities.money_text(amount, currency=unit)
    return f"{amount:,} {unit}"


def _amounts(found: EntryRecord, resources: Any) -> Iterator[str]:
    for line in found.facts.get("lines", ()) if found.kind == movements.WITHDRAWAL else ():
        resource = resources[line["resource"]]
        base = f"{int(line['amount']):,} {resource.base}"
        given = f"{Decimal(line['given']):f} {line['unit']}"
        yield f"{given} of {resource.name} ({base})"


def _remains(kept: CommonsRecord, found: EntryRecord, resources: Any) -> Iterator[str]:
    if found.kind != movements.WITHDRAWAL or found.subject is None:
        return
    for code in dict.fromkeys(line["resource"] for line in found.facts["lines"]):
        yield remaining(
            commons_id=kept.commons_id,
            member=found.subject,
            resource=resources[code],
            day=found.day,
        )
