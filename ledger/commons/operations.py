"""The writers of the commons: each act is an entry, with its row beside it."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from fractions import Fraction
from typing import Any, ClassVar

from governance import quantities
from governance.periods import OPEN_END, DateRange
from ledger.commons import models, queries
from ledger.foundation import transactions
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal.leaves import Draft, Fact, Posting, Receipt

ROLES = ("secretary", "monitor", "board", "auditor")


class UnknownMember(LedgerError):
    """No member has this number."""

    code: ClassVar[str] = "commons.unknown_member"
    message: ClassVar[str] = "Found the member number {found}; the commons has none such."


class UnknownZone(LedgerError):
    """The resource has no such zone."""

    code: ClassVar[str] = "commons.unknown_zone"
    message: ClassVar[str] = "Found the zone {found!r} of {resource}; accepted are {accepted}."


class UnknownRole(LedgerError):
    """No office has this name."""

    code: ClassVar[str] = "commons.unknown_role"
    message: ClassVar[str] = "Found the role {found!r}; accepted are {accepted}."


class AlreadyKept(LedgerError):
    """The commons has this member, resource or zone already."""

    code: ClassVar[str] = "commons.already_kept"
    message: ClassVar[str] = "The commons has the {what} {found} already."


@dataclass(frozen=True, slots=True, kw_only=True)
class NewResource:
    """A resource to be kept, with its zones as (code, name)."""

    code: str
    name: str
    unit: str
    base: str
    zones: tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Admission:
    """A member to be admitted: class and shares hold from ``admitted_on`` until further notice."""

    number: int
    name: str
    household: int
    membership_class: str
    shares: tuple[tuple[str, Fraction], ...]
    draw_point: str
    admitted_on: date


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
    """Append one entry that happens as it is written, on the commons' own day."""
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

    :raises AlreadyKept: if a commons has this short name.
    :raises governance.quantities.UnknownUnit: if a unit or the money is not in the tables.
    :raises governance.quantities.UnitMismatch: if a base unit does not measure what its unit does.
    """
    if models.Commons.objects.filter(slug=slug).exists():
        raise AlreadyKept(what="name", found=slug)
    quantities.currency_places(money)
    for resource in resources:
        quantities.converted(Fraction(1), from_unit=resource.unit, to_unit=resource.base)
    commons = models.Commons.objects.create(
        slug=slug, name=name, zone=zone, money=money, is_demo=is_demo
    )
    journal.open_journal(commons_id=commons.pk, clock=hand.clock, chance=hand.chance)
    for resource in resources:
        row = models.Resource.objects.create(
            commons=commons,
            code=resource.code,
            name=resource.name,
            unit=resource.unit,
            base=resource.base,
        )
        models.Zone.objects.bulk_create(
            models.Zone(commons=commons, resource=row, code=code, name=zone_name)
            for code, zone_name in resource.zones
        )
    facts: dict[str, Fact] = {
        "zone": zone,
        "money": money,
        "resources": [
            {
                "code": resource.code,
                "unit": resource.unit,
                "base": resource.base,
                "zones": [code for code, _ in resource.zones],
            }
            for resource in resources
        ],
    }
    enter(commons_id=commons.pk, kind="commons_founded", facts=facts, hand=hand)
    return commons.pk


@transactions.required
def admit(*, commons_id: int, admissions: Sequence[Admission], hand: Hand) -> tuple[Receipt, ...]:
    """Admit members, each with a class and shares; one entry for each. Names stay outside it.

    :raises AlreadyKept: if a number is taken; numbers are never used again.
    :raises ledger.commons.queries.UnknownResource: if a share is in a resource not kept.
    """
    kept = queries.resources(commons_id=commons_id)
    taken = queries.members(commons_id=commons_id)
    for admission in admissions:
        if admission.number in taken:
            raise AlreadyKept(what="member number", found=admission.number)
        for resource, _ in admission.shares:
            if resource not in kept:
                raise queries.UnknownResource(found=resource, accepted=", ".join(kept))
    receipts = journal.append(
        commons_id=commons_id,
        drafts=[_admission_draft(commons_id, admission, hand) for admission in admissions],
        by=hand.by,
        clock=hand.clock,
        chance=hand.chance,
    )
    numbered = list(zip(admissions, (receipt.number for receipt in receipts), strict=True))
    models.Member.objects.bulk_create(
        models.Member(
            commons_id=commons_id,
            number=admission.number,
            name=admission.name,
            household=admission.household,
            draw_point=admission.draw_point,
            entry_number=number,
        )
        for admission, number in numbered
    )
    models.MemberClass.objects.bulk_create(
        models.MemberClass(
            member=admission.number,
            value=admission.membership_class,
            **_since(commons_id, admission.admitted_on, number),
        )
        for admission, number in numbered
    )
    models.Share.objects.bulk_create(
        models.Share(
            member=admission.number,
            resource=resource,
            numerator=measure.numerator,
            denominator=measure.denominator,
            **_since(commons_id, admission.admitted_on, number),
        )
        for admission, number in numbered
        for resource, measure in admission.shares
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
        member=member, role=role, **_dated(commons_id, during, receipt.number)
    )
    return receipt


@transactions.required
def suspend(
    *, commons_id: int, member: int, clause: str, during: DateRange, reason: str, hand: Hand
) -> Receipt:
    """Record that a member may not take on some days, and which ladder orders it.

    :raises UnknownMember: if nobody has the number.
    """
    check_member(commons_id=commons_id, member=member)
    receipt = enter(
        commons_id=commons_id,
        kind="suspension",
        facts={"clause": clause, **_range_facts(during)},
        texts={"reason": reason},
        subject=member,
        hand=hand,
    )
    models.Suspension.objects.create(
        member=member, clause=clause, **_dated(commons_id, during, receipt.number)
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
    :raises UnknownZone: if a zone is not a part of the resource.
    """
    queries.resource(commons_id=commons_id, code=resource)
    for zone in zones:
        check_zone(commons_id=commons_id, resource=resource, zone=zone)
    receipt = enter(
        commons_id=commons_id,
        kind="outside_order",
        facts={"resource": resource, "zones": list(zones), **_range_facts(during)},
        texts={"authority": authority, "notice": notice},
        hand=hand,
    )
    models.OutsideOrder.objects.create(
        authority=authority,
        resource=resource,
        zones=list(zones),
        notice=notice,
        **_dated(commons_id, during, receipt.number),
    )
    return receipt


