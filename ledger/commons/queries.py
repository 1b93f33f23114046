"""What is recorded about a commons, its resources and its members."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date, datetime, timedelta
from typing import ClassVar, TypeVar

from django.db.models import QuerySet

from governance import periods
from governance.facts import Order, Roster
from ledger.commons import columns, models
from ledger.foundation.errors import LedgerError
from ledger.journal import queries as journal

ORDER = "outside_order"
SUSPENSION = "suspension"


class UnknownCommons(LedgerError):
    """No commons has this name or id."""

    code: ClassVar[str] = "commons.unknown_commons"
    message: ClassVar[str] = "Found the commons {found!r}; accepted are {accepted}."


class UnknownResource(LedgerError):
    """The commons does not keep this resource."""

    code: ClassVar[str] = "commons.unknown_resource"
    message: ClassVar[str] = "Found the resource {found!r}; accepted are {accepted}."


class InstantWithoutOffset(LedgerError):
    """An instant does not say how far its clock stands from UTC, so its day is not known."""

    code: ClassVar[str] = "commons.instant_without_offset"
    message: ClassVar[str] = "Found the instant {found}; accepted are instants with their offset."


@dataclass(frozen=True, slots=True, kw_only=True)
class CommonsRecord:
    """A commons: its id, names, time zone and money."""

    commons_id: int
    slug: str
    name: str
    zone: str
    money: str
    is_demo: bool

    def day_of(self, instant: datetime) -> date:
        """Return the commons' calendar day of an instant.

        :raises InstantWithoutOffset: if the instant has no offset.
        """
        if instant.tzinfo is None:
            raise InstantWithoutOffset(found=instant.isoformat())
        return periods.local_day(instant, zone=self.zone)


@dataclass(frozen=True, slots=True, kw_only=True)
class ResourceRecord:
    """A resource: the unit people read and the base unit that is counted."""

    code: str
    name: str
    unit: str
    base: str


@dataclass(frozen=True, slots=True, kw_only=True)
class ZoneRecord:
    """A zone, with the resource that it is a part of."""

    code: str
    name: str
    resource: str


@dataclass(frozen=True, slots=True, kw_only=True)
class MemberRecord:
    """A member as the secretary knows one."""

    number: int
    name: str
    household: int
    draw_point: str


@dataclass(frozen=True, slots=True, kw_only=True)
class OrderRecord:
    """An outside order with its notice; the notice is empty once it was erased."""

    entry: int
    authority: str
    resource: str
    zones: tuple[str, ...]
    first: date
    until: date
    notice: str


def _record(row: models.Commons) -> CommonsRecord:
    return CommonsRecord(
        commons_id=row.pk,
        slug=row.slug,
        name=row.name,
        zone=row.zone,
        money=row.money,
        is_demo=row.is_demo,
    )


def _known_record(row: models.Commons | None, found: int | str) -> CommonsRecord:
    if row is None:
        accepted = ", ".join(record.slug for record in every_commons()) or "none yet"
        raise UnknownCommons(found=found, accepted=accepted)
    return _record(row)


def commons(*, commons_id: int) -> CommonsRecord:
    """Return a commons by its id.

    :raises UnknownCommons: if there is none.
    """
    return _known_record(models.Commons.objects.filter(pk=commons_id).first(), commons_id)


def every_commons() -> tuple[CommonsRecord, ...]:
    """Return all the commons that this book keeps, by name."""
    return tuple(_record(row) for row in models.Commons.objects.order_by("slug"))


def commons_named(*, slug: str) -> CommonsRecord:
    """Return a commons by its short name.

    :raises UnknownCommons: if there is none.
    """
    return _known_record(models.Commons.objects.filter(slug=slug).first(), slug)


def resources(*, commons_id: int) -> Mapping[str, ResourceRecord]:
    """Return the resources of a commons by code."""
    rows = models.Resource.objects.filter(commons_id=commons_id).order_by("code")
    return {
        row.code: ResourceRecord(code=row.code, name=row.name, unit=row.unit, base=row.base)
        for row in rows
    }


def resource(*, commons_id: int, code: str) -> ResourceRecord:
    """Return one resource.

    :raises UnknownResource: if the commons does not keep it.
    """
    kept = resources(commons_id=commons_id)
    if code not in kept:
        raise UnknownResource(found=code, accepted=", ".join(kept))
    return kept[code]


def zones(*, commons_id: int) -> Mapping[str, ZoneRecord]:
    """Return the zones of a commons by code."""
    rows = models.Zone.objects.filter(commons_id=commons_id).select_related("resource")
    return {
        row.code: ZoneRecord(code=row.code, name=row.name, resource=row.resource.code)
        for row in rows.order_by("code")
    }


def _member(row: models.Member) -> MemberRecord:
    return MemberRecord(
        number=row.number, name=row.name, household=row.household, draw_point=row.draw_point
    )


def members(*, commons_id: int) -> Mapping[int, MemberRecord]:
    """Return the members of a commons by number."""
    rows = models.Member.objects.filter(commons_id=commons_id).order_by("number")
    return {row.number: _member(row) for row in rows}


def member(*, commons_id: int, number: int) -> MemberRecord | None:
    """Return one member, if the number is a member's."""
    row = models.Member.objects.filter(commons_id=commons_id, number=number).first()
    return None if row is None else _member(row)


