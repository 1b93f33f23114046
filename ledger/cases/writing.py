"""What a move leaves behind: its entry and row, and what a final decision brings about."""

from collections.abc import Iterator
from datetime import timedelta
from typing import assert_never

from governance.bylaws import clauses
from governance.periods import DateRange
from governance.sanctions.moves import Move
from governance.sanctions.record import CaseSoFar, Event
from ledger.cases import columns, models, queries
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal import queries as journal_queries
from ledger.journal.leaves import Fact
from ledger.judgement import queries as judgement
from ledger.movements import operations as movements
from ledger.movements import queries as movements_queries
from ledger.seasons import queries as seasons

# From these moves on a case rests on the finding as it then is; others go on with what was told.
RENEWING = frozenset({Move.NOTE, Move.CHECK, Move.SET_ASIDE, Move.TELL, Move.RETURN_TO_CHECKING})


# What the entry of a move says beside the details of its event.
NO_DETAILS = frozenset(
    {
        "actor",
        "appeal",
        "case",
        "clause",
        "edition",
        "effects",
        "finding",
        "inputs",
        "ladder",
        "on",
        "role",
        "version",
    }
)


def kind_of(move: Move) -> str:
    """Return the kind of a move's entry."""
    return f"case_{move.value}"


def append_event(
    *,
    commons_id: int,
    case: int,
    ladder: str,
    place: int,
    event: Event,
    resting: judgement.FindingRecord,
    rules: clauses.Procedure,
    effects: tuple[int, ...],
    hand: Hand,
) -> None:
    """Append the entry of a move, and the row that names it; a decision's names the way to appeal.

    :param resting: the version of the finding that the case rests on from this move on.
    :param rules: the clause on the procedure that the move was made under.
    """
    details = columns.details(event)
    key = resting.finding.key
    facts: dict[str, Fact] = {
        "case": case,
        "ladder": ladder,
        "on": event.on.isoformat(),
        "finding": resting.number,
        "version": resting.version,
        "inputs": resting.finding.inputs,
        "clause": key.clause,
        "edition": resting.finding.edition,
        "role": event.actor.role.value,
        "actor": event.actor.member,
        "effects": list(effects),
        **details,
    }
    if event.move is Move.DECIDE:
        facts["appeal"] = {
            "clause": rules.head.id,
            "to": rules.appeal_to,
            "days": rules.appeal_days,
        }
    receipt = commons.enter(
        commons_id=commons_id,
        kind=kind_of(event.move),
        facts=facts,
        texts={columns.REASON: event.reason} if event.reason else {},
        subject=key.subject,
        hand=hand,
    )
    models.Event.objects.create(
        commons_id=commons_id,
        case=case,
        place=place,
        move=event.move.value,
        role=event.actor.role.value,
        member=event.actor.member,
        on=event.on,
        details=details,
        effects=list(effects),
        finding_version=resting.version,
        entry_number=receipt.number,
    )


def carry_out(
    *, commons_id: int, case: queries.CaseRecord, after: CaseSoFar, hand: Hand
) -> Iterator[int]:
    """Make the entries that a final decision calls for, and yield their numbers."""
    rungs = queries.ladder_of(commons_id=commons_id, case=case)
    assert after.step is not None and after.final_on is not None, "a final case was decided"
    step = rungs.steps[after.step]
    match step:
        case clauses.Warning() | clauses.Referral():
            pass
        case clauses.Fine():
            if after.amount_minor:
                yield movements.charge_due(
                    commons_id=commons_id,
                    member=case.finding.finding.key.subject,
                    kind=movements_queries.FINE,
                    amount=after.amount_minor,
                    case=case.number,
                    hand=hand,
                ).number
        case clauses.Suspension():
            first = after.final_on + timedelta(days=1)
            during = DateRange(first=first, until=first + timedelta(days=step.days))
            for member in sorted(queries.responsible(case)):
                yield commons.suspend(
                    commons_id=commons_id,
                    member=member,
                    clause=rungs.head.id,
                    during=during,
                    reason=f"case {case.number}",
                    hand=hand,
                ).number
        case _:
            assert_never(step)
    if rungs.restore:
        yield from _restored(commons_id, case, hand)


def undo(*, commons_id: int, case: queries.CaseRecord, reason: str, hand: Hand) -> None:
    """Undo the entries that carried a decision out which no longer stands."""
    for number in case.effects:
        kind = journal_queries.entry(commons_id=commons_id, number=number).kind
        if kind == movements_queries.GIVEN_BACK:
            movements.undo_give_back(commons_id=commons_id, number=number, reason=reason, hand=hand)
        else:
            now = hand.clock()
            journal.reverse(
                commons_id=commons_id,
                number=number,
                reason=reason,
                by=hand.by,
                occurred_at=now,
                day=commons_queries.commons(commons_id=commons_id).day_of(now),
                clock=hand.clock,
                chance=hand.chance,
            )


def _restored(commons_id: int, case: queries.CaseRecord, hand: Hand) -> Iterator[int]:
    """Give back what lay beyond a limit.

    Beyond an allotment nothing is given back here: the payback clause takes it off the next one.
    """
    finding = case.finding.finding
    clause = queries.book_of(commons_id=commons_id, case=case).clause(finding.key.clause)
    if not isinstance(clause, clauses.QuantityLimit) or clause.more_than is None:
        return
    season = seasons.holding(
        opened=seasons.seasons(commons_id=commons_id),
        resource=finding.key.resource,
        day=finding.key.window.first,
    )
    if season is not None and finding.overuse:
        yield movements.give_back(
            commons_id=commons_id,
            member=finding.key.subject,
            season=season.code,
            amount=finding.overuse,
            case=case.number,
            hand=hand,
        ).number
