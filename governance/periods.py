"""Half-open date ranges, day numbers, and the spans that amounts are added up over."""

import enum
from collections.abc import Iterator
from dataclasses import dataclass
from datetime import UTC, date, datetime, time, timedelta
from typing import ClassVar, assert_never
from zoneinfo import ZoneInfo

import numpy as np
from numpy.typing import NDArray

from governance.errors import StintbookError

_EPOCH = date(1970, 1, 1).toordinal()

# The end of a range that nobody has ended yet.
OPEN_END = date.max


class EmptyRange(StintbookError):
    """A range of dates ends before or on the day it begins."""

    code: ClassVar[str] = "periods.empty_range"
    message: ClassVar[str] = "The range begins on {first} and ends before {until}: it has no day."


@dataclass(frozen=True, slots=True, kw_only=True, order=True)
class DateRange:
    """Days from ``first`` up to, and not including, ``until``.

    :raises EmptyRange: if it holds no day.
    """

    first: date
    until: date

    def __post_init__(self) -> None:
        if self.until <= self.first:
            raise EmptyRange(first=self.first, until=self.until)

    @property
    def last(self) -> date:
        """Return the last day in the range."""
        return self.until - timedelta(days=1)

    @property
    def length_days(self) -> int:
        """Return how many days the range holds."""
        return (self.until - self.first).days

    def holds(self, day: date) -> bool:
        """Return whether a day lies in the range."""
        return self.first <= day < self.until

    def overlaps(self, other: "DateRange") -> bool:
        """Return whether the two ranges share a day."""
        return self.first < other.until and other.first < self.until

    def days(self) -> Iterator[date]:
        """Yield the days in order."""
        for offset in range(self.length_days):
            yield self.first + timedelta(days=offset)


class Per(enum.StrEnum):
    """The span of time that an amount is added up over."""

    DAY = "day"
    ISO_WEEK = "iso_week"
    MONTH = "month"
    SEASON = "season"


def day_number(day: date) -> int:
    """Return the days since 1970-01-01; negative before."""
    return day.toordinal() - _EPOCH


def date_of(number: int) -> date:
    """Return the date of a day number."""
    return date.fromordinal(number + _EPOCH)


def local_day(instant: datetime, *, zone: str) -> date:
    """Return the calendar day of an instant in a time zone.

    :raises ValueError: if the instant has no offset.
    """
    if instant.tzinfo is None:
        raise ValueError("the instant has no offset")
    return instant.astimezone(ZoneInfo(zone)).date()


def start_of_day(day: date, *, zone: str) -> datetime:
    """Return the instant at which a calendar day begins in a time zone, in UTC."""
    return datetime.combine(day, time.min, tzinfo=ZoneInfo(zone)).astimezone(UTC)


def span_starts(days: NDArray[np.int64], *, per: Per, season: DateRange) -> NDArray[np.int64]:
    """Return, for each day number, the day number on which its span begins.

    ISO 8601 weeks begin on Monday; 1970-01-01 was a Thursday.
    """
    match per:
        case Per.DAY:
            return days
        case Per.ISO_WEEK:
            return days - (days + 3) % 7
        case Per.MONTH:
            months = days.astype("datetime64[D]").astype("datetime64[M]")
            return months.astype("datetime64[D]").astype(np.int64)
        case Per.SEASON:
            return np.full_like(days, day_number(season.first))
        case _:
            assert_never(per)
