"""What a table or a chart needs to know of a resource, whether its season is closed or not."""

from collections.abc import Sequence
from datetime import date
from typing import Protocol

from ledger.reports.figures import AllowableStep, DayTake


class Measured(Protocol):
    """A resource's name, and the UCUM codes of its amounts as kept and as read."""

    @property
    def name(self) -> str:
        """Return the name."""

    @property
    def base(self) -> str:
        """Return the unit as kept."""

    @property
    def unit(self) -> str:
        """Return the unit as read."""


class Drawn(Measured, Protocol):
    """A season's take by day, under the allowable in force."""

    @property
    def opens(self) -> date:
        """Return the first day."""

    @property
    def closes(self) -> date:
        """Return the last day."""

    @property
    def daily(self) -> Sequence[DayTake]:
        """Return the take of each day that has one, in order."""

    @property
    def allowable_steps(self) -> Sequence[AllowableStep]:
        """Return the allowables and the days from which they were in force."""
