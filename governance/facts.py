"""What happened, as columns: equal-length, read-only arrays that every judgement reads."""

from collections.abc import Mapping
from dataclasses import dataclass, fields
from datetime import date
from fractions import Fraction
from typing import ClassVar, Generic, TypeVar

import numpy as np
from numpy.typing import NDArray

from governance.errors import StintbookError
from governance.periods import DateRange

Column = NDArray[np.int64]
Value = TypeVar("Value")


class UnequalColumns(StintbookError):
    """The columns of one table differ in length."""

    code: ClassVar[str] = "facts.unequal_columns"
    message: ClassVar[str] = "The columns of {table} differ in length: {lengths}."


class SumTooLarge(StintbookError):
    """A sum over a column could pass 64 bits."""

    code: ClassVar[str] = "facts.sum_too_large"
    message: ClassVar[str] = "{count} amounts of up to {largest} could add up past 64 bits."


def column(values: object) -> Column:
    """Return values as a read-only column of 64-bit integers."""
    array = np.array(values, dtype=np.int64)
    array.flags.writeable = False
    return array


class _Columns:
    """Checks shared by every table of columns."""

    __slots__ = ()

    def _check(self) -> None:
        lengths = {}
        for field in fields(self):  # type: ignore[arg-type]
            value = getattr(self, field.name)
            if isinstance(value, np.ndarray):
                lengths[field.name] = len(value)
                value.flags.writeable = False
        if len(set(lengths.values())) > 1:
            raise UnequalColumns(table=type(self).__name__, lengths=lengths)

    @staticmethod
    def _check_sum(amount: Column) -> None:
        largest = int(np.abs(amount).max(initial=0))
        if largest * len(amount) >= 2**63:
            raise SumTooLarge(count=len(amount), largest=largest)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Withdrawals(_Columns):
    """Takes of one resource that stand: reversed entries and their reversals are left out.

    ``entry`` is the journal number; ``member`` the member's number; ``day`` a day number in the
    commons' zone; ``instant`` and ``reported`` microseconds since 1970 UTC: when it was taken and
    when the slip was handed in; ``amount`` base units; ``zone`` an index into ``zones``.
    """

    resource: str
    base: str
    zones: tuple[str, ...]
    entry: Column
    member: Column
    day: Column
    instant: Column
    reported: Column
    amount: Column
    zone: Column

    def __post_init__(self) -> None:
        self._check()
        self._check_sum(self.amount)

    def where(self, rows: NDArray[np.bool_]) -> "Withdrawals":
        """Return the rows that a mask keeps."""
        return Withdrawals(
            resource=self.resource,
            base=self.base,
            zones=self.zones,
            entry=self.entry[rows],
            member=self.member[rows],
            day=self.day[rows],
            instant=self.instant[rows],
            reported=self.reported[rows],
            amount=self.amount[rows],
            zone=self.zone[rows],
        )

    def __len__(self) -> int:
        return len(self.entry)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Contributions(_Columns):
    """What members gave towards duties: work in minutes, or money in the smallest coin.

    ``duty`` is an index into ``duties``, the clause ids that the gifts were rendered under.
    """

    kind: str
    base: str
    duties: tuple[str, ...]
    entry: Column
    member: Column
    day: Column
    amount: Column
    duty: Column

    def __post_init__(self) -> None:
        self._check()
        self._check_sum(self.amount)


@dataclass(frozen=True, slots=True, kw_only=True)
class Dated(Generic[Value]):
    """A value that holds on some days; ``entry`` is the journal entry that says so."""

    value: Value
    during: DateRange
    entry: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Member:
    """A member as the judge sees one: numbers, classes, shares and suspensions, no name.

    ``household`` is the number of the household's first member. ``shares`` maps a resource to the
    dated measures of the member's right in it.
    """

    number: int
    household: int
    classes: tuple[Dated[str], ...]
    shares: Mapping[str, tuple[Dated[Fraction], ...]]
    suspended: tuple[Dated[str], ...]

    def is_in(self, membership_class: str, day: date) -> bool:
        """Return whether the member belonged to a class on a day."""
        return any(
            held.value == membership_class and held.during.holds(day) for held in self.classes
        )

    def share_of(self, resource: str, day: date) -> Fraction:
        """Return the member's share in a resource on a day; nothing recorded is no share."""
        held = self.shares.get(resource, ())
        return sum((each.value for each in held if each.during.holds(day)), Fraction(0))


@dataclass(frozen=True, slots=True, kw_only=True)
class Roster:
    """The members of a commons, in order of number."""

    members: tuple[Member, ...]

    def __post_init__(self) -> None:
        numbers = [member.number for member in self.members]
        assert numbers == sorted(set(numbers)), "members stand once each, in order of number"


@dataclass(frozen=True, slots=True, kw_only=True)
class Order:
    """A dated command of an outside authority that closes zones of a resource."""

    entry: int
    authority: str
    resource: str
    zones: tuple[str, ...]
    during: DateRange


@dataclass(frozen=True, slots=True, kw_only=True)
class Observation:
    """A reading of the resource: a yearly index, a catch, or what a survey found on a zone.

    ``error`` is the reading's coefficient of variation, where it is known.
    """

    entry: int
    resource: str
    kind: str
    zone: str
    year: int
    value: Fraction
    unit: str
    error: Fraction | None


@dataclass(frozen=True, slots=True, kw_only=True)
class SeasonFacts:
    """Everything that one season's judgement reads, as known at one moment.

    ``allotments`` maps (resource, member number) to base units, carry-over and payback included.
    """

    season: DateRange
    roster: Roster
    withdrawals: tuple[Withdrawals, ...]
    work: Contributions
    money: Contributions
    orders: tuple[Order, ...]
    allotments: Mapping[tuple[str, int], int]
