"""``manage.py verify``: recompute journals from their rows and say whether they are sound."""

from typing import Any

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.db import transaction

from ledger.journal import operations, queries, verification


class Command(BaseCommand):
    """Verify journals; stop posting to one that is broken."""

    help = (
        "Recompute journals: numbers, leaves, tree, sums, balances, reversals, triggers."
        " A broken one is stopped, and the exit code is 1."
    )
    requires_migrations_checks = True

    def add_arguments(self, parser: CommandParser) -> None:
        """Take the journals to verify and whether a mended one is to be resumed."""
        parser.add_argument(
            "--journal",
            type=int,
            action="append",
            metavar="N",
            help="the number of a commons; may be given again; all where absent",
        )
        parser.add_argument(
            "--resume", action="store_true", help="let posting go on where a journal is sound"
        )

    def handle(self, *, journal: list[int] | None, resume: bool, **options: Any) -> None:
        """Verify one journal after the other, a line each."""
        chosen = queries.journals() if journal is None else tuple(journal)
        broken = [number for number in chosen if not self._is_sound(number, resume=resume)]
        if broken:
            names = ", ".join(map(str, broken))
            raise CommandError(f"Broken, and posting is stopped: journal {names}", returncode=1)
        if not chosen:
            self.stdout.write("No journal to verify.")

    def _is_sound(self, number: int, *, resume: bool) -> bool:
        line = f"journal {number}: {queries.proof_line(queries.head(commons_id=number))}: "
        problems = verification.verify(
            commons_id=number, progress=lambda done, of: self._progress(number, done, of)
        )
        if not problems:
            self.stdout.write(line + "sound" + self._resumed(number, resume=resume))
            return True
        others = f" (and {len(problems) - 1:,} more)" if len(problems) > 1 else ""
        self.stdout.write(f"{line}broken: {problems[0]}{others}")
        with transaction.atomic():
            operations.stop(commons_id=number, why=str(problems[0]))
        return False

    def _resumed(self, number: int, *, resume: bool) -> str:
        why = queries.why_stopped(commons_id=number)
        if not why:
            return ""
        if not resume:
            return f"; posting is still stopped ({why}); --resume lets it go on"
        with transaction.atomic():
            operations.resume(commons_id=number)
        return "; posting goes on"

    def _progress(self, number: int, done: int, of: int) -> None:
        self.stderr.write(f"journal {number}: {done:,} of {of:,} entries")
