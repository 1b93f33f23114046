"""``manage.py serve``: web, worker and clock in one process, from its start to a clean stop."""

import signal
import socket
import subprocess
import threading
import urllib.request
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

import pytest

from ledger.foundation.clocks import Chance, system_clock
from ledger.foundation.models import Job
from ledger.journal import queries as journal
from tests.conftest import CommittingDatabase
from tests.ledger import builders
from tests.ledger.processes import (
    FOLDER,
    WAIT_SECONDS,
    free_port,
    promise,
    running,
    wait_for,
    written,
)

SERVE = ("-m", "tests.ledger.tasks.odd_jobs", "serve")


@pytest.fixture
def commons_id(committing_db: CommittingDatabase, chance: Chance) -> int:
    return builders.people(hand=builders.hand(clock=system_clock, chance=chance))


@contextmanager
def _serving(
    database: CommittingDatabase, folder: Path, *, port: int
) -> Iterator[subprocess.Popen[str]]:
    """Serve the test's own database; give the process once it answers."""
    environment = {"STINTBOOK_DATABASE": database.address, FOLDER: str(folder)}
    with running(*SERVE, "--port", str(port), **environment) as process:
        assert process.stdout is not None
        line = next((line for line in process.stdout if not line.startswith("{")), "")
        assert line == f"Stintbook answers at http://127.0.0.1:{port}/ (Ctrl-C stops it)\n"
        # Nobody reads on, and a full pipe would hold up the process.
        threading.Thread(target=lambda: [*process.stdout], daemon=True).start()  # type: ignore[misc]
        yield process


def _get(port: int, path: str) -> tuple[int, bytes]:
    with urllib.request.urlopen(f"http://127.0.0.1:{port}{path}", timeout=WAIT_SECONDS) as answer:
        return answer.status, answer.read()


def _open_jobs() -> int:
    return Job.objects.filter(done_at__isnull=True).count()


def test_what_fell_due_while_it_was_off_is_done_at_its_start_once_and_at_its_true_time(
    committing_db: CommittingDatabase, commons_id: int, tmp_path: Path
) -> None:
    """Twelve jobs fell due in the same second, months before the machine was switched on."""
    for key in range(12):
        promise(commons_id=commons_id, kind="writes", key=f"{key:02}")
    began, port = system_clock(), free_port()
    with _serving(committing_db, tmp_path, port=port) as process:
        wait_for(lambda: not _open_jobs(), what="the twelve jobs", seconds=20)
        assert _get(port, "/healthz")[0] == 200
        process.send_signal(signal.SIGTERM)
        assert process.wait(timeout=WAIT_SECONDS) == 0
    assert written(commons_id) == [f"{key:02}" for key in range(12)]
    entries = journal.entries(commons_id=commons_id, kinds=("test",))
    times = [each.recorded_at for each in entries]
    assert times == sorted(times)
    assert began < times[0]


def test_a_second_copy_is_refused_and_the_first_goes_on(
    committing_db: CommittingDatabase, commons_id: int, tmp_path: Path
) -> None:
    port = free_port()
    with _serving(committing_db, tmp_path, port=port) as first:
        second = ("manage.py", "serve", "--port", str(free_port()))
        with running(*second, STINTBOOK_DATABASE=committing_db.address) as process:
            said, _ = process.communicate(timeout=WAIT_SECONDS)
            assert process.returncode == 1
        assert "Another process serves this book already" in said
        assert _get(port, "/healthz")[0] == 200
        first.send_signal(signal.SIGINT)
        assert first.wait(timeout=WAIT_SECONDS) == 0
    # The lock ended with its holder.
    with _serving(committing_db, tmp_path, port=port):
        pass


def test_a_port_that_is_taken_is_refused_in_words(
    committing_db: CommittingDatabase, commons_id: int
) -> None:
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = str(taken.getsockname()[1])
        address = committing_db.address
        with running("manage.py", "serve", "--port", port, STINTBOOK_DATABASE=address) as process:
            said, _ = process.communicate(timeout=WAIT_SECONDS)
    assert process.returncode == 1
    assert f"Cannot answer at 127.0.0.1:{port}" in said


def test_told_to_stop_it_finishes_the_job_and_the_request_in_hand_and_begins_no_other(
    committing_db: CommittingDatabase, commons_id: int, tmp_path: Path
) -> None:
    promise(commons_id=commons_id, kind="slow", key="in hand")
    port = free_port()
    answers: list[tuple[int, bytes]] = []
    with _serving(committing_db, tmp_path, port=port) as process:
        wait_for((tmp_path / "begun-in hand").exists, what="the job to begin")
        request = threading.Thread(target=lambda: answers.append(_get(port, "/slow")))
        request.start()
        wait_for((tmp_path / "begun-request").exists, what="the request to begin")
        process.send_signal(signal.SIGTERM)
        with pytest.raises(subprocess.TimeoutExpired):
            process.wait(timeout=1)
        assert answers == []
        (tmp_path / "go").touch()
        assert process.wait(timeout=WAIT_SECONDS) == 0
        request.join(timeout=WAIT_SECONDS)
    assert answers == [(200, b"at last")]
    assert written(commons_id) == ["in hand"]
    assert Job.objects.get().outcome == "written at leisure"


def test_killed_in_the_middle_of_a_job_it_does_it_once_after_its_next_start(
    committing_db: CommittingDatabase, commons_id: int, tmp_path: Path
) -> None:
    promise(commons_id=commons_id, kind="slow", key="cut off")
    port = free_port()
    with _serving(committing_db, tmp_path, port=port) as process:
        wait_for((tmp_path / "begun-cut off").exists, what="the job to begin")
        process.kill()
        process.wait()
    assert written(commons_id) == []
    (tmp_path / "go").touch()
    with _serving(committing_db, tmp_path, port=port):
        wait_for(lambda: not _open_jobs(), what="the job to be done")
    assert written(commons_id) == ["cut off"]
    job = Job.objects.get()
    assert (job.attempts, job.unended) == (2, 0)
