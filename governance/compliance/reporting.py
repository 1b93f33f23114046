"""The reporting duty: a slip is handed in within so many hours of the take."""

import numpy as np

from governance.bylaws import clauses
from governance.compliance import evidence, findings, ground, sentences

_MICROSECONDS_A_MINUTE = 60_000_000
_MINUTES_AN_HOUR = 60


def late(
    *,
    clause: clauses.ReportingDuty,
    book: clauses.Book,
    live: ground.Mask,
    laid: ground.Ground,
) -> tuple[findings.Finding, ...]:
    """Return one finding per member and day of takes whose slips came too late.

    Late slips of one day are one finding, of whatever resource; its total is the longest delay in
    minutes, rounded up. A slip handed in exactly at the last moment is in time.

    :param live: the days of the season on which this version of the clause is in force.
    """
    allowed = clause.within_hours * _MINUTES_AN_HOUR
    by_day: dict[tuple[int, int], list[evidence.Act]] = {}
    for takes in laid.takes:
        delay = takes.table.reported - takes.table.instant
        slow = delay > allowed * _MICROSECONDS_A_MINUTE
        slow &= takes.bound[clause.head.who] & live[takes.offset]
        for act in evidence.acts(table=takes.table, rows=np.flatnonzero(slow)):
            by_day.setdefault((act.member, act.day), []).append(act)
    return tuple(
        _finding(clause=clause, book=book, acts=tuple(sorted(acts)), allowed=allowed)
        for acts in by_day.values()
    )


def _delay(act: evidence.Act) -> int:
    """Return the minutes from the take to its slip, a begun one counted whole."""
    return -((act.instant - act.reported) // _MICROSECONDS_A_MINUTE)


def _finding(
    *,
    clause: clauses.ReportingDuty,
    book: clauses.Book,
    acts: tuple[evidence.Act, ...],
    allowed: int,
) -> findings.Finding:
    worst = max(acts, key=_delay)
    total = _delay(worst)
    beyond = total - allowed
    key = findings.Key(
        clause=clause.head.id,
        subject_kind=findings.SubjectKind.MEMBER,
        subject=worst.member,
        resource="",
        window=evidence.day_of(acts),
    )
    entries = evidence.entries(acts)
    return findings.Finding(
        key=key,
        edition=book.edition,
        or_else=clause.head.or_else,
        base="min",
        total=total,
        limit=allowed,
        breach=beyond,
        overuse=beyond,
        entries=entries,
        working=(
            f"{sentences.listed(entries)}: taken {sentences.when(key.window)},"
            f" handed in too late; the longest wait, of entry {worst.entry},"
            f" was {sentences.hours(total)}.",
            f"Allowed {sentences.hours(allowed)}; beyond it {sentences.hours(beyond)}.",
        ),
        inputs=evidence.digest(book=book, key=key, limit=allowed, rows=evidence.lines(acts)),
    )
