"""``manage.py report``: make the report of a closed season from the book as it stands."""

from datetime import UTC, date, datetime
from pathlib import Path
from typing import Any

from django.conf import settings
from django.core.management.base import BaseCommand, CommandError, CommandParser

from governance.errors import StintbookError
from ledger.commons import queries as commons
from ledger.management import ready
from ledger.reports import collecting, files
from ledger.reports.figures import SeasonFigures, digest


class Command(BaseCommand):
    """Make the report of one season of one commons."""

    help = (
        "Make the report of a closed season as HTML, PDF and XLSX, and print the proof line and"
        " the digest of its figures. The same head gives the same digest."
    )

    def add_arguments(self, parser: CommandParser) -> None:
        """Take the commons, the season and the folder."""
        parser.add_argument("--commons", required=True, metavar="SLUG", help="its short name")
        parser.add_argument(
            "--season",
            required=True,
            metavar="FIRST-DAY",
            help="the first day of the season, such as 2026-03-01",
        )
        parser.add_argument(
            "--output",
            metavar="FOLDER",
            help="where the files go; a folder of the commons in the output folder if silent",
        )

    def handle(self, *, commons: str, season: str, output: str | None, **options: Any) -> None:
        """Look whether there is a place to write, then make the report."""
        first = _day(season)
        ready.check_tables()
        folder = Path(settings.OUTPUT) / commons / season if output is None else Path(output)
        try:
            figures = _made(slug=commons, first=first, folder=folder)
        except StintbookError as error:
            raise CommandError(str(error)) from error
        names = "  ".join(files.NAMES)
        self.stdout.write(f"{figures.proof}\nfigures {digest(figures)}\n{folder}\n  {names}")


def _day(text: str) -> date:
    try:
        return date.fromisoformat(text)
    except ValueError as error:
        raise CommandError(
            f"Found the season {text!r}; accepted is its first day, such as 2026-03-01."
        ) from error


def _made(*, slug: str, first: date, folder: Path) -> SeasonFigures:
    found = commons.commons_named(slug=slug)
    files.check_folder(folder)
    figures = collecting.season_figures(
        commons_id=found.commons_id, first=first, made_at=datetime.now(UTC)
    )
    files.write(figures=figures, folder=folder)
    return figures
