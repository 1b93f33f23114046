"""Promised work while brokers, workers and clocks come and go: done once, and never lost."""

import signal
import subprocess
from collections.abc import Iterator
from contextlib import AbstractContextManager, contextmanager
from pathlib import Path

import pytest
from celery import Celery
from django.db import connection, transaction

from ledger.foundation import outbox, ringing
from ledger.foundation.clocks import Chance, system_clock
from ledger.foundation.models import Job
from tests.conftest import CommittingDatabase
from tests.ledger import builders
from tests.ledger.processes import (
    FOLDER,
    REDIS_SERVER,
    WAIT_SECONDS,
    free_port,
    kill_all,
    promise,
    redis_on,
    running,
    wait_for,
    written,
)

pytestmark = pytest.mark.needs_server(REDIS_SERVER)
PROMISES = 40


@pytest.fixture
def commons_id(committing_db: CommittingDatabase, chance: Chance) -> int:
    return builders.people(hand=builders.hand(clock=system_clock, chance=chance))


class Service:
    """What the processes of one test share: a database, a port of a broker, a folder."""

    def __init__(self, database: CommittingDatabase, folder: Path) -> None:
        self.port = free_port()
        self.folder = folder
        self.broker = f"redis://127.0.0.1:{self.port}/0"
        self.environment = {
            "STINTBOOK_DATABASE": database.address,
            "STINTBOOK_BROKER": self.broker,
            FOLDER: str(folder),
        }

    def runs(self, *arguments: str) -> AbstractContextManager[subprocess.Popen[str]]:
        """Run a command of the service."""
        return running(*arguments, **self.environment)

    @contextmanager
    def worker(self) -> Iterator[tuple[subprocess.Popen[str], Celery]]:
        """Run a worker, and give it with a client that can ring once it answers."""
        worker = ("celery", "-A", "tests.ledger.tasks.odd_jobs", "worker", "-c", "1", "-l", "ERROR")
        client = Celery(broker=self.broker)
        with self.runs("-m", *worker) as process:
            try:
                wait_for(lambda: client.control.ping(timeout=0.5), what="the worker to answer")
                yield process, client
                process.send_signal(signal.SIGTERM)
                process.wait(timeout=WAIT_SECONDS)
            finally:
                client.close()


@pytest.fixture
def service(committing_db: CommittingDatabase, tmp_path: Path) -> Service:
    return Service(committing_db, tmp_path)


def _open_jobs() -> int:
    return Job.objects.filter(done_at__isnull=True, parked_at__isnull=True).count()


