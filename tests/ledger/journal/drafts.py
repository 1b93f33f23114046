"""Drafts that the tests of the journal append."""

from datetime import UTC, date, datetime
from typing import Any

from ledger.journal.leaves import Draft, Posting

DAY = date(2026, 3, 1)
NOON = datetime(2026, 3, 1, 12, tzinfo=UTC)


def posting(account: str, amount: int, *, resource: str = "mullet", unit: str = "g") -> Posting:
    """Return a posting of mullet in grams, or of something else."""
    return Posting(account=account, resource=resource, unit=unit, amount=amount)


def draft(amount: int = 500, *, member: int = 17, **changes: Any) -> Draft:
    """Return a withdrawal by a member, or what the changes make of it."""
    values: dict[str, Any] = {
        "kind": "withdrawal",
        "occurred_at": NOON,
        "day": DAY,
        "facts": {"gear": "GN", "amount": amount},
        "postings": (
            posting(f"taken:mullet:{member}", amount),
            posting("pool:mullet", -amount),
        ),
        "subject": member,
    }
    return Draft(**(values | changes))
