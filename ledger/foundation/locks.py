"""Locks that nobody waits for: whoever comes second is told so.

They end with the process or the connection that holds them, whatever becomes of it.
"""

import hashlib
import sys
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import IO

from django.db import connection

if sys.platform == "win32":
    import msvcrt
else:
    import fcntl

_here: set[tuple[str, int]] = set()
_guard = threading.Lock()


@contextmanager
def held(*, name: str, key: int) -> Iterator[bool]:
    """Hold a named lock and give whether it was free.

    On PostgreSQL it is a lock of this session, seen by every process; it is lost with the
    connection. On SQLite, where one process writes, it is a lock among the threads of this one.
    """
    holding = _session_lock if connection.vendor == "postgresql" else _process_lock
    with holding(name, key) as is_mine:
        yield is_mine


@contextmanager
def _session_lock(name: str, key: int) -> Iterator[bool]:
    number = lock_number(name=name, key=key)
    is_mine = _asked("SELECT pg_try_advisory_lock(%s)", number)
    session = connection.connection
    try:
        yield is_mine
    finally:
        # A connection that was lost has let go already; a new one never held it.
        if is_mine and connection.connection is session and connection.is_usable():
            _asked("SELECT pg_advisory_unlock(%s)", number)


@contextmanager
def _process_lock(name: str, key: int) -> Iterator[bool]:
    with _guard:
        is_mine = (name, key) not in _here
        _here.add((name, key))
    try:
        yield is_mine
    finally:
        if is_mine:
            with _guard:
                _here.discard((name, key))


def lock_number(*, name: str, key: int) -> int:
    """Return the 64-bit number that stands for a named lock among PostgreSQL's advisory locks."""
    digest = hashlib.sha256(f"stintbook:{name}:{key}".encode()).digest()
    return int.from_bytes(digest[:8], signed=True)


def _asked(question: str, number: int) -> bool:
    with connection.cursor() as cursor:
        cursor.execute(question, [number])
        return bool(cursor.fetchone()[0])


@contextmanager
def file_held(*, path: Path) -> Iterator[bool]:
    """Hold a file, made if it is missing, against other processes; give whether it was free."""
    with path.open("a") as file:
        yield _is_locked(file)


def _is_locked(file: IO[str]) -> bool:
    try:
        if sys.platform == "win32":
            msvcrt.locking(file.fileno(), msvcrt.LK_NBLCK, 1)
        else:
            fcntl.flock(file, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except OSError:
        return False
    return True
