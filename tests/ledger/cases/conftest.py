"""The bay in which cases are walked."""

import pytest

from ledger.foundation.clocks import Chance
from tests.conftest import TickingClock
from tests.ledger import scene


@pytest.fixture
def bay(db: None, ticking_clock: TickingClock, chance: Chance) -> scene.Scene:
    return scene.opened(clock=ticking_clock, chance=chance)
