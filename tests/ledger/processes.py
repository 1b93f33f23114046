"""Processes that a test starts on its own database, and what it waits for."""

import os
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from datetime import UTC, datetime
from pathlib import Path

import pytest
from django.db import transaction

from ledger.foundation import outbox
from ledger.foundation.clocks import system_clock
from ledger.journal import queries as journal

ROOT = Path(__file__).resolve().parents[2]
WAIT_SECONDS = 40.0
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
    """Run ``python ARGUMENTS``, and kill it if it still runs in the end."""
    process = subprocess.Popen(
        [sys.executable, *arguments],
        cwd=ROOT,
        env=os.environ | environment,
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
    )
    try:
        yield process
    finally:
        if process.poll() is None:
            process.kill()
        process.wait()
        assert process.stdout is not None
        process.stdout.close()


def promise(*, commons_id: int, kind: str, key: str, due_at: datetime = LONG_AGO) -> None:
    """Promise a job whose bell nobody hears: the test's own broker is in memory."""
    with transaction.atomic():
        outbox.enqueue(
            commons_id=commons_id, kind=kind, key=key, due_at=due_at, payload={}, clock=system_clock
        )


def written(commons_id: int) -> list[str]:
    """Return the keys of the jobs that left an entry, in order of the entries."""
    return [each.facts["key"] for each in journal.entries(commons_id=commons_id, kinds=("test",))]
