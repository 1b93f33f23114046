"""Seasons, allowables and allotments as recorded, and the names of their accounts."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date
from typing import ClassVar

from governance.periods import DateRange
from ledger.commons import queries as commons
from ledger.foundation.errors import LedgerError
from ledger.journal import queries as journal
from ledger.seasons import models


class UnknownSeason(LedgerError):
    """The commons has no such season."""

    code: ClassVar[str] = "seasons.unknown_season"
    message: ClassVar[str] = "Found the season {found!r}; accepted are {accepted}."


@dataclass(frozen=True, slots=True, kw_only=True)
class SeasonRecord:
    """A season of a resource; closed once its close stands in the journal."""

    code: str
    resource: str
    during: DateRange
    closed: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class AllowableRecord:
    """How much may be taken in a season, what stays in the pool of it, and the entry."""

    season: str
    amount: int
    reserve: int
    entry: int


def source_account(*, resource: str) -> str:
    """Name the account that allowables are issued from: what the resource may spare."""
    return f"resource:{resource}"


def pool_account(*, season: str) -> str:
    """Name the account of what is issued and not allotted."""
    return f"pool:{season}"


def off_season(*, resource: str) -> str:
    """Name the place beside the seasons of a resource, for takes on a day that none holds.

    The point keeps it apart from every season: no code has one.
    """
    return f"{resource}.off-season"


def after_close(*, season: str) -> str:
    """Name the place beside a closed season, for takes that came in after its close."""
    return f"{season}.after-close"


def left_account(*, season: str, member: int) -> str:
    """Name the account of what a member may still take; below zero when overdrawn."""
    return f"left:{season}:{member}"


def taken_prefix(*, season: str) -> str:
    """Name how the accounts of what was taken in a season begin."""
    return f"taken:{season}:"


def taken_account(*, season: str, member: int) -> str:
    """Name the account of what a member has taken."""
    return f"taken:{season}:{member}"


def carried_account(*, resource: str, member: int) -> str:
    """Name the account of what goes on to a member's next season; below zero when owed."""
    return f"{carried_prefix(resource=resource)}{member}"


def carried_prefix(*, resource: str) -> str:
    """Return how the names of all the carried accounts of a resource begin."""
    return f"carried:{resource}:"


def seasons(*, commons_id: int) -> Mapping[str, SeasonRecord]:
    """Return the seasons of a commons by code, in order of their first day."""
    closed = set(
        models.Close.objects.filter(commons_id=commons_id).values_list("season", flat=True)
    )
    rows = models.Season.objects.filter(commons_id=commons_id).order_by("first_day", "code")
    return {
        row.code: SeasonRecord(
            code=row.code,
            resource=row.resource,
            during=DateRange(first=row.first_day, until=row.until_day),
            closed=row.code in closed,
        )
        for row in rows
    }


def season(*, commons_id: int, code: str) -> SeasonRecord:
    """Return one season.

    :raises UnknownSeason: if the commons has not opened it.
    """
    return _opened(commons_id, code)


def holding(*, opened: Mapping[str, SeasonRecord], resource: str, day: date) -> SeasonRecord | None:
    """Return the season of a resource that a day lies in, if one does."""
    return next(
        (
            record
            for record in opened.values()
            if record.resource == resource and record.during.holds(day)
        ),
        None,
    )


def allowable(*, commons_id: int, season: str) -> AllowableRecord | None:
    """Return the allowable adopted for a season, if one is."""
    row = models.Allowable.objects.filter(commons_id=commons_id, season=season).first()
    if row is None:
        return None
    return AllowableRecord(
        season=row.season, amount=row.amount, reserve=row.reserve, entry=row.entry_number
    )


def left(*, commons_id: int, season: str, up_to: int | None = None) -> Mapping[int, int]:
    """Return what each member may still take in a season, in base units."""
    return _by_member(commons_id=commons_id, prefix=f"left:{season}:", up_to=up_to)


def taken(*, commons_id: int, season: str, up_to: int | None = None) -> Mapping[int, int]:
    """Return what each member has taken in a season, in base units."""
    return _by_member(commons_id=commons_id, prefix=f"taken:{season}:", up_to=up_to)


def allotments(*, commons_id: int, season: str, up_to: int | None = None) -> Mapping[int, int]:
    """Return each member's allotment, carried and given-back amounts included, in base units.

    Of a closed season, as it stood before the close.
    """
    closed = close_entry(commons_id=commons_id, season=season)
    if closed is not None:
        before = closed - 1
        up_to = before if up_to is None else min(up_to, before)
    remaining = left(commons_id=commons_id, season=season, up_to=up_to)
    used = taken(commons_id=commons_id, season=season, up_to=up_to)
    return {
        member: remaining.get(member, 0) + used.get(member, 0)
        for member in sorted({*remaining, *used})
    }


def close_entry(*, commons_id: int, season: str) -> int | None:
    """Return the number of the entry that closed a season; None while it is open."""
    closed = models.Close.objects.filter(commons_id=commons_id, season=season).first()
    return None if closed is None else closed.entry_number


def carried(*, commons_id: int, resource: str) -> Mapping[int, int]:
    """Return what waits for each member's next season; below zero is owed."""
    return _by_member(commons_id=commons_id, prefix=carried_prefix(resource=resource), up_to=None)


def pool(*, commons_id: int, season: str) -> int:
    """Return what lies in the pool of a season, in base units.

    :raises UnknownSeason: if the commons has not opened it.
    """
    opened = _opened(commons_id, season)
    resource = commons.resource(commons_id=commons_id, code=opened.resource)
    return journal.balance(
        commons_id=commons_id,
        account=pool_account(season=season),
        resource=resource.code,
        unit=resource.base,
    )


def _by_member(*, commons_id: int, prefix: str, up_to: int | None) -> Mapping[int, int]:
    found = journal.balances(commons_id=commons_id, prefix=prefix, up_to=up_to)
    return {int(account.rsplit(":", 1)[1]): amount for (account, _, _), amount in found.items()}


def _opened(commons_id: int, code: str) -> SeasonRecord:
    opened = seasons(commons_id=commons_id)
    if code not in opened:
        raise UnknownSeason(found=code, accepted=", ".join(opened) or "none yet")
    return opened[code]
