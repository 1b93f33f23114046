"""Alive, and able to work: two questions, and no detail in either answer."""

from collections.abc import Iterator
from contextlib import contextmanager
from datetime import timedelta
from unittest import mock

import pytest
from django.db import OperationalError, connection, transaction
from django.db.migrations.recorder import MigrationRecorder
from django.test import Client

from ledger.foundation import outbox
from ledger.foundation.clocks import Chance, system_clock
from ledger.journal import operations as journal
from ledger.web import health
from tests.conftest import TickingClock
from tests.ledger import builders

SAID_OF_THE_SOUND = (200, b"ready\n")
SAID_OF_THE_REST = (503, b"not ready\n")


def _ready() -> tuple[int, bytes]:
    response = Client().get("/readyz")
    return response.status_code, response.content


@contextmanager
def _unreachable() -> Iterator[None]:
    error = OperationalError("could not connect to 10.0.0.7")
    with mock.patch.object(connection, "cursor", side_effect=error):
        yield


def test_alive_asks_for_nothing() -> None:
    """There is no database at all here: pytest-django forbids it."""
    response = Client().get("/healthz")
    assert (response.status_code, response.content) == (200, b"alive\n")
    assert Client().head("/healthz").status_code == 200
    assert Client().post("/healthz").status_code == 405


@pytest.mark.django_db
def test_ready_where_nothing_is_wrong() -> None:
    assert _ready() == SAID_OF_THE_SOUND


@pytest.mark.django_db
def test_not_while_the_database_is_away() -> None:
    with _unreachable():
        assert _ready() == SAID_OF_THE_REST
        assert Client().get("/healthz").status_code == 200
    assert _ready() == SAID_OF_THE_SOUND


@pytest.mark.django_db
def test_not_before_every_migration() -> None:
    MigrationRecorder.Migration.objects.filter(app="journal").delete()
    assert list(health.troubles(now=system_clock())) == ["tables are missing or old"]
    assert _ready() == SAID_OF_THE_REST


@pytest.mark.django_db
def test_not_while_a_journal_is_stopped(ticking_clock: TickingClock, chance: Chance) -> None:
    commons_id = builders.found(hand=builders.hand(clock=ticking_clock, chance=chance))
    with transaction.atomic():
        journal.stop(commons_id=commons_id, why="I2: entry 1")
    assert list(health.troubles(now=system_clock())) == [
        f"posting is stopped in journal {commons_id}: I2: entry 1"
    ]
    assert _ready() == SAID_OF_THE_REST


@pytest.mark.django_db
@pytest.mark.parametrize(("minutes", "told"), [(14, 0), (16, 1)])
def test_not_while_work_lies_undone(ticking_clock: TickingClock, minutes: int, told: int) -> None:
    with transaction.atomic():
        outbox.enqueue(
            commons_id=1,
            kind="judge",
            key="2026-03-01",
            due_at=ticking_clock.now,
            payload={},
            clock=ticking_clock,
        )
    late = ticking_clock.now + timedelta(minutes=minutes)
    assert len(list(health.troubles(now=late))) == told
