"""What the API answers about the commons, findings, cases and seasons, and how it is written."""

from typing import Any

from rest_framework import serializers

from ledger.api import answers, fields
from ledger.api.answers import Facts, Hash, HeadOut, Shape, Units, bounded, count, many
from ledger.identity.queries import TokenRecord
from ledger.judgement.queries import FindingRecord
from ledger.reports.standing import Standing

LIST_MAX = 1_000_000
NUMBER = answers.ENTRY_NUMBER


class ResourceOut(Shape):
    """A resource: the unit that people read, and the base unit that is counted."""

    code = bounded(40)
    name = bounded(120)
    unit = bounded(20)
    base = bounded(20)


class ZoneOut(Shape):
    """A part of a resource."""

    code = bounded(40)
    name = bounded(120)
    resource = bounded(40)


class CommonsOut(Shape):
    """The commons."""

    commons = bounded(60)
    name = bounded(200)
    zone = bounded(60)
    money = bounded(3)
    is_demo = serializers.BooleanField()
    member = count()
    offices = many(bounded(20), 10)
    resources = many(ResourceOut(), 1000)
    zones = many(ZoneOut(), 10_000)
    head = HeadOut()


class PrefixOut(Shape):
    """A consistency proof."""

    old = count()
    new = count()
    path = many(Hash(), 128)


class MemberOut(Shape):
    """A member; the name is empty for whoever may not see it."""

    number = count()
    household = count()
    draw_point = bounded(120)
    name = bounded(200)


class MembersOut(Shape):
    """The members."""

    members = many(MemberOut(), LIST_MAX)


class FindingOut(Shape):
    """A breach as computed; it accuses nobody."""

    number = count()
    version = count()
    standing = serializers.BooleanField()
    clause = bounded(80)
    edition = count()
    about = bounded(20)
    subject = count()
    resource = bounded(40)
    first = serializers.DateField()
    last = serializers.DateField()
    unit = bounded(20)
    total = Units()
    limit = Units()
    breach = Units()
    overuse = Units()
    entries = many(count(), LIST_MAX)
    working = many(bounded(10_000), 1000)
    reasons = serializers.ListField(child=bounded(10_000), required=False, max_length=1000)


class SeasonStandingOut(Shape):
    """A member's part of a season, in base units; ``sentence`` says it in words."""

    season = bounded(40)
    resource = bounded(40)
    unit = bounded(20)
    first = serializers.DateField()
    last = serializers.DateField()
    current = serializers.BooleanField()
    allotted = Units()
    taken = Units()
    left = Units()
    sentence = bounded(1000)


class DutyOut(Shape):
    """Work that a clause asks of a member for a season, in minutes."""

    clause = bounded(80)
    title = bounded(1000)
    owed = Units()
    worked = Units()
    bought = Units()


class DueOut(Shape):
    """Money that a member was charged with, in the smallest coin."""

    kind = bounded(40)
    owed = Units()
    paid = Units()


class ReasonOut(Shape):
    """A finding about a member's household, opened in words, and the open case on it."""

    finding = count()
    clause = bounded(80)
    entries = many(count(), LIST_MAX)
    lines = many(bounded(10_000), 1000)
    case = count(allow_null=True)
    state = bounded(40)


class OrderOut(Shape):
    """An outside order in force: it stands above every clause."""

    entry = count()
    authority = bounded(200)
    resource = bounded(40)
    zones = many(bounded(40), 10_000)
    first = serializers.DateField()
    notice = bounded(1_000_000)


class StandingOut(Shape):
    """Where a member stands, and why."""

    member = count()
    as_of = serializers.DateField()
    orders = many(OrderOut(), 10_000)
    suspended_until = serializers.DateField(allow_null=True)
    seasons = many(SeasonStandingOut(), 10_000)
    duties = many(DutyOut(), 1000)
    dues = many(DueOut(), 100)
    reasons = many(ReasonOut(), LIST_MAX)


class FindingsOut(Shape):
    """The findings that stand."""

    findings = many(FindingOut(), LIST_MAX)


class SeasonOut(Shape):
    """A season: the group's sums and your own, in base units."""

    season = bounded(40)
    resource = bounded(40)
    unit = bounded(20)
    first = serializers.DateField()
    last = serializers.DateField()
    closed = serializers.BooleanField()
    allowable = Units(allow_null=True)
    taken = Units()
    your_taken = Units()
    your_left = Units()


