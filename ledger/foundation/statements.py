"""Statements in plain SQL, sent with as few round trips as the database allows."""

from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from typing import Any, Protocol

import psycopg
from django.db import connection

ROWS_A_STATEMENT = 500


class Answer(Protocol):
    """The rows that a statement gave; read them after the block that sent it."""

    def fetchone(self) -> Any:
        """Return the next row or None."""

    def fetchall(self) -> list[Any]:
        """Return every remaining row."""


Send = Callable[[str, Sequence[Any]], Answer]


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
        yield lambda sql, parameters: psycopg.Cursor(server).execute(sql.encode(), parameters)


def _send_at_once(sql: str, parameters: Sequence[Any]) -> Answer:
    cursor = connection.cursor()
    cursor.execute(sql, parameters)
    return cursor


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
    one = f"({', '.join(['%s'] * len(columns))})"
    start = f"INSERT INTO {table} ({', '.join(columns)}) VALUES "
    for first in range(0, len(rows), ROWS_A_STATEMENT):
        part = rows[first : first + ROWS_A_STATEMENT]
        values = [value for row in part for value in row]
        send(f"{start}{', '.join([one] * len(part))} {conflict}", values)
