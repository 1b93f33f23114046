"""A migrated database of a bench's own: on the server for tests if one is named, else a file."""

import os
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from django.core.management import call_command
from django.db import connections

from tests import databases


@contextmanager
def own_database() -> Iterator[str]:
    """Yield the address of a new, migrated database that Django's connection leads to."""
    with tempfile.TemporaryDirectory() as folder:
        name = databases.new_name()
        on_server = bool(os.environ.get(databases.POSTGRESQL))
        if on_server:
            databases.create(name)
            address = databases.server_address(name)
        else:
            address = f"sqlite:///{Path(folder) / name}"
        try:
            databases.point_django(address)
            call_command("migrate", verbosity=0)
            yield address
        finally:
            connections.close_all()
            if on_server:
                databases.drop(name)
