"""Statements in plain SQL, sent with as few round trips as the database allows."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import lru_cache
from itertools import chain
from typing import Any, Protocol

import psycopg
from django.db import connection

ROWS_A_STATEMENT = 100
# PostgreSQL takes 65,535 values in one statement, SQLite 32,766.
_VALUES_A_STATEMENT = 30_000
_TEXTS_KEPT = 256


class Answer(Protocol):
    """The rows that a statement gave."""

    def fetchone(self) -> Any:
        """Return the next row or None."""

    def fetchall(self) -> list[Any]:
        """Return every remaining row."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Statement:
    """One statement, its parameters written ``%s``, and their values."""

    sql: str
    values: Sequence[Any]


def run(statement: Statement) -> Answer:
    """Run one statement and return its answer."""
    if connection.vendor == "postgresql":
        connection.ensure_connection()
        server: psycopg.Connection[Any] = connection.connection
        with connection.wrap_database_errors:
            # A raw cursor leaves the text as it is; others take it apart at every call.
            return psycopg.RawCursor(server).execute(_numbered(statement.sql), statement.values)
    cursor = connection.cursor()
    cursor.execute(statement.sql, statement.values)
    return cursor


def run_together(*, statements: Sequence[Statement]) -> None:
    """Run statements that write to different tables, and need no answer.

    PostgreSQL gets them as parts of one statement, so that they cost one round trip; they see the
    tables as they stood before it.
    """
    if connection.vendor != "postgresql":
        for statement in statements:
            run(statement)
        return
    for part in _parts(statements):
        *others, last = part
        steps = ", ".join(f"step_{at} AS ({one.sql})" for at, one in enumerate(others))
        sql = f"WITH {steps} {last.sql}" if steps else last.sql
        run(Statement(sql=sql, values=list(chain.from_iterable(one.values for one in part))))


def insertions(
    *,
    table: str,
    columns: Sequence[str],
    rows: Sequence[Sequence[Any]],
    conflict: str = "",
) -> Iterator[Statement]:
    """Yield the statements that insert rows, a hundred rows in each.

    :param conflict: an ``ON CONFLICT`` clause, the same in both databases.
    """
    start = f"INSERT INTO {table} ({', '.join(columns)}) VALUES "
    for first in range(0, len(rows), ROWS_A_STATEMENT):
        part = rows[first : first + ROWS_A_STATEMENT]
        yield Statement(
            sql=_insertion(start, len(columns), len(part), conflict),
            values=list(chain.from_iterable(part)),
        )


def _parts(statements: Sequence[Statement]) -> Iterator[list[Statement]]:
    part: list[Statement] = []
    count = 0
    for statement in statements:
        if part and count + len(statement.values) > _VALUES_A_STATEMENT:
            yield part
            part, count = [], 0
        part.append(statement)
        count += len(statement.values)
    if part:
        yield part


@lru_cache(maxsize=_TEXTS_KEPT)
def _insertion(start: str, width: int, height: int, conflict: str) -> str:
    one = f"({', '.join(['%s'] * width)})"
    return f"{start}{', '.join([one] * height)} {conflict}".rstrip()


@lru_cache(maxsize=_TEXTS_KEPT)
def _numbered(sql: str) -> bytes:
    """Return a statement with its parameters written ``$1``, ``$2`` …, as the server reads them."""
    first, *others = sql.split("%s")
    return (first + "".join(f"${at}{part}" for at, part in enumerate(others, start=1))).encode()
