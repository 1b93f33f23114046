"""Limits on a quantity: no holder takes more than so much in each day, week, month or season."""

import functools
import itertools
from fractions import Fraction

import numpy as np

from governance import facts, periods, quantities
from governance.bylaws import clauses
from governance.compliance import evidence, findings, ground, sentences

_SUBJECTS = {
    clauses.CountedBy.MEMBER: findings.SubjectKind.MEMBER,
    clauses.CountedBy.HOUSEHOLD: findings.SubjectKind.HOUSEHOLD,
}


def beyond(
    *,
    clause: clauses.QuantityLimit,
    book: clauses.Book,
    live: ground.Mask,
    laid: ground.Ground,
) -> tuple[findings.Finding, ...]:
    """Return one finding per holder and window whose total passes the limit and its tolerance.

    A window is cut to the season and judged if its first day is live. Exactly at the ceiling,
    which is the limit and its tolerance rounded down, is no breach.

    :param live: the days of the season on which this version of the clause is in force.
    :raises UnitMismatch: if the limit, the book and the takes are not in one measure.
    """
    return tuple(
        found
        for takes in laid.takes_of(clause.resource)
        for found in _of_takes(clause=clause, book=book, live=live, laid=laid, takes=takes)
    )


def _of_takes(
    *,
    clause: clauses.QuantityLimit,
    book: clauses.Book,
    live: ground.Mask,
    laid: ground.Ground,
    takes: ground.Takes,
) -> list[findings.Finding]:
    read = sentences.reading(book=book, table=takes.table)
    window_of, windows = _windows(per=clause.per, season=laid.season)
    judged = live[[laid.offset_of(window.first) for window in windows]]
    numbers, holder_of = _counted(clause.counted_by, laid.holders)
    limits = _limits(clause=clause, laid=laid, holder_of=holder_of, count=len(numbers), read=read)
    ceilings = _ceilings(limits, clause.tolerance)

    bound = takes.bound[clause.head.who]
    cell = holder_of[takes.position] * len(windows) + window_of[takes.offset]
    totals = np.zeros(len(numbers) * len(windows), dtype=np.int64)
    np.add.at(totals, cell, takes.table.amount * bound)
    over = (totals.reshape(len(numbers), len(windows)) > ceilings[:, np.newaxis]) & judged
    if not over.any():
        return []
    rows = np.flatnonzero(over.ravel()[cell] & bound)
    found = []
    for group, acts in evidence.grouped(table=takes.table, rows=rows, by=cell):
        holder, window = divmod(group, len(windows))
        key = findings.Key(
            clause=clause.head.id,
            subject_kind=_SUBJECTS[clause.counted_by],
            subject=int(numbers[holder]),
            resource=clause.resource,
            window=windows[window],
        )
        limit, ceiling = int(limits[holder]), int(ceilings[holder])
        found.append(
            _finding(
                clause=clause,
                book=book,
                key=key,
                acts=acts,
                read=read,
                limit=limit,
                ceiling=ceiling,
            )
        )
    return found


def _windows(
    *, per: periods.Per, season: periods.DateRange
) -> tuple[facts.Column, tuple[periods.DateRange, ...]]:
    """Return the window of each day of the season, by index, and the windows cut to it."""
    first = periods.day_number(season.first)
    days = np.arange(first, first + season.length_days, dtype=np.int64)
    starts = np.maximum(periods.span_starts(days, per=per, season=season), first)
    firsts, window_of = np.unique(starts, return_inverse=True)
    edges = [*(periods.date_of(number) for number in firsts.tolist()), season.until]
    windows = tuple(
        periods.DateRange(first=begins, until=ends) for begins, ends in itertools.pairwise(edges)
    )
    return facts.column(window_of), windows


def _counted(
    counted_by: clauses.CountedBy, holders: ground.Holders
) -> tuple[facts.Column, facts.Column]:
    """Return the holders' numbers, and the position in them of each member's holder."""
    if counted_by is clauses.CountedBy.HOUSEHOLD:
        return holders.households, holders.household_of
    return holders.numbers, facts.column(np.arange(len(holders.numbers)))


def _limits(
    *,
    clause: clauses.QuantityLimit,
    laid: ground.Ground,
    holder_of: facts.Column,
    count: int,
    read: sentences.Reading,
) -> facts.Column:
    """Return each holder's limit in base units: the clause's amount, or the allotment.

    An allotment below 0 is a debt from seasons before, which is settled at the close; as a limit it
    is nothing, or what was owed already would be fined once more.
    """
    if clause.more_than is not None:
        whole = quantities.rounded(clause.more_than.in_base(read.base), quantities.Rounding.DOWN)
        return facts.column(np.full(count, whole, dtype=np.int64))
    allotted = laid.facts.allotments
    limits = np.zeros(count, dtype=np.int64)
    of_member = [
        max(0, allotted.get((clause.resource, each.number), 0)) for each in laid.holders.members
    ]
    np.add.at(limits, holder_of, np.array(of_member, dtype=np.int64))
    return limits


def _ceilings(limits: facts.Column, tolerance: Fraction) -> facts.Column:
    """Return each limit with its tolerance, rounded down."""
    over, under = tolerance.as_integer_ratio()
    assert over * under < 2**62, "a tolerance has few decimal places"
    # Split, because a limit times the numerator could pass 64 bits.
    whole, rest = np.divmod(limits, under)
    return facts.column(limits + whole * over + rest * over // under)


def _finding(
    *,
    clause: clauses.QuantityLimit,
    book: clauses.Book,
    key: findings.Key,
    acts: tuple[evidence.Act, ...],
    read: sentences.Reading,
    limit: int,
    ceiling: int,
) -> findings.Finding:
    total = sum(act.amount for act in acts)
    return findings.Finding(
        key=key,
        edition=book.edition,
        or_else=clause.head.or_else,
        base=read.base,
        total=total,
        limit=limit,
        breach=total - ceiling,
        overuse=total - limit,
        entries=evidence.entries(acts),
        working=(
            sentences.taken(acts=acts, window=key.window, read=read),
            *_limit_lines(clause=clause, read=read, total=total, limit=limit, ceiling=ceiling),
        ),
        inputs=evidence.digest(book=book, key=key, limit=limit, rows=evidence.lines(acts)),
    )


def _limit_lines(
    *,
    clause: clauses.QuantityLimit,
    read: sentences.Reading,
    total: int,
    limit: int,
    ceiling: int,
) -> tuple[str, str]:
    named = "Limit" if clause.more_than is not None else "Allotment"
    if not clause.tolerance:
        return (
            f"{named} {read.text(limit)}, without tolerance.",
            f"Beyond it {read.text(total - limit)}.",
        )
    return (
        f"{named} {read.text(limit)}; with {_percent(clause.tolerance)} % tolerance"
        f" {read.text(ceiling)}.",
        f"Beyond the limit {read.text(total - limit)};"
        f" beyond limit and tolerance {read.text(total - ceiling)}.",
    )


@functools.cache
def _percent(tolerance: Fraction) -> str:
    return quantities.decimal_text(tolerance * 100)
