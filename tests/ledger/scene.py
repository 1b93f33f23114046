"""A commons at a moment: what happens in it, told in short words, for the tests of high slices."""

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date, datetime

from django.db import transaction

from governance import periods
from ledger.bylaws import operations as bylaws
from ledger.cases import operations as cases
from ledger.cases import queries as cases_queries
from ledger.commons import operations as commons
from ledger.foundation.clocks import Chance
from ledger.foundation.hands import Hand
from ledger.foundation.models import Job
from ledger.journal import queries as journal
from ledger.judgement import operations as judgement
from ledger.judgement import queries as judgement_queries
from ledger.movements import operations as movements
from ledger.tasks import draining
from tests.conftest import TickingClock
from tests.ledger import builders

# Two in one household, and one apart, of whom none holds an office.
ORDINARY = (
    builders.admission(5),
    builders.admission(6, household=5),
    builders.admission(7),
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Scene:
    """A commons, its clock, and the secretary's hand."""

    commons_id: int
    clock: TickingClock
    chance: Chance

    @property
    def hand(self) -> Hand:
        """Return the secretary's hand."""
        return builders.hand(clock=self.clock, chance=self.chance)

    @property
    def size(self) -> int:
        """Return how many entries the journal holds."""
        return journal.head(commons_id=self.commons_id).size

    def morning(self, day: date, *, hour: int = 9) -> None:
        """Set the clock to an hour of a day, in UTC."""
        self.clock.set(builders.at(day, hour=hour))

    def midnight(self, day: date) -> datetime:
        """Set the clock to the instant at which a day begins in the commons' zone."""
        self.clock.set(periods.start_of_day(day, zone=builders.ZONE))
        return self.clock.now

    def lands(self, name: str, *lines: movements.Line, member: int = 5, day: date) -> int:
        """Record a slip of a day, at once, and return its entry's number."""
        slip = builders.slip(name, *lines, member=member, day=day)
        (receipt,) = builders.land(commons_id=self.commons_id, hand=self.hand, slips=[slip])
        return receipt.number

    def corrects(
        self, number: int, name: str, *lines: movements.Line, member: int = 5, day: date
    ) -> int:
        """Correct a slip and return the number of the entry that records it anew."""
        slip = builders.slip(name, *lines, member=member, day=day)
        with transaction.atomic():
            _, redone = movements.correct_withdrawal(
                commons_id=self.commons_id,
                number=number,
                slip=slip,
                reason="misread",
                hand=self.hand,
            )
        return redone.number

    def judges(self, as_of: date) -> int:
        """Judge as of a day; return how many findings changed."""
        with transaction.atomic():
            return judgement.judge(commons_id=self.commons_id, as_of=as_of, hand=self.hand)

    def hears(self, *findings: int) -> int:
        """Let the cases hear of findings, of all if none is named."""
        numbers: Sequence[int] = findings or sorted(
            record.number
            for record in judgement_queries.latest(commons_id=self.commons_id).values()
        )
        with transaction.atomic():
            return cases.hear(commons_id=self.commons_id, findings=numbers, hand=self.hand)

    def act(self, case: int, act: cases.Act) -> cases_queries.CaseRecord:
        """Make a move in a case, and return the case."""
        with transaction.atomic():
            cases.move(commons_id=self.commons_id, case=case, act=act, hand=self.hand)
        return self.case(case)

    def case(self, number: int) -> cases_queries.CaseRecord:
        """Return a case as it stands."""
        return cases_queries.case(commons_id=self.commons_id, number=number)

    def drains(self) -> list[draining.Drained]:
        """Do what is due now; fail if a job does."""
        done = list(
            draining.drain(clock=self.clock, chance=self.chance, commons_id=self.commons_id)
        )
        assert not [each for each in done if each.failed], done
        return done

    def job(self, kind: str, key: str) -> Job:
        """Return a job by kind and key."""
        return Job.objects.get(commons_id=self.commons_id, kind=kind, key=key)


def opened(*, clock: TickingClock, chance: Chance) -> Scene:
    """Return the small commons with its season open, and ordinary members beside the officers."""
    hand = builders.hand(clock=clock, chance=chance)
    commons_id = builders.opened(hand=hand)
    with transaction.atomic():
        commons.admit(commons_id=commons_id, admissions=ORDINARY, hand=hand)
    return Scene(commons_id=commons_id, clock=clock, chance=chance)


def adopts(bay: Scene, text: str) -> None:
    """Adopt the text of an edition."""
    with transaction.atomic():
        bylaws.adopt(commons_id=bay.commons_id, text=text, name="book.yaml", hand=bay.hand)


def handed(on: date, *, proved: bool = True, means: str = "by hand") -> cases.Handed:
    """Return an attempt to hand something over."""
    return cases.Handed(on=on, means=means, proved=proved)
