"""The command that shows promised work, and lets a parked job ring again."""

from argparse import ArgumentParser
from typing import Any

from django.core.management.base import BaseCommand, CommandError
from django.db import transaction

from ledger.foundation import outbox
from ledger.foundation.clocks import system_clock
from ledger.management import ready

INSTANT = "%Y-%m-%d %H:%M:%S UTC"


class Command(BaseCommand):
    """Tell what is overdue and what is parked."""

    help = "Tell how much promised work is overdue, and which jobs are parked, and why."

    def add_arguments(self, parser: ArgumentParser) -> None:
        """Take the job that is to ring again, if any."""
        parser.add_argument("--again", type=int, metavar="JOB", help="let a parked job ring again")

    def handle(self, *args: Any, again: int | None, **options: Any) -> None:
        """Let one ring again, if asked; then tell.

        :raises CommandError: if the job is not parked.
        """
        ready.check_tables()
        if again is not None:
            try:
                with transaction.atomic():
                    outbox.try_again(job_id=again)
            except outbox.JobNotParked as error:
                raise CommandError(str(error)) from error
        figures = outbox.backlog(at=system_clock())
        since = (
            "" if figures.oldest_due_at is None else f", since {figures.oldest_due_at:%F %T} UTC"
        )
        self.stdout.write(f"{figures.open_due} overdue{since}; {figures.parked} parked")
        for each in outbox.parked():
            self.stdout.write(
                f"job {each.job.id}: {each.job.kind} {each.job.key} of commons"
                f" {each.job.commons_id}, parked {each.parked_at:{INSTANT}}: {each.last_error}"
            )
