"""Behind the writers of the commons: what an admission is checked for, its draft, and its rows."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from fractions import Fraction
from typing import Any, ClassVar

from governance.periods import OPEN_END, DateRange
from ledger.commons import models, queries
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal.leaves import AMOUNT_MAX, Draft

NUMBER_MAX = 2**31 - 1
NAME_SIGNS, CLASS_SIGNS, DRAW_POINT_SIGNS = 200, 40, 120


class AlreadyKept(LedgerError):
    """The commons has this member, resource, zone or season already."""

    code: ClassVar[str] = "commons.already_kept"
    message: ClassVar[str] = "Found {found} again; accepted is every {what} once."


class UnusableText(LedgerError):
    """A text is empty, too long, or holds signs that no database keeps."""

    code: ClassVar[str] = "commons.unusable_text"
    message: ClassVar[str] = "Found {found!r} as {what}; accepted are {least} to {most} signs."


class UnusableMemberNumber(LedgerError):
    """A number cannot be a member's."""

    code: ClassVar[str] = "commons.unusable_member_number"
    message: ClassVar[str] = "Found the member number {found}; accepted are 1 to {most}."


class UnusableShare(LedgerError):
    """A share is not above zero, or its fraction does not fit the book."""

    code: ClassVar[str] = "commons.unusable_share"
    message: ClassVar[str] = (
        "Found the share {found} of member {member} in {resource}; accepted are fractions above"
        " zero whose parts fit 64 bits."
    )


class UnknownHousehold(LedgerError):
    """A household is not numbered by a member of the commons."""

    code: ClassVar[str] = "commons.unknown_household"
    message: ClassVar[str] = (
        "Found the household {found} for member {member}; accepted is the number of its first"
        " member."
    )


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
    """A member to be admitted: class and shares hold from ``admitted_on`` until further notice.

    ``household`` is the number of the household's first member.
    """

    number: int
    name: str
    household: int
    membership_class: str
    shares: tuple[tuple[str, Fraction], ...]
    draw_point: str
    admitted_on: date


def check_text(*, what: str, text: str, most: int, least: int = 1) -> None:
    """Pass if a text is neither too short nor too long, and can be stored.

    :raises UnusableText: if it is, or cannot.
    """
    storable = all(sign != "\x00" and not "\ud800" <= sign <= "\udfff" for sign in text)
    if not storable or not least <= len(text) <= most:
        raise UnusableText(what=what, found=text[:40], least=least, most=most)


def check_admissions(*, commons_id: int, admissions: Sequence[Admission]) -> None:
    """Pass if every one of some members can be admitted.

    :raises AlreadyKept: if a number is taken, or a member has two shares in a resource.
    :raises UnusableMemberNumber: if a number cannot be a member's.
    :raises UnknownHousehold: if a household is not numbered by a member.
    :raises UnusableShare: if a share is not above zero or does not fit.
    :raises UnusableText: if a name, a class or a draw point cannot be kept.
    :raises ledger.commons.queries.UnknownResource: if a share is in a resource not kept.
    """
    kept = queries.resources(commons_id=commons_id)
    taken = set(queries.members(commons_id=commons_id))
    for admission in admissions:
        if admission.number in taken:
            raise AlreadyKept(what="member number", found=f"member number {admission.number}")
        if not 1 <= admission.number <= NUMBER_MAX:
            raise UnusableMemberNumber(found=admission.number, most=NUMBER_MAX)
        taken.add(admission.number)
        _check_texts(admission)
        _check_shares(admission, kept)
    for admission in admissions:
        if admission.household not in taken:
            raise UnknownHousehold(found=admission.household, member=admission.number)


def admission_draft(*, commons: queries.CommonsRecord, admission: Admission, hand: Hand) -> Draft:
    """Return the entry that admits a member: numbers and codes, never the name."""
    now = hand.clock()
    return Draft(
        kind="member_admitted",
        occurred_at=now,
        day=commons.day_of(now),
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


def insert_commons(
    *,
    slug: str,
    name: str,
    zone: str,
    money: str,
    resources: Sequence[NewResource],
    is_demo: bool,
) -> int:
    """Insert a commons with its resources and zones, and return its id."""
    commons = models.Commons.objects.create(
        slug=slug, name=name, zone=zone, money=money, is_demo=is_demo
    )
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
    return commons.pk


def insert_members(*, commons_id: int, numbered: Sequence[tuple[Admission, int]]) -> None:
    """Insert members, classes and shares, each beside the number of the entry that admits it."""
    models.Member.objects.bulk_create(
        models.Member(
            commons_id=commons_id,
            number=admission.number,
            name=admission.name,
            household=admission.household,
            draw_point=admission.draw_point,
            entry_number=entry,
        )
        for admission, entry in numbered
    )
    models.MemberClass.objects.bulk_create(
        models.MemberClass(
            member=admission.number,
            value=admission.membership_class,
            **_since(commons_id, admission.admitted_on, entry),
        )
        for admission, entry in numbered
    )
    models.Share.objects.bulk_create(
        models.Share(
            member=admission.number,
            resource=resource,
            numerator=measure.numerator,
            denominator=measure.denominator,
            **_since(commons_id, admission.admitted_on, entry),
        )
        for admission, entry in numbered
        for resource, measure in admission.shares
    )


def dated(*, commons_id: int, during: DateRange, entry: int) -> dict[str, Any]:
    """Return what every dated row begins with."""
    return {
        "commons_id": commons_id,
        "first_day": during.first,
        "until_day": during.until,
        "entry_number": entry,
    }


def _since(commons_id: int, first: date, entry: int) -> dict[str, Any]:
    during = DateRange(first=first, until=OPEN_END)
    return dated(commons_id=commons_id, during=during, entry=entry)


def _check_texts(admission: Admission) -> None:
    who = f"of member {admission.number}"
    check_text(what=f"the name {who}", text=admission.name, most=NAME_SIGNS)
    check_text(what=f"the class {who}", text=admission.membership_class, most=CLASS_SIGNS)
    # The retired draw nothing, from nowhere.
    check_text(
        what=f"the draw point {who}", text=admission.draw_point, least=0, most=DRAW_POINT_SIGNS
    )


def _check_shares(admission: Admission, kept: Mapping[str, queries.ResourceRecord]) -> None:
    seen: set[str] = set()
    for resource, measure in admission.shares:
        if resource not in kept:
            raise queries.UnknownResource(found=resource, accepted=", ".join(kept))
        if resource in seen:
            raise AlreadyKept(
                what="resource of a member's shares",
                found=f"{resource} among the shares of member {admission.number}",
            )
        seen.add(resource)
        if measure <= 0 or max(measure.numerator, measure.denominator) > AMOUNT_MAX:
            raise UnusableShare(found=str(measure)[:40], member=admission.number, resource=resource)