def members_from(*, commons_id: int, number: int, limit: int) -> tuple[MemberRecord, ...]:
    """Return up to so many members from a number on, in order of number."""
    rows = models.Member.objects.filter(commons_id=commons_id, number__gte=number)
    return tuple(_member(row) for row in rows.order_by("number")[:limit])


def is_member(*, commons_id: int, number: int) -> bool:
    """Return whether a number is a member's."""
    return models.Member.objects.filter(commons_id=commons_id, number=number).exists()


Row = TypeVar("Row", bound=models.DatedRow)


def _known(rows: QuerySet[Row], *, commons_id: int, up_to: int | None) -> QuerySet[Row]:
    """Return the rows of a commons as known up to an entry, oldest first."""
    mine = rows.filter(commons_id=commons_id).order_by("entry_number", "pk")
    return mine if up_to is None else mine.filter(entry_number__lte=up_to)


def roster(*, commons_id: int, up_to: int | None = None) -> Roster:
    """Return the roster as known up to an entry number; everything known if none is given.

    A suspension whose entry was reversed is left out: its row stays, and holds nobody.
    """
    members_known = models.Member.objects.filter(commons_id=commons_id)
    if up_to is not None:
        members_known = members_known.filter(entry_number__lte=up_to)
    ordered = journal.rows(commons_id=commons_id, kinds=(SUSPENSION,), up_to=up_to)
    standing = {entry.number for entry in ordered}
    return columns.roster(
        members=members_known,
        classes=_known(models.MemberClass.objects.all(), commons_id=commons_id, up_to=up_to),
        shares=_known(models.Share.objects.all(), commons_id=commons_id, up_to=up_to),
        suspensions=[
            row
            for row in _known(models.Suspension.objects.all(), commons_id=commons_id, up_to=up_to)
            if row.entry_number in standing
        ],
    )


def suspended_until(*, commons_id: int, member: int, day: date) -> date | None:
    """Return the last day of the suspension that a member is under on a day, if there is one.

    One whose entry was reversed holds nobody.
    """
    rows = models.Suspension.objects.filter(
        commons_id=commons_id, member=member, first_day__lte=day, until_day__gt=day
    )
    standing = [
        row.until_day - timedelta(days=1)
        for row in rows
        if journal.entry(commons_id=commons_id, number=row.entry_number).reversed_by is None
    ]
    return max(standing, default=None)


def orders(*, commons_id: int, up_to: int | None = None) -> tuple[Order, ...]:
    """Return the outside orders as the rules read them, as known up to an entry number."""
    return columns.orders(
        _known(models.OutsideOrder.objects.all(), commons_id=commons_id, up_to=up_to)
    )


def order_records(*, commons_id: int) -> tuple[OrderRecord, ...]:
    """Return the outside orders with their notices, oldest first."""
    rows = _known(models.OutsideOrder.objects.all(), commons_id=commons_id, up_to=None)
    texts = journal.texts(commons_id=commons_id, numbers=[row.entry_number for row in rows])
    return tuple(
        OrderRecord(
            entry=row.entry_number,
            authority=row.authority,
            resource=row.resource,
            zones=tuple(row.zones),
            first=row.first_day,
            until=row.until_day,
            notice=texts.get(row.entry_number, {}).get("notice", ""),
        )
        for row in rows
    )


def holders_of(*, commons_id: int, role: str, day: date) -> frozenset[int]:
    """Return the members who hold a role on a day."""
    rows = models.RoleHeld.objects.filter(
        commons_id=commons_id, role=role, first_day__lte=day, until_day__gt=day
    )
    return frozenset(rows.values_list("member", flat=True))


def roles_of(*, commons_id: int, member: int, day: date) -> frozenset[str]:
    """Return the roles that a member holds on a day."""
    rows = models.RoleHeld.objects.filter(
        commons_id=commons_id, member=member, first_day__lte=day, until_day__gt=day
    )
    return frozenset(rows.values_list("role", flat=True))


def household_of(*, commons_id: int, household: int) -> frozenset[int]:
    """Return the member numbers of a household."""
    rows = models.Member.objects.filter(commons_id=commons_id, household=household)
    return frozenset(rows.values_list("number", flat=True))
