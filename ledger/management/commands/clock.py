"""The command that runs the clock of a service whose web and workers are processes of their own."""

import threading
from typing import Any

from celery.beat import Scheduler, Service
from django.core.management.base import BaseCommand, CommandError
from django.db import DatabaseError, connection

from ledger.celery import app
from ledger.foundation import locks, logs, ringing
from ledger.management import ready, stopping

LOOK_SECONDS = 5.0


class Command(BaseCommand):
    """Ring the bell of the workers at every turn, as the only clock of this book."""

    help = (
        "Run the clock that rings the workers, twice a minute. One runs for a book; a second one"
        " says so and ends. For PostgreSQL and a broker; serve has a clock of its own."
    )

    def handle(self, *args: Any, **options: Any) -> None:
        """Ring until told to stop.

        :raises CommandError: if another clock runs, there is nobody to ring, or the lock is lost.
        """
        if connection.vendor != "postgresql" or app.conf.broker_url.startswith("memory:"):
            raise CommandError("The clock needs PostgreSQL and a broker; serve has its own clock.")
        ready.check_tables()
        logs.begin()
        stop = stopping.on_signal()
        with locks.held(name="clock", key=0) as is_mine:
            if not is_mine:
                raise CommandError("Another clock runs for this book already; this one ends.")
            self.stdout.write("The clock runs.")
            self.stdout.flush()
            _run(stop)


def _run(stop: threading.Event) -> None:
    """Ring until told to stop, as long as the lock is held.

    :raises CommandError: if the connection that holds the lock was lost, or the clock broke.
    """
    clock = Service(app, max_interval=1.0, scheduler_cls=Scheduler)
    thread = threading.Thread(target=clock.start, name="stintbook-clock", daemon=True)
    thread.start()
    # What fell due while no clock ran need not wait for its first turn.
    ringing.ring()
    try:
        while not stop.wait(LOOK_SECONDS):
            _look(thread)
    finally:
        clock.stop()
        thread.join(timeout=LOOK_SECONDS)


def _look(thread: threading.Thread) -> None:
    """Pass if the clock still ticks and the database still holds its lock."""
    if not thread.is_alive():
        raise CommandError("The clock broke; the log says why.")
    try:
        with connection.cursor() as cursor:
            cursor.execute("SELECT 1")
    except DatabaseError as error:
        raise CommandError("The clock lost its lock; start it again.") from error
