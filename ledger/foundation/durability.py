"""Whether the database keeps what it has acknowledged: its settings, read back and judged.

What is written in a configuration is not always what holds: a server, a role or a database may say
otherwise. So the database itself is asked.
"""

import sqlite3
from collections.abc import Mapping
from typing import ClassVar

from django.db import connection

from ledger.foundation.errors import LedgerError

# Before it, two connections could damage a WAL file (SQLite release history, 3.51.3).
WAL_IS_SOUND_FROM = (3, 51, 3)
_FULL, _EXTRA = "2", "3"
_ROLLBACK_JOURNALS = ("delete", "truncate", "persist")
_PRAGMAS = ("journal_mode", "synchronous", "foreign_keys", "recursive_triggers")
_POSTGRESQL = {
    "fsync": ("on",),
    # Every one of these waits until the commit is on this server's disk.
    "synchronous_commit": ("on", "local", "remote_write", "remote_apply"),
    "full_page_writes": ("on",),
}


class NotDurable(LedgerError):
    """The database might lose what it has acknowledged."""

    code: ClassVar[str] = "foundation.not_durable"
    message: ClassVar[str] = "The database might lose what it has acknowledged. {what}"


def check() -> None:
    """Pass if the settings of the database are sound.

    :raises NotDurable: if one is not; the message names each.
    """
    wrong = problems()
    if wrong:
        raise NotDurable(what=" ".join(wrong))


def problems() -> tuple[str, ...]:
    """Return a sentence for each setting of the database that is not sound."""
    found = read()
    if connection.vendor == "postgresql":
        return judge_postgresql(found=found)
    return judge_sqlite(found=found, version=sqlite3.sqlite_version_info)


def read() -> Mapping[str, str]:
    """Return the settings that hold on this connection, by name, as the database tells them."""
    with connection.cursor() as cursor:
        if connection.vendor == "postgresql":
            cursor.execute(
                "SELECT name, setting FROM pg_settings WHERE name = ANY(%s)", [[*_POSTGRESQL]]
            )
            return dict(cursor.fetchall())
        found = {}
        for name in _PRAGMAS:
            cursor.execute(f"PRAGMA {name}")
            found[name] = str(cursor.fetchone()[0]).lower()
        return found


def judge_postgresql(*, found: Mapping[str, str]) -> tuple[str, ...]:
    """Return a sentence for each unsound setting of a PostgreSQL server."""
    return tuple(
        _sentence(name, found[name], " or ".join(accepted))
        for name, accepted in _POSTGRESQL.items()
        if found[name] not in accepted
    )


def judge_sqlite(*, found: Mapping[str, str], version: tuple[int, ...]) -> tuple[str, ...]:
    """Return a sentence for each unsound setting of a SQLite connection.

    :param version: of the SQLite library, such as ``(3, 51, 3)``.
    """
    wrong = []
    mode, synchronous = found["journal_mode"], found["synchronous"]
    if mode == "wal" and version < WAL_IS_SOUND_FROM:
        here = ".".join(map(str, version))
        wrong.append(_sentence("journal_mode", f"wal on SQLite {here}", "wal from 3.51.3; delete"))
    elif mode != "wal" and mode not in _ROLLBACK_JOURNALS:
        wrong.append(_sentence("journal_mode", mode, "delete, truncate, persist or wal"))
    if mode == "wal" and synchronous not in (_FULL, _EXTRA):
        wrong.append(_sentence("synchronous", synchronous, "2 (FULL) or 3 (EXTRA) with wal"))
    if mode != "wal" and synchronous != _EXTRA:
        wrong.append(_sentence("synchronous", synchronous, "3 (EXTRA) with a rollback journal"))
    for name in ("foreign_keys", "recursive_triggers"):
        if found[name] != "1":
            wrong.append(_sentence(name, found[name], "1 (on)"))
    return tuple(wrong)


def _sentence(name: str, found: str, accepted: str) -> str:
    return f"{name}: found {found}; accepted is {accepted}."