def check_member(*, commons_id: int, member: int) -> None:
    """Pass if the commons has the member.

    :raises UnknownMember: if it has not.
    """
    if not models.Member.objects.filter(commons_id=commons_id, number=member).exists():
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
        raise UnknownZone(found=zone, resource=resource, accepted=", ".join(kept))


def _admission_draft(commons_id: int, admission: Admission, hand: Hand) -> Draft:
    now = hand.clock()
    return Draft(
        kind="member_admitted",
        occurred_at=now,
        day=queries.commons(commons_id=commons_id).day_of(now),
        subject=admission.number,
        facts={
            "household": admission.household,
            "class": admission.membership_class,
            "shares": {
                resource: f"{measure.numerator}/{measure.denominator}"
                for resource, measure in admission.shares
            },
            "from": admission.admitted_on.isoformat(),
        },
    )


def _range_facts(during: DateRange) -> dict[str, Any]:
    return {"from": during.first.isoformat(), "until": during.until.isoformat()}


def _dated(commons_id: int, during: DateRange, entry_number: int) -> dict[str, Any]:
    return {
        "commons_id": commons_id,
        "first_day": during.first,
        "until_day": during.until,
        "entry_number": entry_number,
    }


def _since(commons_id: int, first: date, entry_number: int) -> dict[str, Any]:
    return _dated(commons_id, DateRange(first=first, until=OPEN_END), entry_number)
