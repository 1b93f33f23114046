"""Posting by hand, as a script would: five statements a transaction and no library between.

The tables are the journal's own, columns, constraints and indexes alike, under other names; only
the triggers, which no insertion fires, are left out. The hash is a chain over plain JSON.
"""

import json
import secrets
import sqlite3
from collections import defaultdict
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import UTC, date, datetime
from hashlib import sha256
from typing import Any
from urllib.parse import urlsplit

import psycopg

TABLES = ("head", "entry", "posting", "balance")


@dataclass(frozen=True, slots=True, kw_only=True)
class Take:
    """A withdrawal to post: a member, an amount and the facts."""

    member: int
    amount: int
    occurred_at: datetime
    day: date
    facts: dict[str, Any]

    def lines(self) -> tuple[tuple[str, int], tuple[str, int]]:
        """Return the two accounts and what each gets."""
        return (f"taken:mullet-2026:{self.member}", self.amount), ("pool:mullet", -self.amount)


def takes(count: int) -> list[Take]:
    """Return so many withdrawals of 42 members."""
    return [
        Take(
            member=at % 42,
            amount=1_000 + at,
            occurred_at=datetime(2026, 3, 1, 6, at % 60, tzinfo=UTC),
            day=date(2026, 3, 1),
            facts={"gear": "GN", "zone": "north", "measure": {"given": at, "unit": "kg"}},
        )
        for at in range(count)
    ]


class Bare:
    """One bare connection and the five statements."""

    def __init__(self, address: str) -> None:
        self.connection: Any
        self.is_sqlite = address.startswith("sqlite")
        if self.is_sqlite:
            self.connection = sqlite3.connect(urlsplit(address).path[1:], isolation_level=None)
            self._copy_sqlite_tables()
        else:
            self.connection = psycopg.connect(address)
            for table in TABLES:
                self.connection.execute(
                    f"CREATE TABLE bare_{table} (LIKE journal_{table} INCLUDING ALL)"
                )
            self.connection.commit()
        self._run(
            "INSERT INTO bare_head (commons_id, journal_id, size, root, edge, recorded_at, broken)"
            " VALUES (1, %s, 0, %s, %s, %s, '')",
            [b"", b"", b"", self._at(datetime.now(tz=UTC))],
        )
        self.connection.commit()

    def post(self, takes: Sequence[Take]) -> None:
        """Post takes in one transaction."""
        if self.is_sqlite:
            self.connection.execute("BEGIN IMMEDIATE")
        (size, root) = self._run(
            "SELECT size, root FROM bare_head WHERE commons_id = 1"
            + ("" if self.is_sqlite else " FOR UPDATE")
        ).fetchone()
        now = datetime.now(tz=UTC)
        entries, postings = [], []
        sums: defaultdict[str, int] = defaultdict(int)
        for number, take in enumerate(takes, start=size + 1):
            entries.append(self._entry(number, take, now, bytes(root)))
            root = entries[-1][-1]
            for line, (account, amount) in enumerate(take.lines()):
                sums[account] += amount
                postings.append(
                    (1, number, line, account, "mullet", "g", amount, self._day(take.day))
                )
        balances = [(1, account, "mullet", "g", amount) for account, amount in sums.items()]
        self._insert("bare_entry", entries)
        self._insert("bare_posting", postings)
        self._insert(
            "bare_balance",
            balances,
            "ON CONFLICT (commons_id, account, resource, unit)"
            " DO UPDATE SET amount = bare_balance.amount + excluded.amount",
        )
        self._run(
            "UPDATE bare_head SET size = %s, root = %s, recorded_at = %s WHERE commons_id = 1",
            [size + len(takes), root, self._at(now)],
        )
        self.connection.commit()

    def close(self) -> None:
        """Close the connection."""
        self.connection.close()

    def _entry(self, number: int, take: Take, now: datetime, root: bytes) -> tuple[Any, ...]:
        salt = secrets.token_bytes(16)
        facts = json.dumps(take.facts, sort_keys=True)
        leaf = json.dumps([number, str(now), str(take.day), facts, take.lines(), salt.hex()])
        digest = sha256(root + leaf.encode()).digest()
        at, day = self._at(take.occurred_at), self._day(take.day)
        return (
            *(1, number, "withdrawal", at, self._at(now), day, 0, "", "", None, take.member),
            *(facts, "{}", salt, digest),
        )

    def _insert(self, table: str, rows: Sequence[Sequence[Any]], tail: str = "") -> None:
        one = f"({', '.join(['%s'] * len(rows[0]))})"
        if len(rows) <= 2:
            values = [value for row in rows for value in row]
            self._run(f"INSERT INTO {table} VALUES {', '.join([one] * len(rows))} {tail}", values)
        else:
            self._run_many(f"INSERT INTO {table} VALUES {one} {tail}", rows)

    def _run(self, sql: str, values: Sequence[Any] = ()) -> Any:
        return self.connection.execute(self._marked(sql), values)

    def _run_many(self, sql: str, rows: Iterable[Sequence[Any]]) -> None:
        self.connection.cursor().executemany(self._marked(sql), rows)

    def _marked(self, sql: str) -> str:
        return sql.replace("%s", "?") if self.is_sqlite else sql

    def _at(self, at: datetime) -> Any:
        return str(at.replace(tzinfo=None)) if self.is_sqlite else at

    def _day(self, day: date) -> Any:
        return str(day) if self.is_sqlite else day

    def _copy_sqlite_tables(self) -> None:
        # As durable as the book itself, whose settings say so for every connection.
        self.connection.execute("PRAGMA synchronous = EXTRA")
        for table in TABLES:
            statements = self.connection.execute(
                "SELECT sql FROM sqlite_master WHERE tbl_name = ? AND type IN ('table', 'index')"
                " AND sql IS NOT NULL ORDER BY type DESC",
                [f"journal_{table}"],
            ).fetchall()
            for (sql,) in statements:
                self.connection.execute(sql.replace(f"journal_{table}", f"bare_{table}"))
