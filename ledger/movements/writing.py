"""Behind the writers of movements: the checks of the trade, and the entries that they let pass."""

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from datetime import UTC, date, datetime
from decimal import Decimal
from typing import ClassVar

from governance import quantities
from governance.compliance import duties
from governance.periods import DateRange
from ledger.bylaws import queries as bylaws
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.foundation.errors import LedgerError
from ledger.journal.leaves import Draft, EntryRecord, Fact, Posting
from ledger.movements import queries
from ledger.seasons import queries as seasons

DESK = "desk"

# A million takes of this size still add up within 64 bits, so that no slip can stop the judge.
AMOUNT_MAX = 2**63 // 1_000_000


class NothingTaken(LedgerError):
    """A slip names no amount above zero."""

    code: ClassVar[str] = "movements.nothing_taken"
    message: ClassVar[str] = (
        "Found {found} on slip {slip}; accepted are amounts that make one base unit or more."
    )


class TakenTooMuch(LedgerError):
    """A slip names an amount that no commons can spare."""

    code: ClassVar[str] = "movements.taken_too_much"
    message: ClassVar[str] = "Found {found} on slip {slip}; accepted are at most {most:,} {base}."


class HandedInBeforeTaken(LedgerError):
    """A slip was handed in before the take that it tells of."""

    code: ClassVar[str] = "movements.handed_in_before_taken"
    message: ClassVar[str] = (
        "Found slip {slip} handed in at {handed_in}; accepted is the time of the take, {taken_at},"
        " or later."
    )


class NoSuchDuty(LedgerError):
    """Work is given towards a duty that the book does not lay on anybody."""

    code: ClassVar[str] = "movements.no_such_duty"
    message: ClassVar[str] = (
        "Found work under clause {found!r}; accepted are the duties of work in force on {day}:"
        " {accepted}."
    )


class NotPayable(LedgerError):
    """Money is given for a duty that money cannot stand for."""

    code: ClassVar[str] = "movements.not_payable"
    message: ClassVar[str] = (
        "Found money for clause {found!r}; accepted are the duties of work that can be paid off on"
        " {day}: {accepted}."
    )


