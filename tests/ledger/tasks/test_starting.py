"""A worker's start: refused where the database might lose its work."""

import os
import subprocess
import sys
from pathlib import Path

import pytest

from tests.databases import POSTGRESQL

ROOT = Path(__file__).resolve().parents[3]


@pytest.mark.needs_server(POSTGRESQL)
def test_a_worker_does_not_start_on_a_database_that_forgets() -> None:
    done = subprocess.run(
        [*(sys.executable, "-m", "celery", "-q", "-A", "ledger.celery"), "worker", "-P", "solo"],
        cwd=ROOT,
        env=os.environ
        | {
            "STINTBOOK_DATABASE": os.environ[POSTGRESQL],
            "PGOPTIONS": "-c synchronous_commit=off",
        },
        capture_output=True,
        text=True,
        check=False,
        timeout=60,
    )
    assert done.returncode == 1
    assert "synchronous_commit: found off; accepted is on" in done.stderr
