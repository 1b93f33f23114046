"""A scenario being played: the commons, its clock, and what has been entered so far."""

from dataclasses import dataclass, field
from datetime import UTC, date, datetime, time
from decimal import Decimal
from zoneinfo import ZoneInfo

from governance import quantities
from ledger.foundation.clocks import Chance
from ledger.foundation.hands import Hand
from ledger.management import scenario_records as records
from ledger.movements import operations as movements
from ledger.tasks import draining


class PlayFailed(Exception):
    """Work that the scenario promised could not be done."""


@dataclass(slots=True)
class SceneClock:
    """A clock that stands where the scenario has got to."""

    now: datetime

    def __call__(self) -> datetime:
        """Return the scenario's moment."""
        return self.now


@dataclass(slots=True, kw_only=True)
class Play:
    """A scenario being played; ``entered`` holds the slips that stand in the book."""

    scenario: records.Scenario
    commons_id: int
    clock: SceneClock
    chance: Chance
    zone: ZoneInfo
    entered: set[int] = field(default_factory=set)

    def holders(self, role: str) -> tuple[int, ...]:
        """Return the members who hold a role, in the scenario's order."""
        return tuple(each.member for each in self.scenario.commons.offices if each.role == role)

    def hand_of(self, role: str) -> Hand:
        """Return the hand of the first member who holds a role."""
        return Hand(by=self.holders(role)[0], clock=self.clock, chance=self.chance)

    def at(self, day: date, hour: time) -> datetime:
        """Return the instant of a local time of day."""
        return datetime.combine(day, hour, tzinfo=self.zone)

    def day_of(self, instant: datetime) -> date:
        """Return the local day of an instant."""
        return instant.astimezone(self.zone).date()

    def coins(self, amount: Decimal) -> int:
        """Return a sum of the commons' money in its smallest coin."""
        places = quantities.currency_places(self.scenario.commons.money)
        return int(amount.scaleb(places))

    def base_amount(self, resource: str, amount: Decimal) -> int:
        """Return an amount, in the unit that a resource is read in, in its base units."""
        kept = next(each for each in self.scenario.commons.resources if each.code == resource)
        return movements.base_amount(given=amount, unit=kept.unit, base=kept.base)

    def move_to(self, instant: datetime) -> None:
        """Set the clock, and do the work that became due on the way.

        :raises PlayFailed: if promised work fails.
        """
        self.clock.now = instant.astimezone(UTC)
        for drained in draining.drain(
            clock=self.clock, chance=self.chance, commons_id=self.commons_id
        ):
            if drained.failed:
                raise PlayFailed(f"{drained.job.kind} {drained.job.key}: {drained.outcome}")
