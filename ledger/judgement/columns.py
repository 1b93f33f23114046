"""Findings between the rows that keep them and the records that the rules make."""

from typing import Any

from governance.compliance.findings import Finding, Key, SubjectKind
from governance.periods import DateRange
from ledger.judgement import models


def finding(row: models.FindingVersion) -> Finding:
    """Return the finding that a row keeps."""
    return Finding(
        key=Key(
            clause=row.clause,
            subject_kind=SubjectKind(row.subject_kind),
            subject=row.subject,
            resource=row.resource,
            window=DateRange(first=row.window_first, until=row.window_until),
        ),
        edition=row.edition,
        or_else=row.or_else or None,
        base=row.base,
        total=row.total,
        limit=row.limit,
        breach=row.breach,
        overuse=row.overuse,
        entries=tuple(row.entries),
        working=tuple(row.working),
        inputs=row.inputs,
    )


def fields(found: Finding) -> dict[str, Any]:
    """Return the values that a row keeps of a finding."""
    return {
        "clause": found.key.clause,
        "subject_kind": found.key.subject_kind.value,
        "subject": found.key.subject,
        "resource": found.key.resource,
        "window_first": found.key.window.first,
        "window_until": found.key.window.until,
        "edition": found.edition,
        "or_else": found.or_else or "",
        "base": found.base,
        "total": found.total,
        "limit": found.limit,
        "breach": found.breach,
        "overuse": found.overuse,
        "entries": list(found.entries),
        "working": list(found.working),
        "inputs": found.inputs,
    }
