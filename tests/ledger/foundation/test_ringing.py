"""The bell rings once for a committed promise that is due, and no post fails or waits for it."""

import logging
import socket
import time
from collections.abc import Iterator
from datetime import timedelta

import pytest
from celery import Celery
from django.conf import settings
from django.db import transaction

from ledger.foundation import outbox, ringing
from ledger.foundation.models import Job
from tests.conftest import CommittingDatabase, TickingClock


def _promise(clock: TickingClock, key: str, *, days: int = 0) -> None:
    outbox.enqueue(
        commons_id=1,
        kind="judge",
        key=key,
        due_at=clock() + timedelta(days=days),
        payload={},
        clock=clock,
    )


@pytest.fixture
def broken_silence() -> Iterator[None]:
    """Forget before and after that a broker did not answer."""
    ringing._Silence.until = 0.0
    yield
    ringing._Silence.until = 0.0


@pytest.fixture
def rings(monkeypatch: pytest.MonkeyPatch, broken_silence: None) -> list[str]:
    """Put an address of a broker in place, and a list of what it is sent."""
    sent: list[str] = []
    monkeypatch.setattr(ringing.app.conf, "broker_url", "redis://127.0.0.1:1/0")
    monkeypatch.setattr(ringing.app, "send_task", lambda name, **_: sent.append(name))
    return sent


def test_once_for_a_transaction_and_only_when_it_is_committed(
    committing_db: CommittingDatabase, rings: list[str], ticking_clock: TickingClock
) -> None:
    with transaction.atomic():
        _promise(ticking_clock, "a")
        _promise(ticking_clock, "b", days=-1)
        assert rings == []
    assert rings == ["stintbook.ring"]
    with transaction.atomic():
        _promise(ticking_clock, "c")
        transaction.set_rollback(True)
    assert rings == ["stintbook.ring"]


def test_not_for_what_is_due_later_or_was_promised_before(
    committing_db: CommittingDatabase, rings: list[str], ticking_clock: TickingClock
) -> None:
    with transaction.atomic():
        _promise(ticking_clock, "later", days=1)
    assert rings == []
    with transaction.atomic():
        _promise(ticking_clock, "later")
    assert rings == []


def test_a_promise_taken_back_takes_its_ring_with_it_and_no_other(
    committing_db: CommittingDatabase, rings: list[str], ticking_clock: TickingClock
) -> None:
    with transaction.atomic():
        with transaction.atomic():
            _promise(ticking_clock, "taken back")
            transaction.set_rollback(True)
        _promise(ticking_clock, "kept")
    assert rings == ["stintbook.ring"]


def test_a_bell_in_memory_is_left_alone_where_nobody_hears_it(
    committing_db: CommittingDatabase,
    rings: list[str],
    ticking_clock: TickingClock,
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    monkeypatch.setattr(ringing.app.conf, "broker_url", "memory://")
    with transaction.atomic():
        _promise(ticking_clock, "a")
    assert rings == []
    monkeypatch.setattr(ringing, "_answered_here", ringing.threading.Event())
    ringing.answer_here()
    with transaction.atomic():
        _promise(ticking_clock, "b")
    assert rings == ["stintbook.ring"]


@pytest.mark.parametrize("listens", [False, True], ids=["refuses", "never answers"])
def test_a_dead_broker_costs_one_moment_and_one_warning(
    committing_db: CommittingDatabase,
    ticking_clock: TickingClock,
    broken_silence: None,
    caplog: pytest.LogCaptureFixture,
    monkeypatch: pytest.MonkeyPatch,
    listens: bool,
) -> None:
    """A port where nobody listens, and one whose owner takes calls and says nothing."""
    with socket.socket() as dead:
        dead.bind(("127.0.0.1", 0))
        if listens:
            dead.listen()
        client = Celery(broker=f"redis://127.0.0.1:{dead.getsockname()[1]}/0")
        client.conf.broker_transport_options = settings.CELERY_BROKER_TRANSPORT_OPTIONS
        monkeypatch.setattr(ringing, "app", client)
        caplog.set_level(logging.WARNING)
        began = time.monotonic()
        for key in range(20):
            with transaction.atomic():
                _promise(ticking_clock, str(key))
        took = time.monotonic() - began
        client.close()
    assert Job.objects.count() == 20
    assert len([each for each in caplog.records if each.name == "stintbook.bell"]) == 1
    # One time-out of three seconds, not twenty; the rest is room for a busy machine.
    assert took < 15
