"""The writers of cases: the book notes, people move, and a final decision is carried out."""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import date
from typing import ClassVar

from governance import periods
from governance.bylaws import clauses
from governance.sanctions import clocks, ladder, moves, procedure
from governance.sanctions.moves import Move, Need, Role, State
from governance.sanctions.record import Actor, CaseSoFar, Delivery, Event
from ledger.bylaws import queries as bylaws
from ledger.cases import models, queries, writing
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.fieldwork import queries as fieldwork
from ledger.foundation import outbox, transactions
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.judgement import queries as judgement

# Roles that a member holds by an office on record.
OFFICES = frozenset({Role.SECRETARY, Role.MONITOR, Role.BOARD, Role.AUDITOR})
# Moves that need the very finding that was told of, and moves that need one at all.
SETTLING = frozenset({Move.DECIDE, Move.UPHOLD, Move.LET_STAND})
CARRYING_ON = SETTLING | {Move.TELL}
# What a move may need of whoever makes it, for which it matters who watched.
JUDGED_FAIR = frozenset({Need.OFFICER, Need.IMPARTIAL})
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


class FindingChanged(LedgerError):
    """A case would be decided on another finding than the member was told of."""

    code: ClassVar[str] = "cases.finding_changed"
    message: ClassVar[str] = (
        "{move} is refused: finding {finding} has changed since the notice; accepted are moves"
        " from checking, to which the case goes back."
    )


