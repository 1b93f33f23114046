"""Entries of fieldwork as the rules read them."""

from collections.abc import Iterable
from fractions import Fraction

from governance.facts import Observation
from ledger.journal.leaves import Row


def observations(rows: Iterable[Row]) -> tuple[Observation, ...]:
    """Return the readings of resources, in order of entry."""
    return tuple(
        Observation(
            entry=row.number,
            resource=row.facts["resource"],
            kind=row.facts["kind"],
            zone=row.facts["zone"],
            year=row.facts["year"],
            value=Fraction(row.facts["value"]),
            unit=row.facts["unit"],
            error=Fraction(row.facts["error"]) if row.facts["error"] else None,
        )
        for row in rows
    )
