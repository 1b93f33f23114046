"""Advance a case by one move, or refuse it with the reason and with what would be accepted."""

from datetime import date, timedelta
from typing import ClassVar, assert_never

from governance.bylaws import clauses
from governance.errors import StintbookError
from governance.sanctions import clocks, moves, record


class MoveRefused(StintbookError):
    """A move that the procedure does not accept."""

    code: ClassVar[str] = "procedure.move_refused"
    message: ClassVar[str] = "The move {move} was refused."


class WrongState(MoveRefused):
    """The state of the case does not allow the move."""

    code: ClassVar[str] = "procedure.wrong_state"
    message: ClassVar[str] = "{move} does not follow {state}; accepted from there: {accepted}."


class WrongRole(MoveRefused):
    """The move belongs to others."""

    code: ClassVar[str] = "procedure.wrong_role"
    message: ClassVar[str] = "{move} is not for the {role}; accepted: {accepted}."


class BeforeLastMove(MoveRefused):
    """The move is dated before the one that it follows."""

    code: ClassVar[str] = "procedure.before_last_move"
    message: ClassVar[str] = (
        "{move} is dated {on}; accepted from the day of the last move, {first}."
    )


class PartMissing(MoveRefused):
    """The move lacks something that it must carry."""

    code: ClassVar[str] = "procedure.part_missing"
    message: ClassVar[str] = "{move} is refused: it needs that {needs}."


class ConflictOfInterest(MoveRefused):
    """Somebody with an interest in the case would be its officer or decide it."""

    code: ClassVar[str] = "procedure.conflict_of_interest"
    message: ClassVar[str] = (
        "{move} is refused: member {member} {link}; accepted is somebody with no part in the case."
    )


class OneOfTheBoard(MoveRefused):
    """The board would decide on a board member."""

    code: ClassVar[str] = "procedure.one_of_the_board"
    message: ClassVar[str] = (
        "{move} is refused: the case concerns a member of the board; accepted: assembly."
    )


class NotConcerned(MoveRefused):
    """A member would move a case that concerns others."""

    code: ClassVar[str] = "procedure.not_concerned"
    message: ClassVar[str] = (
        "{move} is refused: the case does not concern member {member}; accepted: {accepted}."
    )


class DeliveryOutOfOrder(MoveRefused):
    """A delivery is dated before the last move, or after the day that records it."""

    code: ClassVar[str] = "procedure.delivery_out_of_order"
    message: ClassVar[str] = (
        "{move} is refused: the delivery is dated {found}; accepted from {first} to {last}."
    )


class DeliveryUnproved(MoveRefused):
    """The reasons count as delivered only with proof."""

    code: ClassVar[str] = "procedure.delivery_unproved"
    message: ClassVar[str] = (
        "{move} is refused: the delivery of the reasons is not proved; accepted is a proved one."
    )


class AlreadyDelivered(MoveRefused):
    """A notice that arrived would be delivered again."""

    code: ClassVar[str] = "procedure.already_delivered"
    message: ClassVar[str] = (
        "{move} is refused: the notice was delivered on {on}, with proof; nothing is left to try."
    )


class NotDelivered(MoveRefused):
    """Silence means nothing yet, for the notice does not count as delivered."""

    code: ClassVar[str] = "procedure.not_delivered"
    message: ClassVar[str] = (
        "{move} is refused: the notice is not delivered; accepted after a proved delivery, or after"
        " two attempts by different means, a week or more apart."
    )


class TooEarly(MoveRefused):
    """The days that the procedure gives are not over."""

    code: ClassVar[str] = "procedure.too_early"
    message: ClassVar[str] = "{move} on {on} is too early; accepted from {first}."


class TooLate(MoveRefused):
    """The last day for the move is over."""

    code: ClassVar[str] = "procedure.too_late"
    message: ClassVar[str] = "{move} on {on} is too late; accepted to {last}, that day included."


