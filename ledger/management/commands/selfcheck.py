"""``manage.py selfcheck``: read back every setting that the book rests on, and name the wrong."""

import os
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from django.conf import settings
from django.core.management.base import BaseCommand, CommandError
from django.db import OperationalError, connection

from ledger.foundation import durability, triggers
from ledger.management import ready

SECRET_KEY_CHARACTERS_MIN = 50


class Command(BaseCommand):
    """Check the settings of this machine; the exit code is 1 if one is wrong."""

    help = (
        "Read back the settings that the book rests on: the database's durability, its tables and"
        " triggers, and how the service is run. Every wrong one is named, and the exit code is 1."
    )
    requires_system_checks = ()

    def handle(self, **options: Any) -> None:
        """Print a line for each part that is all right, and one for each thing that is wrong."""
        wrong = 0
        for part, problems in (
            ("the database", list(_database())),
            ("the way it is run", list(_service())),
            ("the output folder", list(_output())),
        ):
            if not problems:
                self.stdout.write(f"all right: {part}")
            for problem in problems:
                self.stdout.write(f"wrong: {problem}")
            wrong += len(problems)
        if wrong:
            raise CommandError(f"Wrong settings: {wrong}.", returncode=1)


def _database() -> Iterator[str]:
    try:
        ready.check_tables()
        if missing := triggers.missing_triggers(connection):
            yield f"Triggers that seal the rows are missing: run migrate. {', '.join(missing)}"
    except CommandError as error:
        yield str(error)
        if not _answers():
            return
    yield from durability.problems()


def _answers() -> bool:
    """Return whether there is a database to ask; a file that is not there is not made."""
    name = str(connection.settings_dict["NAME"])
    if connection.vendor == "sqlite" and not Path(name).exists():
        return False
    try:
        connection.ensure_connection()
    except OperationalError:
        return False
    return True


def _service() -> Iterator[str]:
    if settings.DEBUG:
        yield "DEBUG: found on; accepted is off, for its error pages show secrets."
    if settings.SECRET_KEY_IS_KEPT and len(settings.SECRET_KEY) < SECRET_KEY_CHARACTERS_MIN:
        yield (
            f"STINTBOOK_SECRET_KEY: found {len(settings.SECRET_KEY)} characters; accepted are"
            f" {SECRET_KEY_CHARACTERS_MIN} and more."
        )
    if "*" in settings.ALLOWED_HOSTS:
        yield "STINTBOOK_HOSTS: found *; accepted are the names that the service answers to."
    if connection.vendor == "postgresql":
        yield from _service_size()


def _service_size() -> Iterator[str]:
    """Yield what is wrong where several processes serve, on a database that they share."""
    if not settings.SECRET_KEY_IS_KEPT:
        yield (
            "STINTBOOK_SECRET_KEY: found none; accepted is one that all processes share, for who"
            " signs in at one is a stranger at another."
        )
    if not settings.CELERY_BROKER_URL.startswith(("redis://", "rediss://")):
        yield "STINTBOOK_BROKER: found none; accepted is redis://HOST:PORT/NUMBER."
    if not os.environ.get("STINTBOOK_HOSTS"):
        yield "STINTBOOK_HOSTS: found none; accepted are the names that the service answers to."
    if not settings.HTTPS:
        yield "STINTBOOK_HTTPS: found 0; accepted is 1, behind a proxy that speaks HTTPS."


def _output() -> Iterator[str]:
    """Yield why reports cannot be written; a folder that is not there is made when needed."""
    folder = Path(settings.OUTPUT).absolute()
    standing = next(each for each in (folder, *folder.parents) if each.exists())
    if not standing.is_dir():
        yield f"STINTBOOK_OUTPUT: found {standing}, which is no folder; accepted is a folder."
    elif not os.access(standing, os.W_OK | os.X_OK):
        yield f"STINTBOOK_OUTPUT: found {standing}, which cannot be written into."