def test_promises_whose_bell_was_lost_are_all_done_once_by_the_next_ring(
    service: Service, commons_id: int, tmp_path: Path
) -> None:
    """Nobody hears a ring for any of them, and the broker forgets and is killed in between."""
    keys = [f"{key:03}" for key in range(PROMISES)]
    with redis_on(service.port, folder=tmp_path) as broker:
        for key in keys[: PROMISES // 2]:
            promise(commons_id=commons_id, kind="writes", key=key)
        Celery(broker=service.broker).send_task(ringing.RING)
        broker.flushall()
    for key in keys[PROMISES // 2 :]:
        promise(commons_id=commons_id, kind="writes", key=key)
    with redis_on(service.port, folder=tmp_path), service.worker() as (_, client):
        for _ in range(3):
            client.send_task(ringing.RING)
        wait_for(lambda: not _open_jobs(), what="every job to be done")
    assert written(commons_id) == keys
    assert {*Job.objects.values_list("attempts", flat=True)} == {1}


def test_a_promise_rings_a_worker_at_once(
    service: Service, commons_id: int, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """No clock runs here: only the bell can have called the worker."""
    with redis_on(service.port, folder=tmp_path), service.worker() as (_, client):
        client.conf.broker_url = service.broker
        monkeypatch.setattr(ringing, "app", client)
        promise(commons_id=commons_id, kind="writes", key="now")
        wait_for(lambda: not _open_jobs(), what="the job to be done", seconds=10)
    assert written(commons_id) == ["now"]


def test_a_job_that_kills_its_worker_is_parked_and_the_others_go_on(
    service: Service, commons_id: int, tmp_path: Path
) -> None:
    promise(commons_id=commons_id, kind="deadly", key="poison")
    poison = Job.objects.get()
    # Workers take some seconds to die and be replaced: here two do so, after three on paper.
    for _ in range(3):
        with transaction.atomic():
            outbox.begin(job_id=poison.pk, at=system_clock())
    for key in ("a", "b", "c"):
        promise(commons_id=commons_id, kind="writes", key=key)
    with redis_on(service.port, folder=tmp_path), service.worker() as (_, client):
        client.send_task(ringing.RING)
        # One ring is enough: a worker that was lost gives it back to the broker. And the others
        # need not wait until the fifth.
        wait_for(lambda: _open_jobs() <= 1, what="the others to be done", seconds=10)
        assert written(commons_id) == ["a", "b", "c"]
        wait_for(outbox.parked, what="the job to be parked")
    (parked,) = outbox.parked()
    assert (parked.job.key, parked.job.attempts) == ("poison", 5)
    assert outbox.backlog(at=system_clock()) == outbox.Backlog(
        open_due=0, oldest_due_at=None, parked=1
    )


def test_a_worker_that_is_killed_in_the_middle_leaves_nothing_and_the_next_does_it_once(
    service: Service, commons_id: int, tmp_path: Path
) -> None:
    promise(commons_id=commons_id, kind="slow", key="cut off")
    with redis_on(service.port, folder=tmp_path):
        with service.worker() as (process, client):
            client.send_task(ringing.RING)
            wait_for((tmp_path / "begun-cut off").exists, what="the job to begin")
            kill_all(process)
        assert written(commons_id) == []
        (tmp_path / "go").touch()
        with service.worker() as (_, client):
            client.send_task(ringing.RING)
            wait_for(lambda: not _open_jobs(), what="the job to be done")
    assert written(commons_id) == ["cut off"]
    job = Job.objects.get()
    assert (job.attempts, job.unended) == (2, 0)


def test_of_two_clocks_the_second_ends_and_a_clock_without_its_lock_stops(
    service: Service, commons_id: int, tmp_path: Path
) -> None:
    with redis_on(service.port, folder=tmp_path) as broker:
        with service.runs("manage.py", "clock") as first:
            assert first.stdout is not None
            if connection.vendor == "sqlite":
                said, _ = first.communicate(timeout=WAIT_SECONDS)
                assert (first.returncode, "serve has its own" in said) == (1, True)
                return
            assert first.stdout.readline() == "The clock runs.\n"
            with service.runs("manage.py", "clock") as second:
                said, _ = second.communicate(timeout=WAIT_SECONDS)
            assert second.returncode == 1
            assert "Another clock runs for this book already" in said
            _end_other_sessions()
            said, _ = first.communicate(timeout=WAIT_SECONDS)
            assert first.returncode == 1
            assert "The clock lost its lock" in said
        # A supervisor starts it anew; what fell due meanwhile is rung for at once.
        broker.flushall()
        promise(commons_id=commons_id, kind="writes", key="overdue")
        with service.worker(), service.runs("manage.py", "clock") as third:
            assert third.stdout is not None
            assert third.stdout.readline() == "The clock runs.\n"
            wait_for(lambda: not _open_jobs(), what="the job to be done", seconds=20)
            third.send_signal(signal.SIGTERM)
            assert third.wait(timeout=WAIT_SECONDS) == 0


def _end_other_sessions() -> None:
    """Have the server end the sessions of all but this test on the test's own database."""
    with connection.cursor() as cursor:
        cursor.execute(
            "SELECT pg_terminate_backend(pid) FROM pg_stat_activity"
            " WHERE datname = current_database() AND pid <> pg_backend_pid()"
        )
