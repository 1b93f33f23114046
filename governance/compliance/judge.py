"""The judgement of a season: every clause of every edition in force, over one set of facts."""

from collections.abc import Iterable
from dataclasses import replace
from datetime import date
from typing import assert_never

from governance.bylaws import clauses
from governance.bylaws import editions as adopted
from governance.compliance import closures, duties, findings, ground, limits, reporting, suspensions
from governance.facts import SeasonFacts


def judge(
    *,
    editions: adopted.Editions,
    facts: SeasonFacts,
    as_of: date,
    members: frozenset[int] | None = None,
) -> tuple[findings.Finding, ...]:
    """Return the findings of a season as it stands at the end of a day, in order of key.

    A window is judged by the edition in force on its first day, an act by the one in force on its
    day. Takes after ``as_of`` have not happened yet; takes outside the season are for another
    judgement.

    :param members: judge only these; the answer is that of the whole run, filtered: a finding on
        a household stays if one of its members is asked for.
    :raises UnitMismatch: if a book and the facts measure a resource differently.
    """
    books = adopted.spans(editions=editions, season=facts.season)
    laid = ground.lay(
        season_facts=facts,
        as_of=as_of,
        members=members,
        classes={clause.head.who for book, _ in books for clause in book.clauses},
    )
    suspended: list[findings.Finding] = []
    found: list[findings.Finding] = []
    for book, span in books:
        suspended += suspensions.taken_while_suspended(
            book=book, live=laid.days_in(span), laid=laid
        )
        for clause in book.clauses:
            live = laid.days_in(span, clause.head.in_force)
            if live.any():
                found += _of_clause(clause=clause, book=book, live=live, laid=laid)
    single = _single(suspended=suspended, found=found)
    return _asked_for(found=single, members=members, laid=laid)


def _of_clause(
    *, clause: clauses.Clause, book: clauses.Book, live: ground.Mask, laid: ground.Ground
) -> tuple[findings.Finding, ...]:
    match clause:
        case clauses.QuantityLimit():
            return limits.beyond(clause=clause, book=book, live=live, laid=laid)
        case clauses.ClosedWindow():
            return closures.in_closed_window(clause=clause, book=book, live=live, laid=laid)
        case clauses.OutsideOrder():
            return closures.against_orders(clause=clause, book=book, live=live, laid=laid)
        case clauses.ReportingDuty():
            return reporting.late(clause=clause, book=book, live=live, laid=laid)
        case clauses.WorkDuty():
            return duties.short(clause=clause, book=book, live=live, laid=laid)
        case (
            clauses.Membership()
            | clauses.Allocation()
            | clauses.CarryOver()
            | clauses.Payback()
            | clauses.SanctionLadder()
            | clauses.Procedure()
            | clauses.PoolTotal()
        ):
            # These say who belongs, what is given out and what follows: nobody can break them.
            return ()
        case _:
            assert_never(clause)


def _single(
    *, suspended: Iterable[findings.Finding], found: Iterable[findings.Finding]
) -> list[findings.Finding]:
    """Return the findings with one for each key.

    A take under suspension may break, on the same day, the very clause that the suspension was
    decided for. The finding on the suspension covers the whole day's take; it stays, and takes
    over what the other has to say.
    """
    by_key = {each.key: each for each in suspended}
    single = []
    for each in found:
        first = by_key.get(each.key) if by_key else None
        if first is None:
            single.append(each)
        else:
            by_key[each.key] = replace(first, working=(*first.working, *each.working))
    return [*single, *by_key.values()]


def _asked_for(
    *,
    found: Iterable[findings.Finding],
    members: frozenset[int] | None,
    laid: ground.Ground,
) -> tuple[findings.Finding, ...]:
    kept = sorted(found, key=_in_order)
    if members is None:
        return tuple(kept)
    households = {each.household for each in laid.holders.members if each.number in members}
    asked = {findings.SubjectKind.MEMBER: members, findings.SubjectKind.HOUSEHOLD: households}
    return tuple(each for each in kept if each.key.subject in asked[each.key.subject_kind])


def _in_order(finding: findings.Finding) -> tuple[object, ...]:
    # The key's own order, spelt out: comparing records would take longer than finding them.
    key = finding.key
    window = key.window
    return (
        key.clause,
        key.subject_kind.value,
        key.subject,
        key.resource,
        window.first,
        window.until,
    )
