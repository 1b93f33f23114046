"""An advice that was changed behind its entry is told, with the entry."""

import json

import pytest
from django.db import transaction

from ledger.advice import columns, models, operations, queries, verification
from ledger.foundation.clocks import Chance
from tests.conftest import TickingClock
from tests.ledger import builders, falsifying
from tests.ledger.advice import albacore


@pytest.fixture
def advised(db: None, ticking_clock: TickingClock, chance: Chance) -> int:
    ticking_clock.set(albacore.OPENED_AT)
    hand = builders.hand(clock=ticking_clock, chance=chance, by=1)
    made = albacore.founded(hand=hand)
    albacore.observe(commons_id=made, observed=albacore.readings(), hand=hand)
    albacore.open_season(commons_id=made, hand=hand)
    with transaction.atomic():
        operations.advise(commons_id=made, season=albacore.CODE, hand=hand)
    return made


def _entry(commons_id: int) -> int:
    found = queries.latest(commons_id=commons_id, season=albacore.CODE)
    assert found is not None
    return found.entry


def test_advice_is_sound_until_its_proposal_changes(advised: int) -> None:
    """Also where the digest beside the result is made to fit it."""
    assert verification.problems(commons_id=advised) == ()
    entry = _entry(advised)
    kept = models.AdviceMade.objects.get().result
    kept["proposed"] += 1
    falsifying.falsify("UPDATE advice_advicemade SET result = %s", json.dumps(kept))
    (problem,) = verification.problems(commons_id=advised)
    assert (problem.invariant, problem.number) == ("advice", entry)
    assert "the digest of the result" in problem.what
    falsifying.falsify("UPDATE advice_advicemade SET digest = %s", columns.digest(kept))
    assert falsifying.told(verification.problems(commons_id=advised)) == {("advice", entry)}
    falsifying.falsify("UPDATE advice_advicemade SET result = '[]'")
    assert "it is no advice" in str(verification.problems(commons_id=advised))


def test_changed_rows(advised: int) -> None:
    entry = _entry(advised)
    for change in (
        "season = 'x'",
        "resource = 'eels'",
        "seed = seed + 1",
        "known_up_to = known_up_to - 1",
        "digest = '00'",
        "entry_number = 1",
    ):
        with transaction.atomic():
            falsifying.falsify(f"UPDATE advice_advicemade SET {change}")
            told = falsifying.told(verification.problems(commons_id=advised))
            assert ("advice", entry) in told, change
            transaction.set_rollback(True)
    falsifying.falsify("DELETE FROM advice_advicemade")
    assert falsifying.told(verification.problems(commons_id=advised)) == {("advice", entry)}
