"""The writers of the commons: each act is an entry, with its row beside it."""

import re
import zoneinfo
from collections.abc import Mapping, Sequence
from fractions import Fraction
from typing import Any, ClassVar

from governance import quantities
from governance.periods import DateRange
from ledger.commons import models, queries, writing
from ledger.commons.writing import Admission as Admission
from ledger.commons.writing import AlreadyKept as AlreadyKept
from ledger.commons.writing import NewResource as NewResource
from ledger.foundation import transactions
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal.leaves import Draft, Fact, Posting, Receipt

ROLES = ("secretary", "monitor", "board", "auditor")

_CODE_SIGNS = 40


class UnknownMember(LedgerError):
    """No member has this number."""

    code: ClassVar[str] = "commons.unknown_member"
    message: ClassVar[str] = (
        "Found the member number {found}; accepted are the numbers of those who were admitted."
    )


class UnknownZone(LedgerError):
    """The resource has no such zone."""

    code: ClassVar[str] = "commons.unknown_zone"
    message: ClassVar[str] = "Found the zone {found!r} of {resource}; accepted are {accepted}."


class UnknownRole(LedgerError):
    """No office has this name."""

    code: ClassVar[str] = "commons.unknown_role"
    message: ClassVar[str] = "Found the role {found!r}; accepted are {accepted}."


class UnknownTimeZone(LedgerError):
    """The time zone is not in the database of time zones."""

    code: ClassVar[str] = "commons.unknown_time_zone"
    message: ClassVar[str] = (
        "Found the time zone {found!r}; accepted are names such as 'Europe/Dublin'."
    )


class UnusableCode(LedgerError):
    """A code holds signs that could not stand in the name of an account."""

    code: ClassVar[str] = "commons.unusable_code"
    message: ClassVar[str] = (
        "Found {found!r} as the code of a {what}; accepted are 1 to {most} letters, digits, '-'"
        " and '_'."
    )


@transactions.required
def enter(
    *,
    commons_id: int,
    kind: str,
    facts: Mapping[str, Fact],
    hand: Hand,
    texts: Mapping[str, str] | None = None,
    subject: int | None = None,
    postings: tuple[Posting, ...] = (),
) -> Receipt:
    """Append one entry that happens as it is written, on the commons' own day.

    :raises ledger.commons.queries.UnknownCommons: if there is no such commons.
    """
    now = hand.clock()
    draft = Draft(
        kind=kind,
        occurred_at=now,
        day=queries.commons(commons_id=commons_id).day_of(now),
        facts=facts,
        texts=texts or {},
        subject=subject,
        postings=postings,
    )
    (receipt,) = journal.append(
        commons_id=commons_id,
        drafts=[draft],
        by=hand.by,
        clock=hand.clock,
        chance=hand.chance,
    )
    return receipt


@transactions.required
def found(
    *,
    slug: str,
    name: str,
    zone: str,
    money: str,
    resources: Sequence[NewResource],
    is_demo: bool,
    hand: Hand,
) -> int:
    """Found a commons with its resources and an empty journal; return its id.

    :raises AlreadyKept: if a commons has this short name, or a code stands twice.
    :raises UnusableCode: if the short name or a code holds other signs than a code may.
    :raises ledger.commons.writing.UnusableText: if a name is empty or too long.
    :raises UnknownTimeZone: if the time zone has no entry in the database of time zones.
    :raises governance.quantities.UnknownUnit: if a unit or the money is not in the tables.
    :raises governance.quantities.UnitMismatch: if a base unit does not measure what its unit does.
    """
    _check_founding(slug=slug, name=name, zone=zone, money=money, resources=resources)
    commons_id = writing.insert_commons(
        slug=slug, name=name, zone=zone, money=money, resources=resources, is_demo=is_demo
    )
    journal.open_journal(commons_id=commons_id, clock=hand.clock, chance=hand.chance)
    facts: dict[str, Fact] = {
        # The short name is this installation's own and not of the commons: it stays outside.
        "name": name,
        "demo": is_demo,
        "zone": zone,
        "money": money,
        "resources": [
            {
                "code": resource.code,
                "name": resource.name,
                "unit": resource.unit,
                "base": resource.base,
                "zones": [{"code": code, "name": called} for code, called in resource.zones],
            }
            for resource in resources
        ],
    }
    enter(commons_id=commons_id, kind="commons_founded", facts=facts, hand=hand)
    return commons_id


@transactions.required
def admit(*, commons_id: int, admissions: Sequence[Admission], hand: Hand) -> tuple[Receipt, ...]:
    """Admit members, each with a class and shares; one entry for each. Names stay outside it.

    :raises AlreadyKept: if a number is taken; numbers are never used again.
    :raises ledger.commons.writing.UnusableMemberNumber: if a number cannot be a member's.
    :raises ledger.commons.writing.UnknownHousehold: if a household is not a member's number.
    :raises ledger.commons.writing.UnusableShare: if a share is not above zero or does not fit.
    :raises ledger.commons.writing.UnusableText: if a name or a class is empty or too long.
    :raises ledger.commons.queries.UnknownResource: if a share is in a resource not kept.
    """
    journal.hold(commons_id=commons_id)
    writing.check_admissions(commons_id=commons_id, admissions=admissions)
    commons = queries.commons(commons_id=commons_id)
    receipts = journal.append(
        commons_id=commons_id,
        drafts=[
            writing.admission_draft(commons=commons, admission=admission, hand=hand)
            for admission in admissions
        ],
        by=hand.by,
        clock=hand.clock,
        chance=hand.chance,
    )
    numbers = (receipt.number for receipt in receipts)
    writing.insert_members(
        commons_id=commons_id, numbered=list(zip(admissions, numbers, strict=True))
    )
    return receipts