class NoSuchSeason(LedgerError):
    """Work is recorded before any season was opened."""

    code: ClassVar[str] = "movements.no_such_season"
    message: ClassVar[str] = (
        "Found a gift of {day} and no season; accepted are gifts once a season was opened."
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """One resource on a slip: the measure as given, with its UCUM unit."""

    resource: str
    zone: str
    given: Decimal
    unit: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Slip:
    """One landing slip: who took what, where and when, and when the slip was handed in.

    The same ``key`` from the same ``device`` is the same slip for ever; at the secretary's desk the
    slip's own number is the key.
    """

    slip: str
    member: int
    taken_at: datetime
    handed_in: datetime
    draw_point: str
    lines: tuple[Line, ...]
    note: str = ""
    device: str = DESK
    key: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Kept:
    """What the checks of a batch look up, read once, under the lock on the head."""

    commons: commons_queries.CommonsRecord
    members: Mapping[int, commons_queries.MemberRecord]
    resources: Mapping[str, commons_queries.ResourceRecord]
    zones: Mapping[str, commons_queries.ZoneRecord]
    seasons: Mapping[str, seasons.SeasonRecord]


def kept(*, commons_id: int) -> Kept:
    """Return what a commons keeps, for the checks of one batch."""
    return Kept(
        commons=commons_queries.commons(commons_id=commons_id),
        members=commons_queries.members(commons_id=commons_id),
        resources=commons_queries.resources(commons_id=commons_id),
        zones=commons_queries.zones(commons_id=commons_id),
        seasons=seasons.seasons(commons_id=commons_id),
    )


def base_amount(*, given: Decimal, unit: str, base: str) -> int:
    """Return a measure as given in whole base units, rounded half up once.

    :raises governance.quantities.UnusableNumber: if the number is not finite, or far too long.
    :raises governance.quantities.UnknownUnit: if the unit is not in the table.
    :raises governance.quantities.UnitMismatch: if the unit does not convert to the base.
    """
    exact = quantities.converted(quantities.exact(given), from_unit=unit, to_unit=base)
    return quantities.rounded(exact, quantities.Rounding.HALF_UP)


def withdrawal(*, kept: Kept, slip: Slip, key: str | None, also: Iterable[Posting] = ()) -> Draft:
    """Return the entry that a slip makes.

    :param also: postings that go with it, see :func:`told_apart`.
    :raises ledger.commons.operations.UnknownMember: if nobody has the slip's member number.
    :raises ledger.commons.queries.UnknownResource: if a resource is not kept.
    :raises ledger.commons.operations.UnknownZone: if a zone is not a part of its resource.
    :raises ledger.commons.queries.InstantWithoutOffset: if an instant has no offset.
    :raises HandedInBeforeTaken: if it was handed in before the take.
    :raises NothingTaken: if there is no line, or an amount is less than one base unit.
    :raises TakenTooMuch: if an amount is beyond what any commons can spare.
    :raises governance.quantities.UnusableNumber: if a number is not finite, or far too long.
    :raises governance.quantities.UnitMismatch: if a unit cannot convert to the resource's base.
    """
    if slip.member not in kept.members:
        raise commons.UnknownMember(found=slip.member)
    if not slip.lines:
        raise NothingTaken(slip=slip.slip, found="no line")
    day = _day_taken(kept, slip)
    amounts = [(line, _line_amount(kept, slip, line)) for line in slip.lines]
    lines: list[Fact] = [
        {
            "resource": line.resource,
            "zone": line.zone,
            "given": format(line.given, "f"),
            "unit": line.unit,
            "amount": amount,
        }
        for line, amount in amounts
    ]
    postings = [
        posting
        for line, amount in amounts
        for posting in _taken(kept, slip.member, line.resource, day, amount)
    ]
    return Draft(
        kind=queries.WITHDRAWAL,
        occurred_at=slip.taken_at,
        day=day,
        subject=slip.member,
        facts={
            "slip": slip.slip,
            "draw_point": slip.draw_point,
            "handed_in": slip.handed_in.astimezone(UTC).isoformat(),
            "lines": lines,
        },
        postings=(*postings, *also),
        texts={"note": slip.note} if slip.note else {},
        device=slip.device,
        key=key,
    )


def told_apart(*, kept: Kept, undone: EntryRecord) -> Iterator[Posting]:
    """Yield what keeps a closed season's accounts as reported where an entry of it is undone.

    A reversal posts the very opposite, so to those accounts too. What it takes from them is given
    back to them here, and taken from the place beside the season instead.
    """
    assert undone.subject is not None, "a withdrawal is about a member"
    beside = {
        name(season=code, member=undone.subject): name(
            season=seasons.after_close(season=code), member=undone.subject
        )
        for code, season in kept.seasons.items()
        if season.closed
        for name in (seasons.left_account, seasons.taken_account)
    }
    for posting in undone.postings:
        if posting.account in beside:
            yield posting
            yield Posting(
                account=beside[posting.account],
                resource=posting.resource,
                unit=posting.unit,
                amount=-posting.amount,
            )


def duty_season(*, commons_id: int, day: date) -> DateRange:
    """Return the season window that a gift on a day counts for.

    :raises NoSuchSeason: if no season has been opened.
    """
    window = queries.duty_season(commons_id=commons_id, day=day)
    if window is None:
        raise NoSuchSeason(day=day)
    return window


def check_duty(*, commons_id: int, clause: str, day: date) -> None:
    """Pass if a clause is a duty of work in force on a day.

    :raises NoSuchDuty: if it is not.
    """
    known = [duty.head.id for duty in bylaws.work_duties(commons_id=commons_id, day=day)]
    if clause not in known:
        raise NoSuchDuty(found=clause, day=day, accepted=", ".join(known) or "none")


def minutes_bought(*, commons_id: int, clause: str, day: date, amount: int) -> int:
    """Return the whole minutes of a duty that a sum of the smallest coin stands for on a day.

    :raises NotPayable: if no duty of this name can be paid off.
    """
    payable = {
        duty.head.id: duty
        for duty in bylaws.work_duties(commons_id=commons_id, day=day)
        if duty.instead is not None
    }
    if clause not in payable:
        raise NotPayable(found=clause, day=day, accepted=", ".join(payable) or "none")
    return duties.minutes_of(clause=payable[clause], paid=amount)


def moved(
    source: str, target: str, *, resource: str, unit: str, amount: int
) -> tuple[Posting, ...]:
    """Return the postings that move an amount from one account to another; none for nought."""
    if not amount:
        return ()
    return (
        Posting(account=source, resource=resource, unit=unit, amount=-amount),
        Posting(account=target, resource=resource, unit=unit, amount=amount),
    )


def _day_taken(kept: Kept, slip: Slip) -> date:
    day = kept.commons.day_of(slip.taken_at)
    kept.commons.day_of(slip.handed_in)
    if slip.handed_in < slip.taken_at:
        raise HandedInBeforeTaken(
            slip=slip.slip,
            handed_in=slip.handed_in.isoformat(),
            taken_at=slip.taken_at.isoformat(),
        )
    return day


def _line_amount(kept: Kept, slip: Slip, line: Line) -> int:
    resource = kept.resources.get(line.resource)
    if resource is None:
        raise commons_queries.UnknownResource(
            found=line.resource, accepted=", ".join(kept.resources)
        )
    zone = kept.zones.get(line.zone)
    if zone is None or zone.resource != line.resource:
        mine = [each.code for each in kept.zones.values() if each.resource == line.resource]
        raise commons.UnknownZone(
            found=line.zone, resource=line.resource, accepted=", ".join(mine) or "none"
        )
    amount = base_amount(given=line.given, unit=line.unit, base=resource.base)
    found = f"{line.given} {line.unit} of {line.resource}"
    if amount <= 0:
        raise NothingTaken(slip=slip.slip, found=found)
    if amount > AMOUNT_MAX:
        raise TakenTooMuch(slip=slip.slip, found=found, most=AMOUNT_MAX, base=resource.base)
    return amount


def _taken(kept: Kept, member: int, resource: str, day: date, amount: int) -> tuple[Posting, ...]:
    place = _place(kept, resource, day)
    return moved(
        seasons.left_account(season=place, member=member),
        seasons.taken_account(season=place, member=member),
        resource=resource,
        unit=kept.resources[resource].base,
        amount=amount,
    )


def _place(kept: Kept, resource: str, day: date) -> str:
    """Return the season, or the place beside the seasons, that a take on a day is posted to.

    What comes in after the close keeps its true day but is posted apart, so that a closed season's
    accounts stay as they were reported.
    """
    season = seasons.holding(opened=kept.seasons, resource=resource, day=day)
    if season is None:
        return seasons.off_season(resource=resource)
    return seasons.after_close(season=season.code) if season.closed else season.code
