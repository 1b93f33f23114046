"""The findings as they stand, and the facts that they are made from."""

from collections.abc import Collection, Mapping
from dataclasses import dataclass
from datetime import date
from typing import ClassVar

from django.db.models import Max

from governance import facts
from governance.compliance import explain, judge
from governance.compliance.findings import Finding, Key, SubjectKind
from governance.periods import DateRange
from ledger.bylaws import queries as bylaws
from ledger.commons import queries as commons
from ledger.foundation.errors import LedgerError
from ledger.judgement import columns, models
from ledger.movements import queries as movements
from ledger.seasons import queries as seasons


class UnknownFinding(LedgerError):
    """The commons has no finding of this number."""

    code: ClassVar[str] = "judgement.unknown_finding"
    message: ClassVar[str] = "Found no finding {found}."


@dataclass(frozen=True, slots=True, kw_only=True)
class FindingRecord:
    """The last version of a finding; not standing means that it was withdrawn."""

    number: int
    version: int
    standing: bool
    finding: Finding
    judged_up_to: int
    judged_on: date


def _record(row: models.FindingVersion) -> FindingRecord:
    return FindingRecord(
        number=row.finding,
        version=row.version,
        standing=row.standing,
        finding=columns.finding(row),
        judged_up_to=row.judged_up_to,
        judged_on=row.judged_on,
    )


def latest(
    *,
    commons_id: int,
    up_to: int | None = None,
    during: Collection[DateRange] | None = None,
) -> Mapping[Key, FindingRecord]:
    """Return the last version of every finding by its key, as known up to an entry number.

    :param during: only those whose window begins in one of these ranges.
    """
    rows = models.FindingVersion.objects.filter(commons_id=commons_id)
    if up_to is not None:
        rows = rows.filter(judged_up_to__lte=up_to)
    if during is not None:
        rows = rows.filter(
            window_first__gte=min((each.first for each in during), default=date.max),
            window_first__lt=max((each.until for each in during), default=date.max),
        )
    records = (_record(row) for row in rows.order_by("finding", "version"))
    return {
        record.finding.key: record
        for record in records
        if during is None or any(each.holds(record.finding.key.window.first) for each in during)
    }


def last_number(*, commons_id: int) -> int:
    """Return the number of the newest finding; nought before the first."""
    rows = models.FindingVersion.objects.filter(commons_id=commons_id)
    found: int | None = rows.aggregate(last=Max("finding"))["last"]
    return found or 0


def by_number(*, commons_id: int, numbers: Collection[int]) -> Mapping[int, FindingRecord]:
    """Return the last version of some findings, by number."""
    rows = models.FindingVersion.objects.filter(commons_id=commons_id, finding__in=numbers)
    return {row.finding: _record(row) for row in rows.order_by("finding", "version")}


def version_facts(*, commons_id: int) -> dict[tuple[int, int], dict[str, object]]:
    """Return what each kept version of a finding, by (number, version), was made from."""
    names = ("clause", "edition", "subject", "inputs")
    rows = models.FindingVersion.objects.filter(commons_id=commons_id)
    return {
        (number, version): dict(zip(names, facts, strict=True))
        for number, version, *facts in rows.values_list("finding", "version", *names)
    }


def finding(*, commons_id: int, number: int, version: int | None = None) -> FindingRecord:
    """Return a finding by number: one version of it, or the last."""
    rows = models.FindingVersion.objects.filter(commons_id=commons_id, finding=number)
    if version is not None:
        rows = rows.filter(version=version)
    row = rows.order_by("-version").first()
    assert row is not None, "findings are named by those who read them"
    return _record(row)


def numbers_about(*, commons_id: int, members: Collection[int]) -> frozenset[int]:
    """Return the numbers of the findings about some members or the households named after them."""
    rows = models.FindingVersion.objects.filter(
        commons_id=commons_id,
        subject_kind__in=[kind.value for kind in SubjectKind],
        subject__in=members,
    )
    return frozenset(rows.values_list("finding", flat=True))


def judged_up_to(*, commons_id: int) -> int:
    """Return the number of the last entry that the judge has read."""
    cursor = models.Cursor.objects.filter(commons_id=commons_id).first()
    return cursor.judged_up_to if cursor is not None else 0


def season_facts(
    *,
    commons_id: int,
    during: DateRange,
    up_to: int | None = None,
    members: Collection[int] | None = None,
) -> facts.SeasonFacts:
    """Return what the judge reads of the seasons that share a window, and of no other season.

    As known up to an entry number, and of some members alone where they are given.
    """
    mine = [
        season
        for season in seasons.seasons(commons_id=commons_id).values()
        if season.during == during
    ]
    resources = {season.resource for season in mine}
    allotments = {
        (season.resource, member): amount
        for season in mine
        for member, amount in seasons.allotments(
            commons_id=commons_id, season=season.code, up_to=up_to
        ).items()
    }
    withdrawals = movements.withdrawals(
        commons_id=commons_id, during=during, up_to=up_to, members=members
    )
    return facts.SeasonFacts(
        season=during,
        roster=commons.roster(commons_id=commons_id, up_to=up_to),
        withdrawals=tuple(each for each in withdrawals if each.resource in resources),
        work=movements.work(commons_id=commons_id, during=during, up_to=up_to, members=members),
        money=movements.money_instead(
            commons_id=commons_id, during=during, up_to=up_to, members=members
        ),
        orders=commons.orders(commons_id=commons_id, up_to=up_to),
        allotments=allotments,
    )


def judged(
    *,
    commons_id: int,
    during: DateRange,
    as_of: date,
    up_to: int | None = None,
    members: frozenset[int] | None = None,
) -> tuple[Finding, ...]:
    """Return what the judge finds in a window, without recording it."""
    return judge.judge(
        editions=bylaws.adopted(commons_id=commons_id, up_to=up_to),
        facts=season_facts(commons_id=commons_id, during=during, up_to=up_to, members=members),
        as_of=as_of,
        members=members,
    )


def standing_about(*, commons_id: int, members: Collection[int]) -> tuple[FindingRecord, ...]:
    """Return the findings that stand about some members or the households named after them."""
    numbers = numbers_about(commons_id=commons_id, members=members)
    found = by_number(commons_id=commons_id, numbers=numbers).values()
    return tuple(record for record in found if record.standing)


def explained(*, commons_id: int, number: int) -> tuple[str, ...]:
    """Return a finding opened in words, down to entries and clause.

    :raises UnknownFinding: if there is none of this number.
    """
    if not by_number(commons_id=commons_id, numbers=(number,)):
        raise UnknownFinding(found=number)
    record = finding(commons_id=commons_id, number=number)
    editions = bylaws.adopted(commons_id=commons_id).books
    book = next(book for book in editions if book.edition == record.finding.edition)
    return explain.explain(finding=record.finding, book=book)
