"""One shape for each kind of clause that stands in a book's list of clauses."""

from collections.abc import Mapping
from fractions import Fraction
from typing import ClassVar

from pydantic import Field, ValidationInfo, field_validator

from governance import quantities
from governance.bylaws import clauses, context, fields, shapes
from governance.periods import DateRange, Per


class Classes(shapes.Shape):
    """The classes of member."""

    classes: list[fields.Name]

    @field_validator("classes")
    @classmethod
    def _once_each(cls, classes: list[str]) -> list[str]:
        return shapes.once_each(classes)


class Membership(shapes.ClauseShape):
    """Who belongs."""

    what: Classes

    def record(self, *, book: DateRange) -> clauses.Membership:
        """Return the clause that this stands for."""
        return clauses.Membership(head=self.head(book=book), classes=tuple(self.what.classes))


class Split(shapes.Shape):
    """How an allowable is split."""

    resource: fields.Resource
    by: fields.Basis
    rounding: fields.Rounding
    reserve: fields.Percent = Fraction(0)


class Allocation(shapes.ClauseShape):
    """What a member's part of the allowable is."""

    what: Split

    def record(self, *, book: DateRange) -> clauses.Allocation:
        """Return the clause that this stands for."""
        return clauses.Allocation(
            head=self.head(book=book),
            resource=self.what.resource,
            basis=self.what.by,
            rounding=self.what.rounding,
            reserve=self.what.reserve,
        )


class Limit(shapes.Shape):
    """How much is too much."""

    resource: fields.Resource
    more_than: fields.Ceiling
    per: fields.Per
    counted_by: fields.CountedBy
    tolerance: fields.Percent = Fraction(0)

    @field_validator("more_than")
    @classmethod
    def _in_units_of_the_resource(
        cls, more_than: quantities.Amount | None, info: ValidationInfo
    ) -> quantities.Amount | None:
        base = context.reading_of(info).base_of(info.data.get("resource"))
        if more_than is not None and base is not None:
            context.check_converts(more_than.unit, base)
        return more_than

    @field_validator("per")
    @classmethod
    def _allotments_are_for_a_season(cls, per: Per, info: ValidationInfo) -> Per:
        if info.data.get("more_than", "unread") is None and per is not Per.SEASON:
            raise context.refusal(accepted="'season', for an allotment is a season's")
        return per


class QuantityLimit(shapes.BindingShape):
    """Nobody takes more than this in each span."""

    deontic: ClassVar[tuple[str, str]] = ("must_not", "withdraw")
    what: Limit

    def counted_in(self, reading: context.Reading) -> str | None:
        """Return the resource's base unit."""
        return reading.base_of(self.what.resource)

    def record(self, *, book: DateRange) -> clauses.QuantityLimit:
        """Return the clause that this stands for."""
        return clauses.QuantityLimit(
            head=self.head(book=book),
            resource=self.what.resource,
            more_than=self.what.more_than,
            per=self.what.per,
            counted_by=self.what.counted_by,
            tolerance=self.what.tolerance,
        )


class Grounds(shapes.Shape):
    """A resource and some of its zones; without any it is meant everywhere."""

    resource: fields.Resource
    zones: list[fields.Name] | None = None

    @field_validator("zones")
    @classmethod
    def _once_each(cls, zones: list[str]) -> list[str]:
        return shapes.once_each(zones)


class Everywhere(shapes.Shape):
    """A resource, wherever it is taken."""

    resource: fields.Resource


class DaysOfYear(shapes.Shape):
    """Days of every year, both ends included; they may run over the new year."""

    from_: fields.DayOfYear = Field(alias="from")
    through: fields.DayOfYear


class ClosedWindow(shapes.BindingShape):
    """Nobody takes here on these days."""

    deontic: ClassVar[tuple[str, str]] = ("must_not", "withdraw")
    what: Grounds
    when: DaysOfYear

    def counted_in(self, reading: context.Reading) -> str | None:
        """Return the resource's base unit."""
        return reading.base_of(self.what.resource)

    def record(self, *, book: DateRange) -> clauses.ClosedWindow:
        """Return the clause that this stands for."""
        return clauses.ClosedWindow(
            head=self.head(book=book),
            resource=self.what.resource,
            zones=tuple(self.what.zones or ()),
            closed=clauses.YearlyWindow(first=self.when.from_, last=self.when.through),
        )


