"""Findings and cases one by one, and the names of what texts call by a code."""

from governance.bylaws import clauses
from ledger.cases import queries as cases
from ledger.commons import queries as commons
from ledger.judgement import queries as judgement
from ledger.reports import figures
from ledger.reports.details import CaseDetail, FindingDetail
from ledger.reports.reported import Reported
from ledger.reports.use_figures import next_seasons

_READ_IN = {"min": "h"}


def findings(reported: Reported) -> tuple[FindingDetail, ...]:
    """Return every finding of the season, by number."""
    units = {
        code: kept.unit for code, kept in commons.resources(commons_id=reported.commons_id).items()
    }
    found = judgement.latest(commons_id=reported.commons_id, during=[reported.during]).values()
    return tuple(
        _finding(record, unit=units.get(record.finding.key.resource, ""))
        for record in sorted(found, key=lambda record: record.number)
    )


def _finding(record: judgement.FindingRecord, *, unit: str) -> FindingDetail:
    found, key = record.finding, record.finding.key
    return FindingDetail(
        number=record.number,
        clause=key.clause,
        subject_kind=key.subject_kind.value,
        subject=key.subject,
        first=key.window.first,
        last=key.window.last,
        base=found.base,
        # A late slip is about a resource or none, but its breach is a time.
        unit=_READ_IN.get(found.base) or unit or found.base,
        total=found.total,
        limit=found.limit,
        breach=found.breach,
        entries=found.entries,
        standing=record.standing,
    )


def cases_of(reported: Reported) -> tuple[CaseDetail, ...]:
    """Return every case of the season, by number."""
    titles = {
        clause.head.id: clause.head.title
        for clause in reported.book.clauses
        if isinstance(clause, clauses.SanctionLadder)
    }
    return tuple(
        _case(reported, case, titles.get(case.ladder, case.ladder))
        for case in cases.cases(commons_id=reported.commons_id)
        if reported.during.holds(case.finding.finding.key.window.first)
    )


def _case(reported: Reported, case: cases.CaseRecord, ladder: str) -> CaseDetail:
    so_far = case.so_far
    return CaseDetail(
        number=case.number,
        finding=case.finding.number,
        ladder=ladder,
        state=so_far.state.value.replace("_", " "),
        step=None if so_far.step is None else so_far.step + 1,
        measure=cases.measure(commons_id=reported.commons_id, case=case) or "",
        amount=so_far.amount_minor,
        told_on=so_far.told_on,
        decided_on=so_far.decided_on,
        final_on=so_far.final_on,
    )


def names(reported: Reported) -> tuple[figures.NameRow, ...]:
    """Return what zones, clauses and the seasons that follow are called, by code."""
    zones = commons.zones(commons_id=reported.commons_id).values()
    called = {zone.code: zone.name for zone in zones}
    called |= {
        after.code: f"the season from {after.during.first.isoformat()}"
        for _, after in next_seasons(reported)
    }
    called |= {clause.head.id: clause.head.title for clause in reported.book.clauses}
    return tuple(figures.NameRow(code=code, name=name) for code, name in sorted(called.items()))
