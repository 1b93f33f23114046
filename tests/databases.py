"""Databases for tests and benches: made for one run on a server that the environment names."""

import os
import shutil
import uuid
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from urllib.parse import urlsplit

import psycopg
from django.db import connections
from psycopg import sql

from ledger import settings

POSTGRESQL = "STINTBOOK_TEST_POSTGRESQL"


def new_name() -> str:
    """Return a name that no other run uses."""
    return f"stintbook_{uuid.uuid4().hex[:12]}"


def server_address(name: str) -> str:
    """Return the address of a database on the PostgreSQL server for tests."""
    return urlsplit(os.environ[POSTGRESQL])._replace(path=f"/{name}").geturl()


def create(name: str, *, template: str = "template1") -> None:
    """Make a database on the PostgreSQL server for tests."""
    _at_server("CREATE DATABASE {} TEMPLATE {}", name, template)


def drop(name: str) -> None:
    """Drop a database of the PostgreSQL server for tests."""
    _at_server("DROP DATABASE {} WITH (FORCE)", name)


def point_django(address: str, *, test_name: str | None = None) -> None:
    """Have Django's one connection lead to a database from now on.

    :param test_name: the database that a test run is to make there.
    """
    wanted = settings.database(address)
    if test_name is not None:
        wanted["TEST"] = {"NAME": test_name}
    connections["default"].close()
    del connections["default"]
    standing = connections.settings["default"]
    standing.clear()
    standing.update(wanted)
    connections.configure_settings(connections.settings)


@contextmanager
def copied(place: Path) -> Iterator[str]:
    """Make a copy of the database that Django leads to, and drop it afterwards.

    :param place: a folder, for where the copy is a file.
    """
    connections.close_all()
    original = connections["default"].settings_dict["NAME"]
    if connections["default"].vendor == "sqlite":
        # The folder is the caller's, and goes with it.
        yield str(shutil.copy(original, place / "copy.sqlite3"))
        return
    name = new_name()
    create(name, template=original)
    try:
        yield name
    finally:
        drop(name)


@contextmanager
def led_to(name: str) -> Iterator[None]:
    """Have Django lead to another database of the same server, or to another file, for a while."""
    chosen = connections["default"].settings_dict
    original = chosen["NAME"]
    connections.close_all()
    chosen["NAME"] = name
    try:
        yield
    finally:
        connections.close_all()
        chosen["NAME"] = original


def _at_server(statement: str, *names: str) -> None:
    with psycopg.connect(os.environ[POSTGRESQL], autocommit=True) as server:
        server.execute(sql.SQL(statement).format(*map(sql.Identifier, names)))
