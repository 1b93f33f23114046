"""What the API answers about the commons, findings, cases and seasons, and how it is written."""

from typing import Any

from rest_framework import serializers

from ledger.api import answers, fields
from ledger.api.answers import Facts, Hash, HeadOut, Shape, Units, bounded, count, many
from ledger.identity.queries import TokenRecord
from ledger.judgement.queries import FindingRecord

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


def token(record: TokenRecord) -> dict[str, Any]:
    """Return a token as its owner may see it."""
    return {
        "number": record.token_id,
        "device": record.device,
        "scopes": sorted(record.scopes),
        "made_at": record.made_at.isoformat(),
        "expires_at": record.expires_at.isoformat(),
    }
