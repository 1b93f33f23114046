"""Settings under which a database might lose what it acknowledged: each is named and refused."""

import os
import subprocess
import sys
from pathlib import Path

import pytest
from django.db import connection

from ledger.foundation import durability
from tests.conftest import CommittingDatabase
from tests.databases import POSTGRESQL

ROOT = Path(__file__).resolve().parents[3]
SOUND_POSTGRESQL = {"fsync": "on", "synchronous_commit": "on", "full_page_writes": "on"}
SOUND_SQLITE = {
    "journal_mode": "delete",
    "synchronous": "3",
    "foreign_keys": "1",
    "recursive_triggers": "1",
}
DEBIANS, MENDED = (3, 40, 1), (3, 51, 3)


@pytest.mark.django_db
def test_the_programs_own_settings_are_sound() -> None:
    assert durability.problems() == ()
    durability.check()


@pytest.mark.parametrize("name", SOUND_POSTGRESQL)
def test_postgresql_with_one_of_them_off(name: str) -> None:
    assert durability.judge_postgresql(found=SOUND_POSTGRESQL) == ()
    (said,) = durability.judge_postgresql(found=SOUND_POSTGRESQL | {name: "off"})
    assert said.startswith(f"{name}: found off; accepted is on")


@pytest.mark.parametrize(
    ("changes", "version", "wrong"),
    [
        ({}, DEBIANS, None),
        ({"journal_mode": "wal", "synchronous": "2"}, MENDED, None),
        ({"journal_mode": "wal", "synchronous": "3"}, MENDED, None),
        ({"synchronous": "2"}, MENDED, "synchronous"),
        ({"synchronous": "0"}, DEBIANS, "synchronous"),
        ({"journal_mode": "wal", "synchronous": "1"}, MENDED, "synchronous"),
        ({"journal_mode": "wal"}, (3, 51, 2), "journal_mode"),
        ({"journal_mode": "memory"}, MENDED, "journal_mode"),
        ({"journal_mode": "off"}, MENDED, "journal_mode"),
        ({"foreign_keys": "0"}, DEBIANS, "foreign_keys"),
        ({"recursive_triggers": "0"}, DEBIANS, "recursive_triggers"),
    ],
)
def test_sqlite(changes: dict[str, str], version: tuple[int, ...], wrong: str | None) -> None:
    found = durability.judge_sqlite(found=SOUND_SQLITE | changes, version=version)
    assert [said.split(":")[0] for said in found] == ([] if wrong is None else [wrong])


def test_a_check_names_every_one_that_is_wrong(committing_db: CommittingDatabase) -> None:
    with connection.cursor() as cursor:
        if connection.vendor == "postgresql":
            cursor.execute("SET synchronous_commit = off")
            wanted = "synchronous_commit: found off"
        else:
            cursor.execute("PRAGMA synchronous = NORMAL")
            cursor.execute("PRAGMA foreign_keys = OFF")
            wanted = "synchronous: found 1.*foreign_keys: found 0"
    with pytest.raises(durability.NotDurable, match=wanted):
        durability.check()


@pytest.mark.needs_server(POSTGRESQL)
def test_a_web_server_does_not_start_on_such_a_database() -> None:
    """The role, not the program's configuration, says so here; reading back is what finds it."""
    done = subprocess.run(
        [sys.executable, "-c", "import ledger.wsgi"],
        cwd=ROOT,
        env=os.environ
        | {
            "STINTBOOK_DATABASE": os.environ[POSTGRESQL],
            "PGOPTIONS": "-c synchronous_commit=off",
        },
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.returncode != 0
    assert "synchronous_commit: found off; accepted is on" in done.stderr
