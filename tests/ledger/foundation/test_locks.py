"""Whoever comes second to a lock is told so, and a lock ends with its holder."""

import subprocess
import sys
import threading
from pathlib import Path

from django.db import connection

from ledger.foundation import locks
from tests.conftest import CommittingDatabase


def _elsewhere(name: str, key: int) -> bool:
    """Return whether a thread of its own, with a connection of its own, gets the lock."""
    got: list[bool] = []

    def tries() -> None:
        try:
            with locks.held(name=name, key=key) as is_mine:
                got.append(is_mine)
        finally:
            connection.close()

    thread = threading.Thread(target=tries)
    thread.start()
    thread.join()
    return got[0]


def test_the_second_is_told_and_the_next_gets_it(committing_db: CommittingDatabase) -> None:
    with locks.held(name="job", key=7) as is_mine:
        assert is_mine
        assert not _elsewhere("job", 7)
        # Whoever was refused has let go of nothing.
        assert not _elsewhere("job", 7)
        assert _elsewhere("job", 8)
        assert _elsewhere("clock", 7)
    assert _elsewhere("job", 7)


def test_a_lock_ends_though_the_work_fails(committing_db: CommittingDatabase) -> None:
    try:
        with locks.held(name="job", key=7):
            raise RuntimeError("no")
    except RuntimeError:
        pass
    assert _elsewhere("job", 7)


def test_a_lock_whose_connection_was_lost_can_be_let_go(committing_db: CommittingDatabase) -> None:
    with locks.held(name="job", key=7):
        connection.close()
    assert _elsewhere("job", 7)


def test_numbers_of_locks_are_of_64_bits_and_differ() -> None:
    numbers = {locks.lock_number(name=name, key=key) for name in "ab" for key in range(100)}
    assert len(numbers) == 200
    assert all(-(2**63) <= number < 2**63 for number in numbers)


HOLDER = """
import sys
from pathlib import Path
from ledger.foundation import locks
with locks.file_held(path=Path(sys.argv[1])) as is_mine:
    print(is_mine, flush=True)
    sys.stdin.read()
"""


def test_a_file_is_held_until_its_process_is_killed(tmp_path: Path) -> None:
    path = tmp_path / "held"
    holder = subprocess.Popen(
        [sys.executable, "-c", HOLDER, str(path)],
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        cwd=Path(__file__).resolve().parents[3],
    )
    assert holder.stdin and holder.stdout
    try:
        assert holder.stdout.readline().strip() == b"True"
        with locks.file_held(path=path) as is_mine:
            assert not is_mine
    finally:
        holder.kill()
        holder.wait()
        holder.stdin.close()
        holder.stdout.close()
    with locks.file_held(path=path) as is_mine:
        assert is_mine
