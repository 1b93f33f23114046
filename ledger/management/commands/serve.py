"""The command that runs the whole service in one process."""

import logging
from argparse import ArgumentParser
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from django.core.management.base import BaseCommand, CommandError
from django.db import connection

from ledger.foundation import durability, locks, logs
from ledger.management import ready, serving


class Command(BaseCommand):
    """Serve pages and API, do the work that is promised, and keep the clock, in one process."""

    help = (
        "Run the whole service in one process: pages and API, the worker and the clock. It needs no"
        " other service. Stop it with Ctrl-C; what is in work is finished first."
    )

    def add_arguments(self, parser: ArgumentParser) -> None:
        """Take where to answer."""
        parser.add_argument("--address", default="127.0.0.1", help="this machine alone if silent")
        parser.add_argument("--port", type=int, default=8000, help="8000 if silent")

    def handle(self, *args: Any, address: str, port: int, **options: Any) -> None:
        """Serve until told to stop.

        :raises CommandError: if another copy serves this book, the address is not free, or a part
            of the service ended by itself.
        """
        ready.check_tables()
        try:
            durability.check()
        except durability.NotDurable as error:
            raise CommandError(str(error)) from error
        logs.begin()
        # A line for each ring, twice a minute, would bury the others.
        logging.getLogger("celery").setLevel(logging.WARNING)
        with _alone() as is_alone:
            if not is_alone:
                raise CommandError("Another process serves this book already; nothing was started.")
            try:
                was_told = serving.serve(address=address, port=port, started=self._tell)
            except OSError as error:
                raise CommandError(f"Cannot answer at {address}:{port}: {error}") from error
        if not was_told:
            raise CommandError("A part of the service ended by itself; the log says why.")

    def _tell(self, address: str) -> None:
        self.stdout.write(f"Stintbook answers at {address} (Ctrl-C stops it)")
        self.stdout.flush()


@contextmanager
def _alone() -> Iterator[bool]:
    """Hold this book against a second copy, and give whether this is the only one."""
    if connection.vendor == "sqlite":
        name = str(connection.settings_dict["NAME"])
        with locks.file_held(path=Path(f"{name}.serving")) as is_alone:
            yield is_alone
    else:
        with locks.held(name="clock", key=0) as is_alone:
            yield is_alone
