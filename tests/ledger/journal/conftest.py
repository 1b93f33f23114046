"""An open journal, and the writer of it."""

from collections.abc import Callable
from typing import Any

import pytest
from django.db import transaction

from ledger.foundation.clocks import Chance
from ledger.journal import operations
from ledger.journal.leaves import Draft, Receipt
from tests.conftest import TickingClock
from tests.ledger.journal import drafts

COMMONS = 1

Append = Callable[..., tuple[Receipt, ...]]


@pytest.fixture
def append(ticking_clock: TickingClock, chance: Chance) -> Append:
    """Return what opens the journal of a commons and appends drafts in one transaction."""
    opened = set()

    def appended(*given: Draft, commons_id: int = COMMONS, by: int = 0) -> tuple[Receipt, ...]:
        with transaction.atomic():
            if commons_id not in opened:
                operations.open_journal(commons_id=commons_id, clock=ticking_clock, chance=chance)
                opened.add(commons_id)
            return operations.append(
                commons_id=commons_id, drafts=given, by=by, clock=ticking_clock, chance=chance
            )

    return appended


@pytest.fixture
def reverse(ticking_clock: TickingClock, chance: Chance) -> Callable[..., Receipt]:
    """Return what reverses an entry in one transaction."""

    def reversed_(number: int, *, commons_id: int = COMMONS, **changes: Any) -> Receipt:
        with transaction.atomic():
            return operations.reverse(
                commons_id=commons_id,
                number=number,
                reason="weighed twice",
                by=1,
                occurred_at=ticking_clock(),
                day=drafts.DAY,
                clock=ticking_clock,
                chance=chance,
                **changes,
            )

    return reversed_
