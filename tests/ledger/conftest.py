"""The hand that writes in the tests of the book's slices."""

import pytest

from ledger.foundation.clocks import Chance
from ledger.foundation.hands import Hand
from tests.conftest import TickingClock
from tests.ledger import builders


@pytest.fixture
def hand(ticking_clock: TickingClock, chance: Chance) -> Hand:
    """The secretary's hand, by the ticking clock."""
    return builders.hand(clock=ticking_clock, chance=chance)
