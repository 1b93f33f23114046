"""``manage.py verify``: recompute journals and tables from the entries, and say what differs."""

from collections.abc import Callable, Collection, Sequence
from typing import Any

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.db import OperationalError, transaction

from ledger.advice import verification as advice
from ledger.bylaws import verification as bylaws
from ledger.cases import verification as cases
from ledger.commons import queries as commons_queries
from ledger.commons import verification as commons
from ledger.journal import operations, queries, verification
from ledger.journal.verification import Problem
from ledger.judgement import verification as judgement
from ledger.management import ready
from ledger.seasons import verification as seasons

Check = Callable[..., tuple[Problem, ...]]

# The judge reads the tables of the first; so they are held against their entries before it judges.
READ_BY_THE_JUDGE: tuple[tuple[str, Check], ...] = (
    ("the commons and its members", commons.problems),
    ("the bylaw editions", bylaws.problems),
    ("the seasons", seasons.problems),
)
STANDING_ALONE: tuple[tuple[str, Check], ...] = (
    ("the cases", cases.problems),
    ("the advice", advice.problems),
)
LINES_MAX = 200


class Command(BaseCommand):
    """Verify journals and the tables beside them; stop posting where something is broken."""

    help = (
        "Recompute journals from their entries: numbers, leaves, tree, sums, balances, reversals,"
        " triggers; then hold every table beside the entries against them, and judge anew."
        " Posting to a broken one is stopped, and the exit code is 1."
    )

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
        """Verify one journal after the other: a line each, and a line for each thing broken."""
        ready.check_tables()
        try:
            self._verify(journal, resume=resume)
        except OperationalError as error:
            raise CommandError(ready.does_not_answer(error)) from error

    def _verify(self, journal: list[int] | None, *, resume: bool) -> None:
        chosen = _chosen(journal)
        broken = [number for number in chosen if not self._is_sound(number, resume=resume)]
        if broken:
            names = ", ".join(map(str, broken))
            raise CommandError(f"Broken, and posting is stopped: journal {names}", returncode=1)
        if not chosen:
            self.stdout.write("No journal to verify.")

    def _is_sound(self, number: int, *, resume: bool) -> bool:
        if number not in queries.journals():
            self.stdout.write(f"journal {number}: broken\n  The commons has no head of a journal.")
            return False
        line = f"journal {number}: {queries.proof_line(queries.head(commons_id=number))}: "
        problems = verification.verify(
            commons_id=number, progress=lambda done, of: self._progress(number, done, of)
        )
        # A broken entry cannot bear witness to a row.
        if any(problem.number is not None for problem in problems):
            self.stderr.write(f"journal {number}: its entries are broken, so no table is compared")
        else:
            problems += self._problems_beside(number)
        if not problems:
            self.stdout.write(line + "sound" + self._resumed(number, resume=resume))
            return True
        self._tell(line, problems)
        with transaction.atomic():
            operations.stop(commons_id=number, why=str(problems[0]))
        return False

    def _problems_beside(self, number: int) -> tuple[Problem, ...]:
        """Hold the tables beside a sound journal against its entries."""
        read_by_the_judge = self._compare(number, READ_BY_THE_JUDGE)
        others = self._compare(number, STANDING_ALONE)
        if read_by_the_judge:
            self.stderr.write(
                f"journal {number}: the findings are not judged anew, for the judge reads what"
                " is broken"
            )
            return read_by_the_judge + others
        return self._compare(number, (("the findings", judgement.problems),)) + others

    def _compare(self, number: int, checks: Collection[tuple[str, Check]]) -> tuple[Problem, ...]:
        found: tuple[Problem, ...] = ()
        for name, check in checks:
            self.stderr.write(f"journal {number}: {name} against the entries")
            found += check(commons_id=number)
        return found

    def _tell(self, line: str, problems: Sequence[Problem]) -> None:
        self.stdout.write(line + "broken")
        for problem in problems[:LINES_MAX]:
            self.stdout.write(f"  {_in_words(problem)}")
        if len(problems) > LINES_MAX:
            self.stdout.write(f"  and {len(problems) - LINES_MAX:,} more")

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


def _chosen(journal: Collection[int] | None) -> tuple[int, ...]:
    """Return the journals to verify: those that stand, and those that a commons should have.

    :raises CommandError: if one that was asked for is neither.
    """
    kept = {record.commons_id for record in commons_queries.every_commons()}
    known = tuple(sorted(kept.union(queries.journals())))
    if journal is None:
        return known
    unknown = sorted(set(journal).difference(known))
    if unknown:
        found = ", ".join(map(str, unknown))
        accepted = ", ".join(map(str, known)) or "none yet"
        raise CommandError(f"Found the journal {found}; accepted are {accepted}.")
    return tuple(dict.fromkeys(journal))


def _in_words(problem: Problem) -> str:
    meaning = verification.MEANINGS.get(problem.invariant)
    if meaning is None:
        return str(problem)
    code = f"{problem.invariant} ({meaning})"
    return str(Problem(invariant=code, number=problem.number, what=problem.what))
