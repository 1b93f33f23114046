"""Processes that a test starts on its own database, and what it waits for."""

import os
import signal
import socket
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager, suppress
from datetime import UTC, datetime
from pathlib import Path

import pytest
import redis
from django.db import transaction

from ledger.foundation import outbox
from ledger.foundation.clocks import system_clock
from ledger.journal import queries as journal

ROOT = Path(__file__).resolve().parents[2]
WAIT_SECONDS = 120.0
REDIS_SERVER = "STINTBOOK_TEST_REDIS_SERVER"
# Where odd jobs say that they have begun, and look whether they may go on.
FOLDER = "STINTBOOK_TEST_FOLDER"
LONG_AGO = datetime(2026, 1, 1, tzinfo=UTC)


def wait_for(met: Callable[[], object], *, what: str, seconds: float = WAIT_SECONDS) -> None:
    """Pass once something is met; fail the test if it takes too long."""
    until = time.monotonic() + seconds
    while not met():
        if time.monotonic() > until:
            pytest.fail(f"waited {seconds:.0f} seconds for {what}")
        time.sleep(0.05)


@contextmanager
def running(*arguments: str, **environment: str) -> Iterator[subprocess.Popen[str]]:
    """Run ``python ARGUMENTS`` and its children in a session of their own, which ends with it."""
    process = subprocess.Popen(
        [sys.executable, *arguments],
        cwd=ROOT,
        env=os.environ | environment,
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
        start_new_session=True,
    )
    try:
        yield process
    finally:
        kill_all(process)
        assert process.stdout is not None
        process.stdout.close()


def kill_all(process: subprocess.Popen[str]) -> None:
    """Kill a process and its children, as a machine does that loses its power."""
    with suppress(ProcessLookupError):
        os.killpg(process.pid, signal.SIGKILL)
    process.wait()


def free_port() -> int:
    """Return a port on which nobody listens."""
    with socket.socket() as free:
        free.bind(("127.0.0.1", 0))
        return int(free.getsockname()[1])


@contextmanager
def redis_on(port: int, *, folder: Path) -> Iterator[redis.Redis]:
    """Run a Redis of the test's own, which keeps nothing on disk, and give a client of it."""
    server = subprocess.Popen(
        [
            *(os.environ[REDIS_SERVER], "--port", str(port), "--bind", "127.0.0.1"),
            *("--save", "", "--appendonly", "no", "--dir", str(folder)),
        ],
        stdout=subprocess.DEVNULL,
    )
    client = redis.Redis(port=port)
    try:
        wait_for(lambda: _answers(client), what="Redis to answer")
        yield client
    finally:
        client.close()
        server.kill()
        server.wait()


def _answers(client: redis.Redis) -> bool:
    try:
        return bool(client.ping())
    except redis.ConnectionError:
        return False


def promise(*, commons_id: int, kind: str, key: str, due_at: datetime = LONG_AGO) -> None:
    """Promise a job whose bell nobody hears: the test's own broker is in memory."""
    with transaction.atomic():
        outbox.enqueue(
            commons_id=commons_id, kind=kind, key=key, due_at=due_at, payload={}, clock=system_clock
        )


def written(commons_id: int) -> list[str]:
    """Return the keys of the jobs that left an entry, in order of the entries."""
    return [each.facts["key"] for each in journal.entries(commons_id=commons_id, kinds=("test",))]
