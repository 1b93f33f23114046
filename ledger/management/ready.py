"""Whether there is a book to work on, said in one line where there is none."""

from pathlib import Path

from django.core.management.base import CommandError
from django.db import OperationalError, connection

from ledger.foundation import tables


def check_tables() -> None:
    """Pass if the database answers and its tables are of this program.

    A file that is not there is not made.

    :raises CommandError: if it does not, or they are not.
    """
    name = str(connection.settings_dict["NAME"])
    if connection.vendor == "sqlite" and ":memory:" not in name and not Path(name).exists():
        raise CommandError(f"There is no book at {name} yet: run migrate first.")
    try:
        current = tables.are_current()
    except OperationalError as error:
        raise CommandError(does_not_answer(error)) from error
    if not current:
        raise CommandError("The database has no tables yet, or old ones: run migrate first.")


def does_not_answer(error: OperationalError) -> str:
    """Return what is said of a database that does not answer, on one line."""
    return f"The database does not answer: {' '.join(str(error).split())}"
