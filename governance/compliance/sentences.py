"""Figures and dates as a member reads them: the parts that working lines are made of."""

from collections.abc import Sequence
from dataclasses import dataclass

from governance import facts, periods, quantities
from governance.bylaws import clauses
from governance.compliance import evidence

# Longer lists of entries are counted instead: a season's sum would fill a page.
_LISTED_AT_MOST = 8


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """The unit that is counted and the unit that people read."""

    base: str
    unit: str

    def text(self, amount: int) -> str:
        """Write an amount of base units for reading."""
        return quantities.amount_text(amount, base=self.base, unit_code=self.unit)


def reading(*, book: clauses.Book, table: facts.Withdrawals) -> Reading:
    """Return how the takes of a table are read.

    :raises UnitMismatch: if the book counts the resource in another base unit than the takes.
    """
    units = book.units_of(table.resource)
    if units.base != table.base:
        raise quantities.UnitMismatch(found=table.base, expected=units.base)
    return Reading(base=table.base, unit=units.unit)


def hours(minutes: int) -> str:
    """Write minutes as hours and minutes: 3030 is ``50 h 30 min``."""
    whole, rest = divmod(minutes, 60)
    if not whole:
        return f"{rest} min"
    return f"{whole:,} h {rest} min" if rest else f"{whole:,} h"


def figure(*, amount: int, base: str, resource: str, book: clauses.Book) -> str:
    """Write a finding's figure: hours for a duty, the resource's reading unit for a take."""
    if not resource:
        return hours(amount)
    return quantities.amount_text(amount, base=base, unit_code=book.units_of(resource).unit)


def when(window: periods.DateRange) -> str:
    """Write a window: ``on 2026-04-03`` or ``from 2026-03-01 to 2026-06-28``."""
    if window.until == periods.OPEN_END:
        return f"from {window.first} until further notice"
    if window.length_days == 1:
        return f"on {window.first}"
    return f"from {window.first} to {window.last}"


def listed(numbers: Sequence[int]) -> str:
    """Write entry numbers, or their count where they are many."""
    if len(numbers) == 1:
        return f"Entry {numbers[0]}"
    if len(numbers) > _LISTED_AT_MOST:
        return f"{len(numbers):,} entries from {numbers[0]} to {numbers[-1]}"
    return "Entries " + ", ".join(str(number) for number in numbers)


def taken(*, acts: Sequence[evidence.Act], window: periods.DateRange, read: Reading) -> str:
    """Write what was taken in a window, entry by entry, and its sum."""
    by_entry: dict[int, int] = {}
    for act in acts:
        by_entry[act.entry] = by_entry.get(act.entry, 0) + act.amount
    total = read.text(sum(by_entry.values()))
    if 1 < len(by_entry) <= _LISTED_AT_MOST:
        total = " + ".join(read.text(amount) for amount in by_entry.values()) + f" = {total}"
    return f"{listed(tuple(by_entry))}: {total} {when(window)}."