class OutsideOrder(shapes.BindingShape):
    """Nobody takes where an authority has closed."""

    deontic: ClassVar[tuple[str, str]] = ("must_not", "withdraw")
    what: Everywhere

    def counted_in(self, reading: context.Reading) -> str | None:
        """Return the resource's base unit."""
        return reading.base_of(self.what.resource)

    def record(self, *, book: DateRange) -> clauses.OutsideOrder:
        """Return the clause that this stands for."""
        return clauses.OutsideOrder(head=self.head(book=book), resource=self.what.resource)


class Deadline(shapes.Shape):
    """How soon."""

    within: fields.Hours


class ReportingDuty(shapes.BindingShape):
    """A slip is handed in so soon."""

    deontic: ClassVar[tuple[str, str]] = ("must", "report")
    what: Deadline

    def counted_in(self, reading: context.Reading) -> str | None:
        """Return the hour, which a late slip is late by."""
        return "h"

    def record(self, *, book: DateRange) -> clauses.ReportingDuty:
        """Return the clause that this stands for."""
        return clauses.ReportingDuty(head=self.head(book=book), within_hours=self.what.within)


class Work(shapes.Shape):
    """How much work is owed, and what a day of it is."""

    work: fields.WorkingDays
    day: fields.Minutes
    per: fields.PerSeason
    instead: fields.Price | None = None

    @field_validator("day")
    @classmethod
    def _fits_in_a_day(cls, day: int) -> int:
        if day > 24 * 60:
            raise context.refusal(accepted="at most 24 h")
        return day

    @field_validator("instead")
    @classmethod
    def _for_a_day(cls, instead: quantities.Price) -> quantities.Price:
        if instead.per != "d":
            raise context.refusal(accepted="a price for a working day, such as '60 EUR/d'")
        return instead


class WorkDuty(shapes.BindingShape):
    """Work owed each season."""

    deontic: ClassVar[tuple[str, str]] = ("must", "contribute")
    what: Work

    def counted_in(self, reading: context.Reading) -> str | None:
        """Return the minute, which missing work is counted in."""
        return "min"

    def record(self, *, book: DateRange) -> clauses.WorkDuty:
        """Return the clause that this stands for."""
        return clauses.WorkDuty(
            head=self.head(book=book),
            days=self.what.work,
            day_minutes=self.what.day,
            instead=self.what.instead,
        )


class Remainder(shapes.Shape):
    """How much of an allotment may go on."""

    resource: fields.Resource
    at_most: fields.Percent


class CarryOver(shapes.ClauseShape):
    """What is left goes on to the next season."""

    deontic: ClassVar[tuple[str, str]] = ("may", "carry_over")
    what: Remainder

    def record(self, *, book: DateRange) -> clauses.CarryOver:
        """Return the clause that this stands for."""
        return clauses.CarryOver(
            head=self.head(book=book), resource=self.what.resource, at_most=self.what.at_most
        )


class Return(shapes.Shape):
    """How much comes off for each unit taken in excess."""

    resource: fields.Resource
    factor: fields.Decimal


class Payback(shapes.ClauseShape):
    """What was taken beyond an allotment comes off the next one."""

    deontic: ClassVar[tuple[str, str]] = ("must", "pay_back")
    what: Return

    def record(self, *, book: DateRange) -> clauses.Payback:
        """Return the clause that this stands for."""
        return clauses.Payback(
            head=self.head(book=book), resource=self.what.resource, factor=self.what.factor
        )


class Times(shapes.Shape):
    """The days that a member has."""

    answer: fields.Days
    answer_to_warning: fields.Days
    appeal: fields.Days
    appeal_to: fields.Name


class Procedure(shapes.ClauseShape):
    """How a case is heard."""

    what: Times

    def record(self, *, book: DateRange) -> clauses.Procedure:
        """Return the clause that this stands for."""
        return clauses.Procedure(
            head=self.head(book=book),
            answer_days=self.what.answer,
            answer_to_warning_days=self.what.answer_to_warning,
            appeal_days=self.what.appeal,
            appeal_to=self.what.appeal_to,
        )


KINDS: Mapping[str, type[shapes.ClauseShape]] = {
    "membership": Membership,
    "allocation": Allocation,
    "quantity_limit": QuantityLimit,
    "closed_window": ClosedWindow,
    "outside_order": OutsideOrder,
    "reporting_duty": ReportingDuty,
    "work_duty": WorkDuty,
    "carry_over": CarryOver,
    "payback": Payback,
    "procedure": Procedure,
}
