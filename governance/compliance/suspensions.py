"""Takes by a member who is suspended: the book enforces what a ladder decided."""

from datetime import date

import numpy as np

from governance import facts, periods
from governance.bylaws import clauses
from governance.compliance import evidence, findings, forbidden, ground, sentences


def taken_while_suspended(
    *, book: clauses.Book, live: ground.Mask, laid: ground.Ground
) -> tuple[findings.Finding, ...]:
    """Return one finding per member, resource and day with a take under suspension.

    It stands under the clause that the suspension was decided for. Where several suspensions run,
    the first of them is named: one act is found once.

    :param live: the days of the season on which this edition is in force.
    """
    held = [
        (position, each.during)
        for position, member in enumerate(laid.holders.members)
        for each in member.suspended
    ]
    if not held:
        return ()
    cells = (laid.member_days(held) & live).ravel()
    return tuple(
        _finding(
            book=book,
            takes=takes,
            acts=acts,
            member=laid.holders.members[cell // laid.season.length_days],
        )
        for takes in laid.takes
        for cell, acts in evidence.grouped(
            table=takes.table,
            rows=np.flatnonzero(cells[takes.cell] & (takes.table.amount > 0)),
            by=takes.cell,
        )
    )


def _finding(
    *,
    book: clauses.Book,
    takes: ground.Takes,
    acts: tuple[evidence.Act, ...],
    member: facts.Member,
) -> findings.Finding:
    suspension = _first_over(member, periods.date_of(acts[0].day))
    during = suspension.during
    return forbidden.finding(
        clause_id=suspension.value,
        or_else=_ladder(book=book, clause_id=suspension.value),
        book=book,
        takes=takes,
        acts=acts,
        lines=(
            f"Entry {suspension.entry} suspended the member for clause {suspension.value}"
            f" {sentences.when(during)}.",
        ),
        reasons=(evidence.line(suspension.entry, suspension.value, during.first, during.until),),
    )


def _first_over(member: facts.Member, day: date) -> facts.Dated[str]:
    return min(
        (each for each in member.suspended if each.during.holds(day)),
        key=lambda each: (each.during.first, each.entry),
    )


def _ladder(*, book: clauses.Book, clause_id: str) -> str | None:
    """Return the ladder that the clause names, or the clause itself if it is one.

    A suspension outlives the clause it was decided for: then nothing further follows by the book.
    """
    for clause in book.clauses:
        if clause.head.id == clause_id:
            if isinstance(clause, clauses.SanctionLadder):
                return clause.head.id
            return clause.head.or_else
    return None
