"""How a worker starts: with log lines in JSON, on a database that keeps what it acknowledged."""

import sys
from typing import Any

from celery import signals
from django.db import connection

from ledger.foundation import durability, logs


@signals.setup_logging.connect  # type: ignore[untyped-decorator]  # Celery has no types.
def write_lines(**kwargs: Any) -> None:
    """Write the log as every other process of the service does; Celery leaves it alone then."""
    logs.begin()


@signals.worker_init.connect  # type: ignore[untyped-decorator]
def refuse_a_database_that_forgets(**kwargs: Any) -> None:
    """End the process, with the reason, if its work might be lost."""
    try:
        durability.check()
    except durability.NotDurable as error:
        # Celery logs what a receiver raises and goes on; only an exit gets through.
        sys.exit(str(error))
    finally:
        # The children of this process open their own.
        connection.close()