class NotByHand(LedgerError):
    """Somebody would make the move that only a finding's change makes."""

    code: ClassVar[str] = "cases.not_by_hand"
    message: ClassVar[str] = "{move} is refused: it follows when a finding changes, never by hand."


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

    An unchanged finding appends nothing. A case that was set aside for want of a finding is not
    taken up again; where the finding stands anew, another case is noted. Return how many cases
    were noted or sent back.
    """
    journal.hold(commons_id=commons_id)
    return sum(_heard(commons_id, number, hand) for number in findings)


@transactions.required
def hold(*, commons_id: int) -> None:
    """Keep every case as it stands until the transaction ends, so that what was read still holds.

    :raises ledger.journal.queries.JournalNotOpen: if the commons has no journal.
    """
    journal.hold(commons_id=commons_id)


@transactions.required
def move(*, commons_id: int, case: int, act: Act, hand: Hand) -> CaseSoFar:
    """Make one move in a case, and carry a decision out when it becomes final.

    Whoever holds the pen (``hand.by``) may write for the one who acts. A decision's step and sum
    follow from the ladder; nobody sets them by hand.

    :raises governance.sanctions.procedure.MoveRefused: if the procedure does not accept it.
    :raises RoleNotHeld: if the one who acts does not hold the office.
    :raises NotByHand: if the move follows from a finding's change alone.
    :raises FindingWithdrawn: if the finding no longer stands and the move carries the case on.
    :raises FindingChanged: if the finding is another than the member was told of.
    :raises NoProcedure: if the edition in force does not say how cases are dealt with.
    :raises ledger.cases.queries.UnknownCase: if there is no such case.
    :raises ledger.commons.operations.UnknownMember: if nobody has the case officer's number.
    """
    if act.move == Move.RETURN_TO_CHECKING:
        raise NotByHand(move=act.move)
    journal.hold(commons_id=commons_id)
    if act.officer is not None:
        commons.check_member(commons_id=commons_id, member=act.officer)
    return _moved(queries.case(commons_id=commons_id, number=case), act, hand)


@transactions.required
def ring(*, commons_id: int, case: int, hand: Hand) -> str:
    """Make the move that the passing of days calls for, if it still does; say what was done.

    Where the book gives more days by now than when the job was promised, it is promised again.
    """
    journal.hold(commons_id=commons_id)
    before = queries.case(commons_id=commons_id, number=case)
    if before.version != before.finding.version:
        return f"no longer due: finding {before.finding.number} changed"
    kept = commons_queries.commons(commons_id=commons_id)
    today = kept.day_of(hand.clock())
    for due_move, first in _due(commons_id, before.so_far, today):
        if first <= today:
            after = _moved(before, Act(move=due_move, role=Role.BOOK), hand)
            return f"{due_move}: now {after.state}"
        _promise(before.number, len(before.events), due_move, first, kept=kept, hand=hand)
        return f"not due before {first}"
    return "no longer due"


def _heard(commons_id: int, number: int, hand: Hand) -> int:
    case = queries.last_on_finding(commons_id=commons_id, finding=number)
    if case is None or _set_aside_for_want(commons_id, case):
        return _note(commons_id, judgement.finding(commons_id=commons_id, number=number), hand)
    return _send_back(commons_id, case, hand)


def _set_aside_for_want(commons_id: int, case: queries.CaseRecord) -> bool:
    """Return whether a case was set aside when its finding did not stand."""
    if case.so_far.state is not State.SET_ASIDE:
        return False
    return not judgement.finding(
        commons_id=commons_id, number=case.finding.number, version=case.version
    ).standing


def _note(commons_id: int, finding: judgement.FindingRecord, hand: Hand) -> int:
    ladder_id = finding.finding.or_else
    if ladder_id is None or not finding.standing:
        return 0
    event = Event(
        move=Move.NOTE,
        actor=THE_COMPUTER,
        on=commons_queries.commons(commons_id=commons_id).day_of(hand.clock()),
        subjects=queries.concerned(commons_id=commons_id, finding=finding),
    )
    rules = _procedure(commons_id, event.on)
    procedure.advance(case=None, event=event, procedure=rules)
    number = models.Case.objects.filter(commons_id=commons_id).count() + 1
    models.Case.objects.create(
        commons_id=commons_id, number=number, finding=finding.number, ladder=ladder_id
    )
    writing.append_event(
        commons_id=commons_id,
        case=number,
        ladder=ladder_id,
        place=1,
        event=event,
        resting=finding,
        rules=rules,
        effects=(),
        hand=hand,
    )
    return 1


def _send_back(commons_id: int, case: queries.CaseRecord, hand: Hand) -> int:
    returnable = case.so_far.state in moves.row_of(Move.RETURN_TO_CHECKING).sources
    if case.version == case.finding.version or not returnable:
        return 0
    kept = commons_queries.commons(commons_id=commons_id)
    what = "changed" if case.finding.standing else "was withdrawn"
    event = Event(
        move=Move.RETURN_TO_CHECKING,
        actor=THE_COMPUTER,
        on=kept.day_of(hand.clock()),
        reason=f"finding {case.finding.number} {what} (version {case.finding.version})",
    )
    if case.so_far.state is State.FINAL:
        writing.undo(commons_id=commons_id, case=case, reason=event.reason, hand=hand)
    _advance(case, event, kept=kept, hand=hand)
    return 1


def _moved(before: queries.CaseRecord, act: Act, hand: Hand) -> CaseSoFar:
    kept = commons_queries.commons(commons_id=before.commons_id)
    actor = Actor(role=Role(act.role), member=act.member)
    event = Event(
        move=Move(act.move),
        actor=actor,
        on=kept.day_of(hand.clock()),
        reason=act.reason,
        officer=act.officer,
        delivery=None if act.handed is None else _delivery(act.handed),
    )
    _check_office(kept.commons_id, actor, event.on)
    _check_finding(before, event.move)
    event = replace(
        event,
        concerns_board=_concerns_board(kept.commons_id, before.so_far.subjects, event.on),
        monitors=_watching(kept.commons_id, before)
        if JUDGED_FAIR & set(moves.row_of(event.move).needs)
        else frozenset(),
    )
    if event.move in (Move.TELL, Move.DECIDE):
        event = _with_step(kept.commons_id, before, event)
    return _advance(before, event, kept=kept, hand=hand)


def _advance(
    before: queries.CaseRecord, event: Event, *, kept: commons_queries.CommonsRecord, hand: Hand
) -> CaseSoFar:
    rules = _procedure(kept.commons_id, event.on)
    after = procedure.advance(case=before.so_far, event=event, procedure=rules)
    effects: tuple[int, ...] = ()
    if after.state is State.FINAL:
        effects = tuple(
            writing.carry_out(commons_id=kept.commons_id, case=before, after=after, hand=hand)
        )
    place = len(before.events) + 1
    writing.append_event(
        commons_id=kept.commons_id,
        case=before.number,
        ladder=before.ladder,
        place=place,
        event=event,
        resting=_resting(before, event.move),
        rules=rules,
        effects=effects,
        hand=hand,
    )
    for due_move, first in clocks.due(case=after, procedure=rules):
        _promise(before.number, place, due_move, first, kept=kept, hand=hand)
    return after


def _resting(before: queries.CaseRecord, move: Move) -> judgement.FindingRecord:
    """Return the version of the finding that a case rests on after a move."""
    if move in writing.RENEWING or before.version == before.finding.version:
        return before.finding
    return judgement.finding(
        commons_id=before.commons_id, number=before.finding.number, version=before.version
    )


def _due(commons_id: int, case: CaseSoFar, day: date) -> Sequence[tuple[Move, date]]:
    return clocks.due(case=case, procedure=_procedure(commons_id, day))


def _promise(
    case: int,
    place: int,
    due_move: Move,
    first: date,
    *,
    kept: commons_queries.CommonsRecord,
    hand: Hand,
) -> None:
    outbox.enqueue(
        commons_id=kept.commons_id,
        kind="case_deadline",
        key=f"{case}/{place}/{due_move}/{first}",
        due_at=periods.start_of_day(first, zone=kept.zone),
        payload={"case": case},
        clock=hand.clock,
    )


def _delivery(handed: Handed) -> Delivery:
    return Delivery(on=handed.on, means=handed.means, proved=handed.proved)


def _with_step(commons_id: int, case: queries.CaseRecord, event: Event) -> Event:
    """Return a notice or a decision with the step that the ladder comes to."""
    if event.move is Move.TELL:
        foreseen = queries.step_foreseen(commons_id=commons_id, case=case, told_on=event.on)
        return replace(event, proposes_warning=isinstance(foreseen.step, clauses.Warning))
    due = queries.step_due(commons_id=commons_id, case=case, decided_on=event.on)
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


def _check_finding(before: queries.CaseRecord, move: Move) -> None:
    if move in CARRYING_ON and not before.finding.standing:
        raise FindingWithdrawn(move=move, finding=before.finding.number)
    if move in SETTLING and before.version != before.finding.version:
        raise FindingChanged(move=move, finding=before.finding.number)


def _concerns_board(commons_id: int, subjects: frozenset[int], day: date) -> bool:
    board = commons_queries.holders_of(commons_id=commons_id, role=Role.BOARD.value, day=day)
    return bool(board & subjects)


def _watching(commons_id: int, case: queries.CaseRecord) -> frozenset[int]:
    """Return the monitors who checked a take of those responsible in the finding's window."""
    checks = fieldwork.inspections(commons_id=commons_id, during=case.finding.finding.key.window)
    held_to_account = queries.responsible(case)
    return frozenset(check.monitor for check in checks if check.member in held_to_account)
