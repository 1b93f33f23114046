"""Play the invented season of the Tarrin Bay Fishing Cooperative, and write its report."""

from datetime import date
from pathlib import Path
from time import monotonic
from typing import Any

from django.conf import settings
from django.core.management.base import BaseCommand, CommandError
from django.db import IntegrityError

from ledger.cases import queries as cases
from ledger.commons import queries as commons
from ledger.commons.operations import AlreadyKept
from ledger.foundation.clocks import seeded_chance
from ledger.journal import queries as journal
from ledger.management import playing, ready, scenario
from ledger.management.scenario_cells import ScenarioError
from ledger.management.scenario_records import Scenario
from ledger.management.stage import Play
from ledger.reports import collecting, files, numbers, text
from ledger.reports.figures import digest

FOLDER = Path(settings.ROOT) / "fixtures" / "tarrin_bay"
SEED = 20260301
ACCOUNT = ("summary", "findings", "standing", "settlement", "resource-*", "next", "cautions")
# How many other demos may take a name between the look and the founding.
ATTEMPTS = 20
STEP_DAYS = 14
INTRODUCTION = """\
{name}: an invented commons, invented people, invented figures.
This plays its season of {slips:,} slips and {checks:,} checks by monitors into a new commons of its
own, {slug}. Slips are entered every evening and judged every night, people deal with
every case, the season is closed, and the next one is advised on and adopted. It takes about half a
minute."""


class Command(BaseCommand):
    """Play one invented season, from the opening of the book to the board's report."""

    help = (
        "Play an invented season through the book, print its account, and write the season report"
        " as HTML, PDF and XLSX. Every run founds a commons of its own, marked as a demo; no other"
        " commons is touched."
    )

    def handle(self, *args: Any, **options: Any) -> None:
        """Play, tell, write."""
        ready.check_tables()
        started = monotonic()
        try:
            files.check_folder(Path(settings.OUTPUT))
        except files.FolderUnusable as error:
            raise CommandError(str(error)) from error
        try:
            story = scenario.read(folder=FOLDER)
        except ScenarioError as error:
            raise CommandError(str(error)) from error
        slug, play = begun(story)
        self.stdout.write(
            INTRODUCTION.format(
                name=story.commons.name,
                slips=len(story.landings),
                checks=len(story.inspections),
                slug=slug,
            )
        )
        size = 0
        for place, day in enumerate(playing.play_on(play=play)):
            if place % STEP_DAYS == 0:
                size = self._progress(play, day, since=size)
        self._progress(play, play.day_of(play.clock.now), since=size)
        first = story.commons.seasons[0].during.first
        figures = collecting.season_figures(
            commons_id=play.commons_id, first=first, made_at=play.clock.now
        )
        for line in text.season_text(figures, keys=ACCOUNT):
            self.stdout.write(line)
        folder = Path(settings.OUTPUT) / slug
        files.write(figures=figures, folder=folder)
        self.stdout.write(
            f"\nThe head of the journal, and the digest of the figures\n"
            f"{'=' * 54}\n"
            f"{figures.proof}\n"
            f"figures {digest(figures)}\n"
            "The next run of this demo founds another commons and comes to the same two lines.\n"
            "\n"
            f"The season report, as a page, for print and as a workbook, is in\n"
            f"  {folder}\n"
            f"    {'  '.join(files.NAMES)}\n"
            f"Done in {monotonic() - started:.0f} seconds."
        )

    def _progress(self, play: Play, day: date, *, since: int) -> int:
        """Tell how far the play has come if the journal grew, and return its size."""
        size = journal.head(commons_id=play.commons_id).size
        if size == since:
            return size
        still_open = len(cases.cases(commons_id=play.commons_id, is_open=True))
        self.stderr.write(
            f"  {day}  {len(play.entered):>5,} slips in  {size:>5,} entries"
            f"  {numbers.many(still_open, one='case open', more='cases open'):>13}"
        )
        self.stderr.flush()
        return size


def begun(story: Scenario) -> tuple[str, Play]:
    """Found a commons of this run's own, under the next name where another run was quicker."""
    book = (FOLDER / "bylaws.yaml").read_text(encoding="utf-8")
    for _ in range(ATTEMPTS):
        slug = free_slug()
        try:
            chance = seeded_chance(SEED)
            return slug, playing.begin(scenario=story, book=book, slug=slug, chance=chance)
        except (AlreadyKept, IntegrityError):
            # Only the short name can be taken: everything else belongs to the new commons.
            continue
    raise CommandError("Other demos are being started just now; start this one again.")


def free_slug() -> str:
    """Return a name that no commons has: each run plays in a commons of its own."""
    taken = {record.slug for record in commons.every_commons()}
    numbered = (f"tarrin-bay-demo-{number}" for number in range(1, len(taken) + 2))
    return next(slug for slug in numbered if slug not in taken)
