"""The bell on a real Redis, with a real worker, in processes that the test starts."""

import os
import subprocess
import sys
from collections.abc import Iterator
from datetime import UTC, date, datetime
from pathlib import Path

import pytest
import redis
from celery import Celery
from django.db import transaction

from governance.periods import DateRange
from ledger.foundation import outbox
from ledger.foundation.clocks import Chance, system_clock
from ledger.foundation.models import Job
from tests.conftest import CommittingDatabase, TickingClock
from tests.ledger import builders
from tests.ledger.processes import (
    REDIS_SERVER,
    ROOT,
    WAIT_SECONDS,
    free_port,
    redis_on,
    wait_for,
)

# A season that has no work due on the day of the test but what the test promises.
FAR_OFF = DateRange(first=date(2199, 3, 1), until=date(2199, 6, 29))

pytestmark = pytest.mark.needs_server(REDIS_SERVER)


@pytest.fixture
def broker(tmp_path: Path) -> Iterator[redis.Redis]:
    """Start a Redis of this test's own on a free port."""
    with redis_on(free_port(), folder=tmp_path) as client:
        yield client


def _url(broker: redis.Redis) -> str:
    return f"redis://127.0.0.1:{broker.get_connection_kwargs()['port']}/0"


@pytest.fixture
def worker(broker: redis.Redis, committing_db: CommittingDatabase) -> Iterator[Celery]:
    """Start a worker on the test's own database, and give a client that can ring its bell."""
    process = subprocess.Popen(
        [
            *(sys.executable, "-m", "celery", "-A", "ledger.celery"),
            *("worker", "-P", "solo", "-l", "ERROR"),
        ],
        cwd=ROOT,
        env=os.environ
        | {"STINTBOOK_DATABASE": committing_db.address, "STINTBOOK_BROKER": _url(broker)},
    )
    client = Celery(broker=_url(broker))
    try:
        wait_for(lambda: client.control.ping(timeout=0.5), what="the worker to answer")
        yield client
    finally:
        client.close()
        process.terminate()
        process.wait(timeout=WAIT_SECONDS)


def _promise(commons_id: int, key: str) -> None:
    """Promise advice for a season whose allowable is adopted: it will be no longer due."""
    with transaction.atomic():
        outbox.enqueue(
            commons_id=commons_id,
            kind="advise",
            key=key,
            due_at=datetime(2026, 1, 1, tzinfo=UTC),
            payload={"season": f"mullet-{FAR_OFF.first.year}"},
            clock=system_clock,
        )


def _is_done(commons_id: int, key: str) -> bool:
    return Job.objects.filter(commons_id=commons_id, key=key, done_at__isnull=False).exists()


def test_a_ring_does_what_is_due_and_a_lost_bell_loses_nothing(
    worker: Celery,
    broker: redis.Redis,
    ticking_clock: TickingClock,
    chance: Chance,
) -> None:
    """Redis may lose every message: the rows are still there at the next ring."""
    hand = builders.hand(clock=ticking_clock, chance=chance)
    commons_id = builders.governed(hand=hand)
    builders.open_seasons(commons_id=commons_id, hand=hand, during=FAR_OFF)
    builders.adopt_allowables(commons_id=commons_id, hand=hand, year=FAR_OFF.first.year)
    _promise(commons_id, "first")
    worker.send_task("stintbook.ring")
    wait_for(lambda: _is_done(commons_id, "first"), what="the first job to be done")

    _promise(commons_id, "second")
    broker.flushall()
    worker.send_task("stintbook.ring")
    wait_for(lambda: _is_done(commons_id, "second"), what="the second job to be done")

    second = Job.objects.get(commons_id=commons_id, key="second")
    assert second.outcome.startswith("no longer due")
    assert second.attempts == 1
