"""The writers of cases: the book notes, people move, and a final decision is carried out."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from datetime import date, timedelta
from typing import ClassVar, assert_never

from governance import periods
from governance.bylaws import clauses
from governance.periods import DateRange
from governance.sanctions import clocks, ladder, moves, procedure
from governance.sanctions.moves import Move, Role, State
from governance.sanctions.record import Actor, CaseSoFar, Delivery, Event
from ledger.bylaws import queries as bylaws
from ledger.cases import columns, models, queries
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.fieldwork import queries as fieldwork
from ledger.foundation import outbox, transactions
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal.leaves import Fact
from ledger.judgement import queries as judgement
from ledger.movements import operations as movements
from ledger.movements import queries as movements_queries
from ledger.seasons import queries as seasons

# Roles that a member holds by an office on record.
OFFICES = frozenset({Role.SECRETARY, Role.MONITOR, Role.BOARD, Role.AUDITOR})
THE_COMPUTER = Actor(role=Role.BOOK, member=None)


class RoleNotHeld(LedgerError):
    """Somebody acts in an office that they do not hold."""

    code: ClassVar[str] = "cases.role_not_held"
    message: ClassVar[str] = "Member {member} did not hold the office of {role} on {day}."


class FindingWithdrawn(LedgerError):
    """A case whose finding no longer stands would be carried on."""

    code: ClassVar[str] = "cases.finding_withdrawn"
    message: ClassVar[str] = (
        "{move} is refused: finding {finding} was withdrawn; accepted is to set the case aside."
    )


class NoProcedure(LedgerError):
    """The edition in force does not say how cases are dealt with."""

    code: ClassVar[str] = "cases.no_procedure"
    message: ClassVar[str] = "Edition {edition} has no procedure clause; no case can move."


class UnknownWord(LedgerError):
    """A move or a role has no such name."""

    code: ClassVar[str] = "cases.unknown_word"
    message: ClassVar[str] = "Found the {what} {found!r}; accepted are {accepted}."


@dataclass(frozen=True, slots=True, kw_only=True)
class Handed:
    """One attempt to hand something over: when, by what means, and whether arrival is proved."""

    on: date
    means: str
    proved: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Act:
    """What somebody does in a case: the move and the role by their names, and what they carry.

    :raises UnknownWord: if the procedure has no such move or role.
    """

    move: str
    role: str
    member: int | None = None
    reason: str = ""
    officer: int | None = None
    handed: Handed | None = None

    def __post_init__(self) -> None:
        for what, found, known in (("move", self.move, Move), ("role", self.role, Role)):
            if found not in list(known):
                raise UnknownWord(what=what, found=found, accepted=", ".join(known))


@transactions.required
def hear(*, commons_id: int, findings: Sequence[int], hand: Hand) -> int:
    """Note a case on each new finding that a ladder follows, and send changed ones back.

    An unchanged finding appends nothing. Return how many cases were noted or sent back.
    """
    moved = 0
    for number in findings:
        finding = judgement.finding(commons_id=commons_id, number=number)
        case = queries.number_on_finding(commons_id=commons_id, finding=number)
        if case is None:
            moved += _note(commons_id, finding, hand)
        else:
            moved += _send_back(commons_id, queries.case(commons_id=commons_id, number=case), hand)
    return moved


@transactions.required
def move(*, commons_id: int, case: int, act: Act, hand: Hand) -> CaseSoFar:
    """Make one move in a case, and carry a decision out when it becomes final.

    Whoever holds the pen (``hand.by``) may write for the one who acts. A decision's step and sum
    follow from the ladder; nobody sets them by hand.

    :raises governance.sanctions.procedure.MoveRefused: if the procedure does not accept it.
    :raises RoleNotHeld: if the one who acts does not hold the office.
    :raises FindingWithdrawn: if the finding no longer stands and the move carries the case on.
    :raises ledger.cases.queries.UnknownCase: if there is no such case.
    """
    before = queries.case(commons_id=commons_id, number=case)
    today = _today(commons_id, hand)
    actor = Actor(role=Role(act.role), member=act.member)
    _check_office(commons_id, actor, today)
    if act.move in (Move.TELL, Move.DECIDE) and not before.finding.standing:
        raise FindingWithdrawn(move=act.move, finding=before.finding.number)
    event = Event(
        move=Move(act.move),
        actor=actor,
        on=today,
        reason=act.reason,
        concerns_board=_concerns_board(commons_id, before.so_far.subjects, today),
        monitors=_watching(commons_id, before.finding),
        officer=act.officer,
        delivery=None if act.handed is None else _delivery(act.handed),
    )
    if event.move in (Move.TELL, Move.DECIDE):
        event = _with_step(commons_id, before, event)
    return _advance(commons_id, before, event, hand)


@transactions.required
def ring(*, commons_id: int, case: int, hand: Hand) -> str:
    """Make the move that the passing of days calls for, if it still does; say what was done."""
    before = queries.case(commons_id=commons_id, number=case)
    rules = _procedure(commons_id, _today(commons_id, hand))
    today = _today(commons_id, hand)
    for due_move, first in clocks.due(case=before.so_far, procedure=rules):
        if first <= today:
            act = Act(move=due_move, role=Role.BOOK)
            after = move(commons_id=commons_id, case=case, act=act, hand=hand)
            return f"{due_move}: now {after.state}"
    return "no longer due"


def _note(commons_id: int, finding: judgement.FindingRecord, hand: Hand) -> int:
    ladder_id = finding.finding.or_else
    if ladder_id is None or not finding.standing:
        return 0
    number = models.Case.objects.filter(commons_id=commons_id).count() + 1
    models.Case.objects.create(
        commons_id=commons_id, number=number, finding=finding.number, ladder=ladder_id
    )
    event = Event(
        move=Move.NOTE,
        actor=THE_COMPUTER,
        on=_today(commons_id, hand),
        subjects=queries.concerned(commons_id=commons_id, finding=finding),
    )
    procedure.advance(case=None, event=event, procedure=_procedure(commons_id, event.on))
    _append(commons_id, number, 1, event, finding, (), hand)
    return 1


def _send_back(commons_id: int, case: queries.CaseRecord, hand: Hand) -> int:
    returnable = case.so_far.state in moves.row_of(Move.RETURN_TO_CHECKING).sources
    if case.version == case.finding.version or not returnable:
        return 0
    what = "changed" if case.finding.standing else "was withdrawn"
    event = Event(
        move=Move.RETURN_TO_CHECKING,
        actor=THE_COMPUTER,
        on=_today(commons_id, hand),
        reason=f"finding {case.finding.number} {what} (version {case.finding.version})",
    )
    if case.so_far.state is State.FINAL:
        _undo(commons_id, case, event.reason, hand)
    _advance(commons_id, case, event, hand)
    return 1


def _advance(commons_id: int, before: queries.CaseRecord, event: Event, hand: Hand) -> CaseSoFar:
    rules = _procedure(commons_id, event.on)
    after = procedure.advance(case=before.so_far, event=event, procedure=rules)
    became_final = after.state is State.FINAL
    effects = tuple(_carry_out(commons_id, before, after, hand)) if became_final else ()
    place = len(before.events) + 1
    _append(commons_id, before.number, place, event, before.finding, effects, hand)
    zone = commons_queries.commons(commons_id=commons_id).zone
    for due_move, first in clocks.due(case=after, procedure=rules):
        outbox.enqueue(
            commons_id=commons_id,
            kind="case_deadline",
            key=f"{before.number}/{place}/{due_move}",
            due_at=periods.start_of_day(first, zone=zone),
            payload={"case": before.number},
            clock=hand.clock,
        )
    return after


def _append(
    commons_id: int,
    case: int,
    place: int,
    event: Event,
    finding: judgement.FindingRecord,
    effects: tuple[int, ...],
    hand: Hand,
) -> None:
    details = columns.details(event)
    facts: dict[str, Fact] = {
        "case": case,
        "finding": finding.number,
        "version": finding.version,
        "inputs": finding.finding.inputs,
        "clause": finding.finding.key.clause,
        "edition": finding.finding.edition,
        "role": event.actor.role.value,
        "actor": event.actor.member,
        "effects": list(effects),
        **details,
    }
    receipt = commons.enter(
        commons_id=commons_id,
        kind=f"case_{event.move.value}",
        facts=facts,
        texts={"reason": event.reason} if event.reason else {},
        subject=finding.finding.key.subject,
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
        reason=event.reason,
        details=details,
        effects=list(effects),
        finding_version=finding.version,
        entry_number=receipt.number,
    )


def _carry_out(
    commons_id: int, case: queries.CaseRecord, after: CaseSoFar, hand: Hand
) -> Iterable[int]:
    """Make the entries that a final decision calls for, and yield their numbers."""
    rungs = queries.ladder_of(commons_id=commons_id, case=case)
    assert after.step is not None and after.final_on is not None, "a final case was decided"
    step = rungs.steps[after.step]
    subject = case.finding.finding.key.subject
    match step:
        case clauses.Warning() | clauses.Referral():
            pass
        case clauses.Fine():
            if after.amount_minor:
                yield movements.charge_due(
                    commons_id=commons_id,
                    member=subject,
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
        yield from _restore(commons_id, case, hand)


def _restore(commons_id: int, case: queries.CaseRecord, hand: Hand) -> Iterable[int]:
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


def _undo(commons_id: int, case: queries.CaseRecord, reason: str, hand: Hand) -> None:
    """Reverse the entries that carried a decision out which no longer stands."""
    for number in case.effects:
        journal.reverse(
            commons_id=commons_id,
            number=number,
            reason=reason,
            by=hand.by,
            occurred_at=hand.clock(),
            day=_today(commons_id, hand),
            clock=hand.clock,
            chance=hand.chance,
        )


def _delivery(handed: Handed) -> Delivery:
    return Delivery(on=handed.on, means=handed.means, proved=handed.proved)


def _with_step(commons_id: int, case: queries.CaseRecord, event: Event) -> Event:
    """Return a notice or a decision with the step that the ladder comes to."""
    due = queries.step_due(commons_id=commons_id, case=case, decided_on=event.on)
    if event.move is Move.TELL:
        return replace(event, proposes_warning=isinstance(due.step, clauses.Warning))
    kept = _within_notice(commons_id, case, due)
    return replace(event, step=kept.index, amount_minor=_amount(case, kept))


def _within_notice(
    commons_id: int, case: queries.CaseRecord, due: ladder.StepDue
) -> ladder.StepDue:
    """Return the step due, held to what the member was told.

    Whoever was told of a warning had the shorter time to answer, so no more than a warning follows.
    """
    if not case.so_far.proposes_warning:
        return due
    rungs = queries.ladder_of(commons_id=commons_id, case=case).steps[: due.index + 1]
    index = max(at for at, step in enumerate(rungs) if isinstance(step, clauses.Warning))
    return replace(due, index=index, step=rungs[index])


def _amount(case: queries.CaseRecord, step: ladder.StepDue) -> int:
    finding = case.finding.finding
    return ladder.amount_due(step=step.step, breach=finding.breach, base=finding.base)


def _procedure(commons_id: int, day: date) -> clauses.Procedure:
    book = bylaws.in_force(commons_id=commons_id, day=day)
    for clause in book.clauses:
        if isinstance(clause, clauses.Procedure):
            return clause
    raise NoProcedure(edition=book.edition)


def _check_office(commons_id: int, actor: Actor, day: date) -> None:
    if actor.role not in OFFICES:
        return
    holders = commons_queries.holders_of(commons_id=commons_id, role=actor.role.value, day=day)
    if actor.member not in holders:
        raise RoleNotHeld(member=actor.member, role=actor.role.value, day=day)


def _concerns_board(commons_id: int, subjects: frozenset[int], day: date) -> bool:
    board = commons_queries.holders_of(commons_id=commons_id, role=Role.BOARD.value, day=day)
    return bool(board & subjects)


def _watching(commons_id: int, finding: judgement.FindingRecord) -> frozenset[int]:
    """Return the monitors who checked a take of the subject in the finding's window."""
    key = finding.finding.key
    checks = fieldwork.inspections(commons_id=commons_id, during=key.window)
    return frozenset(check.monitor for check in checks if check.member == key.subject)


def _today(commons_id: int, hand: Hand) -> date:
    return commons_queries.commons(commons_id=commons_id).day_of(hand.clock())
