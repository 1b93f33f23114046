"""The tables of the commons, held against the entries that they stand beside."""

from collections.abc import Iterable, Iterator
from datetime import date
from fractions import Fraction
from typing import Any

from governance.periods import OPEN_END
from ledger.commons import models, queries
from ledger.journal import comparing
from ledger.journal.comparing import Row
from ledger.journal.leaves import EntryRecord
from ledger.journal.verification import Problem

_KINDS = ("commons_founded", "member_admitted", "role_given", queries.SUSPENSION, queries.ORDER)
# The commons, its resources and its zones stand beside the entry that founds it.
_FOUNDING = 1


def problems(*, commons_id: int) -> tuple[Problem, ...]:
    """Return where commons, members and the dated facts about them are not as their entries say.

    Names of members and of what they draw with stand in no entry, and are not compared.

    :raises ledger.journal.queries.JournalNotOpen: if the commons has no journal.
    """
    return comparing.against_entries(
        commons_id=commons_id,
        kinds=_KINDS,
        kept=lambda: (*_kept_founding(commons_id), *_kept_members(commons_id)),
        told=_told,
    )


def _kept_founding(commons_id: int) -> Iterator[Row]:
    for commons in models.Commons.objects.filter(pk=commons_id):
        yield _commons(
            _FOUNDING,
            name=commons.name,
            zone=commons.zone,
            money=commons.money,
            demo=commons.is_demo,
        )
    for resource in models.Resource.objects.filter(commons_id=commons_id):
        yield _resource(
            _FOUNDING, resource.code, name=resource.name, unit=resource.unit, base=resource.base
        )
    for zone in models.Zone.objects.filter(commons_id=commons_id).select_related("resource"):
        yield _zone(_FOUNDING, zone.code, resource=zone.resource.code, name=zone.name)


def _kept_members(commons_id: int) -> Iterator[Row]:
    for row in models.Member.objects.filter(commons_id=commons_id):
        yield _member(row.entry_number, member=row.number, household=row.household)
    for held in models.MemberClass.objects.filter(commons_id=commons_id):
        yield _class(
            held.entry_number, member=held.member, membership_class=held.value, **_days(held)
        )
    for share in models.Share.objects.filter(commons_id=commons_id):
        yield _share(
            share.entry_number,
            share.resource,
            member=share.member,
            numerator=share.numerator,
            denominator=share.denominator,
            **_days(share),
        )
    for role in models.RoleHeld.objects.filter(commons_id=commons_id):
        yield _role(role.entry_number, member=role.member, role=role.role, **_days(role))
    for ordered in models.Suspension.objects.filter(commons_id=commons_id):
        yield _suspension(
            ordered.entry_number, member=ordered.member, clause=ordered.clause, **_days(ordered)
        )
    for order in models.OutsideOrder.objects.filter(commons_id=commons_id):
        yield _order(
            order.entry_number,
            resource=order.resource,
            zones=order.zones,
            authority=order.authority,
            **_days(order),
        )


def _told(entry: EntryRecord) -> Iterable[Row]:
    match entry.kind:
        case "commons_founded":
            return _told_founding(entry)
        case "member_admitted":
            return _told_admission(entry)
        case "role_given":
            facts = {"member": entry.subject, "role": entry.facts["role"]}
            return (_role(entry.number, **facts, **_told_days(entry)),)
        case queries.SUSPENSION:
            facts = {"member": entry.subject, "clause": entry.facts["clause"]}
            return (_suspension(entry.number, **facts, **_told_days(entry)),)
        case _:
            facts = {name: entry.facts[name] for name in ("resource", "zones")}
            # The authority stands among the texts, from which it can be erased.
            named = {name: entry.texts[name] for name in ("authority",) if name in entry.texts}
            return (_order(entry.number, **facts, **named, **_told_days(entry)),)


def _told_founding(entry: EntryRecord) -> Iterator[Row]:
    facts = entry.facts
    named = ("name", "zone", "money", "demo")
    yield _commons(entry.number, **{name: facts[name] for name in named})
    for resource in facts["resources"]:
        code = resource["code"]
        measured = {name: resource[name] for name in ("name", "unit", "base")}
        yield _resource(entry.number, code, **measured)
        for zone in resource["zones"]:
            yield _zone(entry.number, zone["code"], resource=code, name=zone["name"])


def _told_admission(entry: EntryRecord) -> Iterator[Row]:
    number, member, facts = entry.number, entry.subject, entry.facts
    days = {"first_day": date.fromisoformat(facts["from"]), "until_day": OPEN_END}
    yield _member(number, member=member, household=facts["household"])
    yield _class(number, member=member, membership_class=facts["class"], **days)
    for resource, measure in facts["shares"].items():
        share = Fraction(measure)
        yield _share(
            number,
            resource,
            member=member,
            numerator=share.numerator,
            denominator=share.denominator,
            **days,
        )


def _told_days(entry: EntryRecord) -> dict[str, date]:
    return {
        "first_day": date.fromisoformat(entry.facts["from"]),
        "until_day": date.fromisoformat(entry.facts["until"]),
    }


def _days(row: models.DatedRow) -> dict[str, date]:
    return {"first_day": row.first_day, "until_day": row.until_day}


def _commons(entry: int, **fields: Any) -> Row:
    return Row(table="commons", entry=entry, name="the commons", fields=fields)


def _resource(entry: int, code: str, **fields: Any) -> Row:
    return Row(table="resources", entry=entry, name=f"the resource {code}", fields=fields)


def _zone(entry: int, code: str, **fields: Any) -> Row:
    return Row(table="zones", entry=entry, name=f"the zone {code}", fields=fields)


def _member(entry: int, **fields: Any) -> Row:
    return Row(table="members", entry=entry, name="the member", fields=fields)


def _class(entry: int, **fields: Any) -> Row:
    return Row(table="classes", entry=entry, name="the member's class", fields=fields)


def _share(entry: int, resource: str, **fields: Any) -> Row:
    return Row(table="shares", entry=entry, name=f"the share in {resource}", fields=fields)


def _role(entry: int, **fields: Any) -> Row:
    return Row(table="offices", entry=entry, name="the office", fields=fields)


def _suspension(entry: int, **fields: Any) -> Row:
    return Row(table="suspensions", entry=entry, name="the suspension", fields=fields)


def _order(entry: int, **fields: Any) -> Row:
    return Row(table="outside orders", entry=entry, name="the order", fields=fields)
