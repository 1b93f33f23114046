"""Statements in plain SQL, sent with as few round trips as the database allows."""

from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from functools import lru_cache
from itertools import chain
from typing import Any, Protocol

import psycopg
from django.db import connection

ROWS_A_STATEMENT = 500
_TEXTS_KEPT = 256


class Answer(Protocol):
    """The rows that a statement gave; read them after the block that sent it."""

    def fetchone(self) -> Any:
        """Return the next row or None."""

    def fetchall(self) -> list[Any]:
        """Return every remaining row."""


Send = Callable[[str, Sequence[Any]], Answer]
"""Sends a statement, whose parameters are written ``%s``, with their values."""


@contextmanager
def together() -> Iterator[Send]:
    """Yield a function that sends a statement; read answers when the block has ended.

    On PostgreSQL the block is one pipeline: its statements run in order, each seeing what the
    ones before it did, and cost one round trip together. A database error of any of them is
    raised when the block ends.
    """
    if connection.vendor != "postgresql":
        yield _send_at_once
        return
    connection.ensure_connection()
    server: psycopg.Connection[Any] = connection.connection
    with connection.wrap_database_errors, server.pipeline():
        # A raw cursor leaves the text as it is; the others take it apart at every call.
        yield lambda sql, values: psycopg.RawCursor(server).execute(_numbered(sql), values)


def insert(
    send: Send,
    *,
    table: str,
    columns: Sequence[str],
    rows: Sequence[Sequence[Any]],
    conflict: str = "",
) -> None:
    """Send the insertion of rows, many of them in one statement.

    :param conflict: an ``ON CONFLICT`` clause, the same in both databases.
    """
    start = f"INSERT INTO {table} ({', '.join(columns)}) VALUES "
    for first in range(0, len(rows), ROWS_A_STATEMENT):
        part = rows[first : first + ROWS_A_STATEMENT]
        values = list(chain.from_iterable(part))
        send(_insertion(start, len(columns), len(part), conflict), values)


def _send_at_once(sql: str, values: Sequence[Any]) -> Answer:
    cursor = connection.cursor()
    cursor.execute(sql, values)
    return cursor


@lru_cache(maxsize=_TEXTS_KEPT)
def _insertion(start: str, width: int, height: int, conflict: str) -> str:
    one = f"({', '.join(['%s'] * width)})"
    return f"{start}{', '.join([one] * height)} {conflict}"


@lru_cache(maxsize=_TEXTS_KEPT)
def _numbered(sql: str) -> bytes:
    """Return a statement with its parameters written ``$1``, ``$2`` …, as the server reads them."""
    first, *others = sql.split("%s")
    return (first + "".join(f"${at}{part}" for at, part in enumerate(others, start=1))).encode()