def advance(
    *, case: record.CaseSoFar | None, event: record.Event, procedure: clauses.Procedure
) -> record.CaseSoFar:
    """Return the case after a move.

    :param case: None before the note that begins it.
    :raises MoveRefused: by its subclasses, each saying why and what would be accepted.
    """
    row = moves.row_of(event.move)
    state = case.state if case else None
    if state not in row.sources:
        raise WrongState(
            move=event.move,
            state=state or "nothing",
            accepted=", ".join(moves.moves_from(state)) or "no move",
        )
    if event.actor.role not in row.roles:
        raise WrongRole(
            move=event.move, role=event.actor.role, accepted=", ".join(sorted(row.roles))
        )
    # A note is checked against the case that it begins.
    so_far = record.applied(case=None, event=event) if case is None else case
    if event.on < so_far.last_on:
        raise BeforeLastMove(move=event.move, on=event.on, first=so_far.last_on)
    for need in row.needs:
        _check(need, case=so_far, event=event, procedure=procedure)
    return record.applied(case=case, event=event)


def _check(
    need: moves.Need,
    *,
    case: record.CaseSoFar,
    event: record.Event,
    procedure: clauses.Procedure,
) -> None:
    match need:
        case moves.Need.SUBJECTS:
            _require(bool(case.subjects), event=event, need=need)
        case moves.Need.REASON:
            _require(bool(event.reason.strip()), event=event, need=need)
        case moves.Need.STEP:
            _require(event.step is not None, event=event, need=need)
        case moves.Need.OFFICER:
            _require(event.officer is not None, event=event, need=need)
            _check_impartial(event.officer, case=case, event=event)
        case moves.Need.IMPARTIAL:
            _check_impartial(event.actor.member, case=case, event=event)
        case moves.Need.NOT_AMONG_THEMSELVES:
            concerns_board = case.concerns_board or event.concerns_board
            if event.actor.role is moves.Role.BOARD and concerns_board:
                raise OneOfTheBoard(move=event.move)
        case moves.Need.DELIVERY:
            _check_delivery(case=case, event=event)
        case moves.Need.PROVED:
            if event.delivery is not None and not event.delivery.proved:
                raise DeliveryUnproved(move=event.move)
        case moves.Need.STILL_UNPROVED:
            if any(each.proved for each in case.deliveries):
                raise AlreadyDelivered(move=event.move, on=case.told_on)
        case moves.Need.CONCERNED:
            _check_concerned(case=case, event=event)
        case moves.Need.ANSWER_TIME_OVER:
            last = clocks.answer_until(case=case, procedure=procedure)
            if last is None:
                raise NotDelivered(move=event.move)
            _check_over(last, event=event)
        case moves.Need.APPEAL_TIME_LEFT:
            last = _appeal_until(case=case, procedure=procedure)
            if event.on > last:
                raise TooLate(move=event.move, on=event.on, last=last)
        case moves.Need.APPEAL_TIME_OVER:
            _check_over(_appeal_until(case=case, procedure=procedure), event=event)
        case _:
            assert_never(need)


def _require(given: bool, *, event: record.Event, need: moves.Need) -> None:
    if not given:
        raise PartMissing(move=event.move, needs=need)


def _check_impartial(member: int | None, *, case: record.CaseSoFar, event: record.Event) -> None:
    if member is None:
        return
    link = None
    if member in case.subjects:
        link = "is concerned by it or lives in the household concerned"
    elif member == case.reporter:
        link = "reported it"
    elif member in case.monitors | event.monitors:
        link = "watched as a monitor"
    if link is not None:
        raise ConflictOfInterest(move=event.move, member=member, link=link)


def _check_delivery(*, case: record.CaseSoFar, event: record.Event) -> None:
    # A delivery dated back would eat the days that the member has.
    if event.delivery is None or not event.delivery.kind_of_means:
        raise PartMissing(move=event.move, needs=moves.Need.DELIVERY)
    if not case.last_on <= event.delivery.on <= event.on:
        raise DeliveryOutOfOrder(
            move=event.move, found=event.delivery.on, first=case.last_on, last=event.on
        )


def _check_concerned(*, case: record.CaseSoFar, event: record.Event) -> None:
    member = event.actor.member
    if event.actor.role is moves.Role.MEMBER and member not in case.subjects:
        accepted = ", ".join(map(str, sorted(case.subjects)))
        raise NotConcerned(move=event.move, member=member, accepted=accepted)


def _appeal_until(*, case: record.CaseSoFar, procedure: clauses.Procedure) -> date:
    last = clocks.appeal_until(case=case, procedure=procedure)
    assert last is not None, "the appeal opened with the delivery of the reasons"
    return last


def _check_over(last: date, *, event: record.Event) -> None:
    if event.on <= last:
        raise TooEarly(move=event.move, on=event.on, first=last + timedelta(days=1))
