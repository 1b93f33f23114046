"""The invented season, played once, and what was kept while it was played."""

import csv
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from datetime import date
from decimal import Decimal
from pathlib import Path
from typing import Any

import yaml
from django.db import transaction

from ledger.foundation.clocks import seeded_chance
from ledger.journal import queries as journal
from ledger.journal.leaves import HeadRecord, Receipt
from ledger.management import playing, scenario
from ledger.management.commands import demo
from ledger.management.stage import Play
from ledger.movements import operations as movements
from ledger.reports import collecting
from ledger.reports.figures import SeasonFigures

FIXTURES = Path(__file__).parents[2] / "fixtures" / "tarrin_bay"
SLUG = "tarrin-bay-demo-1"
FIRST = date(2026, 3, 1)
AGAIN_ON = date(2026, 5, 20)


@dataclass(frozen=True, slots=True, kw_only=True)
class PlayedSeason:
    """A season played to its end: the play, the head of each evening, and the report's figures.

    ``real`` is a commons that stood in the same database before; ``replayed`` are the receipts of
    slips that were handed in a second time in mid-season.
    """

    database: str
    real: int
    play: Play
    heads: tuple[HeadRecord, ...]
    replayed: tuple[Receipt, ...]
    figures: SeasonFigures

    @property
    def commons_id(self) -> int:
        """Return the id of the commons that was played."""
        return self.play.commons_id


def play(*, database: str, real: int) -> PlayedSeason:
    """Play the season into the database that Django leads to."""
    begun = playing.begin(
        scenario=scenario.read(folder=FIXTURES),
        book=(FIXTURES / "bylaws.yaml").read_text(encoding="utf-8"),
        slug=SLUG,
        chance=seeded_chance(demo.SEED),
    )
    heads = [journal.head(commons_id=begun.commons_id)]
    replayed: tuple[Receipt, ...] = ()
    for day in playing.play_on(play=begun):
        if day == AGAIN_ON:
            replayed = _again(begun)
        heads.append(journal.head(commons_id=begun.commons_id))
    figures = collecting.season_figures(
        commons_id=begun.commons_id, first=FIRST, made_at=begun.clock.now
    )
    return PlayedSeason(
        database=database,
        real=real,
        play=begun,
        heads=tuple(heads),
        replayed=replayed,
        figures=figures,
    )


def _again(begun: Play) -> tuple[Receipt, ...]:
    """Hand the first slips of the season in a second time."""
    slips = [playing.slip_of(begun, landing) for landing in begun.scenario.landings[:40]]
    with transaction.atomic():
        return movements.record_withdrawals(
            commons_id=begun.commons_id, slips=slips, hand=begun.hand_of("secretary")
        )


def sheet(name: str) -> Iterator[Mapping[str, str]]:
    """Yield the rows of a sheet among the fixtures, read by nothing of ours."""
    with (FIXTURES / name).open(encoding="utf-8", newline="") as lines:
        yield from csv.DictReader(lines)


def page(name: str) -> Any:
    """Return a YAML page among the fixtures, read by nothing of ours."""
    return yaml.safe_load((FIXTURES / name).read_text(encoding="utf-8"))


def grams(kilograms: str) -> int:
    """Return kilograms as people write them in whole grams."""
    amount = Decimal(kilograms) * 1000
    assert amount == int(amount), "the fixtures are written to whole grams"
    return int(amount)
