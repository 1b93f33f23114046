"""Databases for tests and benches: made for one run on a server that the environment names."""

import os
import uuid
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


def _at_server(statement: str, *names: str) -> None:
    with psycopg.connect(os.environ[POSTGRESQL], autocommit=True) as server:
        server.execute(sql.SQL(statement).format(*map(sql.Identifier, names)))
