"""Judging daily what is touched comes to the same as judging everybody at the end."""

import random
from collections.abc import Iterator
from datetime import date, timedelta

import pytest
from django.db import transaction

from governance.compliance.findings import Finding
from governance.periods import DateRange
from ledger.commons import operations as commons
from ledger.foundation.clocks import Chance
from ledger.journal import operations as journal
from ledger.judgement import queries
from ledger.movements import operations as movements
from tests.conftest import TickingClock
from tests.ledger import builders, scene
from tests.ledger.builders import line

pytestmark = pytest.mark.django_db

DAYS = [date(2026, 4, 6) + timedelta(days=each) for each in range(9)]
MEMBERS = (1, 2, 3, 5, 6, 7)


class Happenings:
    """Acts by a seeded die: slips of today, of days before and of tomorrow, and what changes them.

    Amounts lie about the limits, so that findings come and go.
    """

    def __init__(self, bay: scene.Scene, seed: int) -> None:
        self.bay = bay
        self.die = random.Random(seed)
        self.slips: list[tuple[int, int, date]] = []
        self.suspensions: list[int] = []

    def on(self, day: date) -> None:
        """Let some things happen on a day."""
        self.bay.morning(day, hour=self.die.choice((9, 20)))
        acts = (self.lands, self.lands, self.lands, self.corrects, self.closes, self.suspends)
        for act in self.die.choices((*acts, self.frees, self.gives_back), k=6):
            with transaction.atomic():
                act(day)

    def lands(self, day: date) -> None:
        taken = day - timedelta(days=self.die.choice((-1, 0, 0, 0, 1, 2, 3)))
        member = self.die.choice(MEMBERS)
        name = f"{len(self.slips)}"
        number = self.bay.lands(name, *self.catch(), member=member, day=taken)
        self.slips.append((number, member, taken))

    def catch(self) -> Iterator[movements.Line]:
        yield line("clams", self.die.choice(("5", "20", "22", "42", "43.5")))
        if self.die.random() < 0.5:
            zone = self.die.choice(("inner_flats", "outer_bay"))
            yield line("mullet", self.die.choice(("1", "90", "200")), zone=zone)

    def corrects(self, day: date) -> None:
        if self.slips:
            number, member, taken = self.slips.pop(self.die.randrange(len(self.slips)))
            member = self.die.choice((member, self.die.choice(MEMBERS)))
            again = self.bay.corrects(
                number, f"again {number}", *self.catch(), member=member, day=taken
            )
            self.slips.append((again, member, taken))

    def closes(self, day: date) -> None:
        if self.die.random() < 0.3:
            commons.record_order(
                commons_id=self.bay.commons_id,
                authority="The water authority",
                resource="clams",
                zones=["pier_sand"],
                during=DateRange(first=day, until=day + timedelta(days=1)),
                notice="",
                hand=self.bay.hand,
            )

    def suspends(self, day: date) -> None:
        receipt = commons.suspend(
            commons_id=self.bay.commons_id,
            member=self.die.choice(MEMBERS),
            clause="ladder.closure",
            during=DateRange(first=day, until=day + timedelta(days=2)),
            reason="",
            hand=self.bay.hand,
        )
        self.suspensions.append(receipt.number)

    def frees(self, day: date) -> None:
        if self.suspensions:
            journal.reverse(
                commons_id=self.bay.commons_id,
                number=self.suspensions.pop(),
                reason="",
                by=0,
                occurred_at=self.bay.clock.now,
                day=day,
                clock=self.bay.clock,
                chance=self.bay.chance,
            )

    def gives_back(self, day: date) -> None:
        movements.give_back(
            commons_id=self.bay.commons_id,
            member=self.die.choice((1, 2, 3)),
            season="mullet-2026",
            amount=20_000,
            case=1,
            hand=self.bay.hand,
        )


def standing(bay: scene.Scene) -> list[Finding]:
    found = queries.latest(commons_id=bay.commons_id).values()
    return sorted((each.finding for each in found if each.standing), key=lambda each: each.key)


def of_everybody(bay: scene.Scene, as_of: date) -> list[Finding]:
    return list(queries.judged(commons_id=bay.commons_id, during=builders.SEASON, as_of=as_of))


@pytest.mark.parametrize("seed", range(8))
def test_every_day_the_touched_alone_come_to_what_all_would(
    seed: int, ticking_clock: TickingClock, chance: Chance
) -> None:
    """The judge of a day rings on the next morning, when slips of that are in already."""
    bay = scene.opened(clock=ticking_clock, chance=chance)
    happenings = Happenings(bay, seed)
    ever = 0
    for day in DAYS:
        happenings.on(day)
        bay.judges(day - timedelta(days=1))
        assert standing(bay) == of_everybody(bay, day - timedelta(days=1))
        ever += len(standing(bay))
    assert ever, "a run without any finding would show nothing"
    bay.judges(builders.SEASON.until)
    assert standing(bay) == of_everybody(bay, builders.SEASON.until)