@transactions.required
def give_role(*, commons_id: int, member: int, role: str, during: DateRange, hand: Hand) -> Receipt:
    """Record that a member holds an office.

    :raises UnknownRole: if the office is not one of ``ROLES``.
    :raises UnknownMember: if nobody has the number.
    """
    if role not in ROLES:
        raise UnknownRole(found=role, accepted=", ".join(ROLES))
    check_member(commons_id=commons_id, member=member)
    receipt = enter(
        commons_id=commons_id,
        kind="role_given",
        facts={"role": role, **_range_facts(during)},
        subject=member,
        hand=hand,
    )
    models.RoleHeld.objects.create(
        member=member,
        role=role,
        **writing.dated(commons_id=commons_id, during=during, entry=receipt.number),
    )
    return receipt


@transactions.required
def suspend(
    *, commons_id: int, member: int, clause: str, during: DateRange, reason: str, hand: Hand
) -> Receipt:
    """Record that a member may not take on some days, and which ladder orders it.

    :raises UnknownMember: if nobody has the number.
    :raises ledger.commons.writing.UnusableText: if the clause id is empty or too long.
    """
    check_member(commons_id=commons_id, member=member)
    writing.check_text(what="a clause id", text=clause, most=80)
    receipt = enter(
        commons_id=commons_id,
        kind=queries.SUSPENSION,
        facts={"clause": clause, **_range_facts(during)},
        texts={"reason": reason},
        subject=member,
        hand=hand,
    )
    models.Suspension.objects.create(
        member=member,
        clause=clause,
        **writing.dated(commons_id=commons_id, during=during, entry=receipt.number),
    )
    return receipt


@transactions.required
def record_order(
    *,
    commons_id: int,
    authority: str,
    resource: str,
    zones: Sequence[str],
    during: DateRange,
    notice: str,
    hand: Hand,
) -> Receipt:
    """Record an outside authority's order that closes zones of a resource.

    :raises ledger.commons.queries.UnknownResource: if the resource is not kept.
    :raises UnknownZone: if a zone is not a part of the resource, or none is named.
    :raises ledger.commons.writing.UnusableText: if the authority's name is empty or too long.
    """
    queries.resource(commons_id=commons_id, code=resource)
    writing.check_text(what="the authority", text=authority, most=200)
    # An order that names no zone would close nothing, and nobody would notice.
    for zone in zones or ("",):
        check_zone(commons_id=commons_id, resource=resource, zone=zone)
    receipt = enter(
        commons_id=commons_id,
        kind=queries.ORDER,
        facts={"resource": resource, "zones": list(zones), **_range_facts(during)},
        texts={"authority": authority, "notice": notice},
        hand=hand,
    )
    models.OutsideOrder.objects.create(
        authority=authority,
        resource=resource,
        zones=list(zones),
        **writing.dated(commons_id=commons_id, during=during, entry=receipt.number),
    )
    return receipt


def check_member(*, commons_id: int, member: int) -> None:
    """Pass if the commons has the member.

    :raises UnknownMember: if it has not.
    """
    if not queries.is_member(commons_id=commons_id, number=member):
        raise UnknownMember(found=member)


def check_zone(*, commons_id: int, resource: str, zone: str) -> None:
    """Pass if the zone is a part of the resource.

    :raises UnknownZone: if it is not.
    """
    kept = [
        record.code
        for record in queries.zones(commons_id=commons_id).values()
        if record.resource == resource
    ]
    if zone not in kept:
        raise UnknownZone(found=zone, resource=resource, accepted=", ".join(kept) or "none")


def check_code(*, what: str, code: str, most: int = _CODE_SIGNS) -> None:
    """Pass if a code can stand in the name of an account.

    :raises UnusableCode: if it cannot.
    """
    if len(code) > most or not re.fullmatch(r"[A-Za-z0-9_-]+", code):
        raise UnusableCode(what=what, found=code[: most + 1], most=most)


def _check_founding(
    *, slug: str, name: str, zone: str, money: str, resources: Sequence[NewResource]
) -> None:
    check_code(what="commons", code=slug, most=60)
    writing.check_text(what="the name of the commons", text=name, most=writing.NAME_SIGNS)
    if slug in {record.slug for record in queries.every_commons()}:
        raise AlreadyKept(what="short name of a commons", found=f"the commons {slug}")
    try:
        zoneinfo.ZoneInfo(zone)
    except (zoneinfo.ZoneInfoNotFoundError, ValueError, OSError):
        # By the name's shape, Python refuses it in three ways.
        raise UnknownTimeZone(found=zone) from None
    quantities.currency_places(money)
    seen: set[tuple[str, str]] = set()
    for resource in resources:
        quantities.converted(Fraction(1), from_unit=resource.unit, to_unit=resource.base)
        zones = [("zone", *each) for each in resource.zones]
        for what, code, called in [("resource", resource.code, resource.name), *zones]:
            check_code(what=what, code=code)
            writing.check_text(what=f"the name of {what} {code}", text=called, most=120)
            if (what, code) in seen:
                raise AlreadyKept(what=f"code of a {what}", found=f"the {what} {code}")
            seen.add((what, code))


def _range_facts(during: DateRange) -> dict[str, Any]:
    return {"from": during.first.isoformat(), "until": during.until.isoformat()}