class SeasonsOut(Shape):
    """The seasons."""

    seasons = many(SeasonOut(), 10_000)


class AdviceOut(Shape):
    """An advice: what is proposed, in base units, and the whole record behind it."""

    season = bounded(40)
    entry = count()
    digest = bounded(64)
    proposed = Units()
    present = Units()
    advice = Facts()


class ReportOut(Shape):
    """The figures of a season report, and the digest that names them."""

    digest = bounded(64)
    figures = Facts()


class TokenOut(Shape):
    """A device's token."""

    number = count()
    device = bounded(60)
    scopes = many(bounded(20), 10)
    made_at = fields.Instant()
    expires_at = fields.Instant()
    last_used_on = serializers.DateField(allow_null=True)


class TokensOut(Shape):
    """Your tokens."""

    tokens = many(TokenOut(), 10_000)


class EventOut(Shape):
    """One move of a case."""

    move = bounded(40)
    role = bounded(20)
    member = count(allow_null=True)
    on = serializers.DateField()
    reason = bounded(20_000)
    entry = count()


class CaseOut(Shape):
    """A case as it stands."""

    number = count()
    state = bounded(40)
    finding = count()
    clause = bounded(80)
    ladder = bounded(80)
    concerns = many(count(), 1000)
    officer = count(allow_null=True)
    decided_on = serializers.DateField(allow_null=True)
    final_on = serializers.DateField(allow_null=True)
    amount = Units()
    money = bounded(3)
    events = many(EventOut(), 10_000)


class CasesOut(Shape):
    """Cases."""

    cases = many(CaseOut(), LIST_MAX)


def finding(record: FindingRecord) -> dict[str, Any]:
    """Return a finding as it is answered."""
    found = record.finding
    return {
        "number": record.number,
        "version": record.version,
        "standing": record.standing,
        "clause": found.key.clause,
        "edition": found.edition,
        "about": found.key.subject_kind.value,
        "subject": found.key.subject,
        "resource": found.key.resource,
        "first": found.key.window.first.isoformat(),
        "last": found.key.window.last.isoformat(),
        "unit": found.base,
        "total": str(found.total),
        "limit": str(found.limit),
        "breach": str(found.breach),
        "overuse": str(found.overuse),
        "entries": list(found.entries),
        "working": list(found.working),
    }


def standing(record: Standing) -> dict[str, Any]:
    """Return a standing as it is answered; whole amounts are texts."""
    until = record.suspended_until
    return {
        "member": record.member.number,
        "as_of": record.as_of.isoformat(),
        "orders": [
            {
                "entry": order.entry,
                "authority": order.authority,
                "resource": order.resource,
                "zones": list(order.zones),
                "first": order.first.isoformat(),
                "notice": order.notice,
            }
            for order in record.orders
        ],
        "suspended_until": None if until is None else until.isoformat(),
        "seasons": [
            {
                "season": each.season,
                "resource": each.resource,
                "unit": each.base,
                "first": each.first.isoformat(),
                "last": each.last.isoformat(),
                "current": each.current,
                "allotted": str(each.allotted),
                "taken": str(each.taken),
                "left": str(each.left),
                "sentence": each.sentence,
            }
            for each in record.seasons
        ],
        "duties": [
            {
                "clause": duty.clause,
                "title": duty.title,
                "owed": str(duty.owed),
                "worked": str(duty.worked),
                "bought": str(duty.bought),
            }
            for duty in record.duties
        ],
        "dues": [
            {"kind": due.kind, "owed": str(due.owed), "paid": str(due.paid)} for due in record.dues
        ],
        "reasons": [
            {
                "finding": reason.finding,
                "clause": reason.clause,
                "entries": list(reason.entries),
                "lines": list(reason.lines),
                "case": reason.case,
                "state": reason.state,
            }
            for reason in record.reasons
        ],
    }


def token(record: TokenRecord) -> dict[str, Any]:
    """Return a token as its owner may see it."""
    return {
        "number": record.token_id,
        "device": record.device,
        "scopes": sorted(record.scopes),
        "made_at": record.made_at.isoformat(),
        "expires_at": record.expires_at.isoformat(),
        "last_used_on": None if record.last_used_on is None else record.last_used_on.isoformat(),
    }
