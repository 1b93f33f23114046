"""The stage of the API's tests."""

import pytest

from ledger.foundation.clocks import Chance
from tests.conftest import TickingClock
from tests.ledger.api import stage as staging


@pytest.fixture
def stage(db: None, ticking_clock: TickingClock, chance: Chance) -> staging.Stage:
    """The small commons, and a token for each kind of visitor."""
    return staging.set_up(clock=ticking_clock, chance=chance)
