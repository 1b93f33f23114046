"""The states of a case, the moves between them, and who may make each: the procedure as a table.

Two old rules stand behind it: nobody is decided about unheard, and nobody decides their own case.
The computer counts days and reminds; towards a decision only people move. A fuller procedure
(hearing, agreed route, stay, spent cases) adds rows here and needs nothing else of this module.
"""

import enum
from dataclasses import dataclass


class State(enum.StrEnum):
    """Where a case stands."""

    NOTED = "noted"
    CHECKING = "checking"
    SET_ASIDE = "set_aside"
    TOLD = "told"
    ANSWERED = "answered"
    UNANSWERED = "unanswered"
    DECIDED = "decided"
    APPEAL_OPEN = "appeal_open"
    UNDER_APPEAL = "under_appeal"
    OVERTURNED = "overturned"
    FINAL = "final"
    DONE = "done"


class Move(enum.StrEnum):
    """What moves a case on."""

    NOTE = "note"
    CHECK = "check"
    SET_ASIDE = "set_aside"
    TELL = "tell"
    ATTEMPT = "attempt"
    ANSWER = "answer"
    CLOSE_SILENCE = "close_silence"
    DECIDE = "decide"
    OPEN_APPEAL = "open_appeal"
    LODGE_APPEAL = "lodge_appeal"
    UPHOLD = "uphold"
    OVERTURN = "overturn"
    LET_STAND = "let_stand"
    COMPLETE = "complete"
    RETURN_TO_CHECKING = "return_to_checking"


class Role(enum.StrEnum):
    """In what capacity somebody moves a case; the book is the computer."""

    BOOK = "book"
    SECRETARY = "secretary"
    MONITOR = "monitor"
    BOARD = "board"
    ASSEMBLY = "assembly"
    AUDITOR = "auditor"
    MEMBER = "member"


class Need(enum.StrEnum):
    """What must be true before a move is accepted, beside the state and the role."""

    SUBJECTS = "the members concerned are named"
    REASON = "a reason is given"
    OFFICER = "a case officer with no conflict of interest is named"
    IMPARTIAL = "whoever decides has no conflict of interest"
    NOT_AMONG_THEMSELVES = "the board does not decide on one of its own"
    DELIVERY = "the attempt at delivery is recorded with its means, on a day since the last move"
    PROVED = "the delivery is proved"
    STILL_UNPROVED = "no earlier delivery is proved"
    CONCERNED = "a member who moves the case is concerned by it"
    STEP = "the step is named"
    ANSWER_TIME_OVER = "the days to answer are over"
    APPEAL_TIME_LEFT = "the days to appeal are not over"
    APPEAL_TIME_OVER = "the days to appeal are over"


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """One move: from which states (None: there is no case yet), to which, by whom, needing what."""

    move: Move
    sources: tuple[State | None, ...]
    to: State
    roles: tuple[Role, ...]
    needs: tuple[Need, ...]


TABLE: tuple[Row, ...] = (
    Row(
        move=Move.NOTE,
        sources=(None,),
        to=State.NOTED,
        roles=tuple(Role),
        needs=(Need.SUBJECTS,),
    ),
    Row(
        move=Move.CHECK,
        sources=(State.NOTED,),
        to=State.CHECKING,
        roles=(Role.SECRETARY,),
        needs=(Need.OFFICER,),
    ),
    Row(
        move=Move.SET_ASIDE,
        sources=(State.CHECKING, State.ANSWERED),
        to=State.SET_ASIDE,
        roles=(Role.BOARD, Role.ASSEMBLY),
        needs=(Need.REASON, Need.IMPARTIAL, Need.NOT_AMONG_THEMSELVES),
    ),
    Row(
        move=Move.TELL,
        sources=(State.CHECKING,),
        to=State.TOLD,
        roles=(Role.SECRETARY,),
        needs=(Need.DELIVERY,),
    ),
    Row(
        move=Move.ATTEMPT,
        sources=(State.TOLD,),
        to=State.TOLD,
        roles=(Role.SECRETARY,),
        needs=(Need.DELIVERY, Need.STILL_UNPROVED),
    ),
    Row(
        move=Move.ANSWER,
        sources=(State.TOLD,),
        to=State.ANSWERED,
        # A spoken answer counts too: the secretary writes it down.
        roles=(Role.MEMBER, Role.SECRETARY),
        needs=(Need.CONCERNED,),
    ),
    Row(
        move=Move.CLOSE_SILENCE,
        sources=(State.TOLD,),
        to=State.UNANSWERED,
        roles=(Role.BOOK,),
        needs=(Need.ANSWER_TIME_OVER,),
    ),
    Row(
        move=Move.DECIDE,
        sources=(State.ANSWERED, State.UNANSWERED),
        to=State.DECIDED,
        roles=(Role.BOARD, Role.ASSEMBLY),
        needs=(Need.REASON, Need.STEP, Need.IMPARTIAL, Need.NOT_AMONG_THEMSELVES),
    ),
    Row(
        move=Move.OPEN_APPEAL,
        sources=(State.DECIDED,),
        to=State.APPEAL_OPEN,
        roles=(Role.BOOK,),
        needs=(Need.DELIVERY, Need.PROVED),
    ),
    Row(
        move=Move.LODGE_APPEAL,
        sources=(State.APPEAL_OPEN,),
        to=State.UNDER_APPEAL,
        roles=(Role.MEMBER,),
        needs=(Need.CONCERNED, Need.APPEAL_TIME_LEFT),
    ),
    Row(
        move=Move.UPHOLD,
        sources=(State.UNDER_APPEAL,),
        to=State.FINAL,
        roles=(Role.ASSEMBLY,),
        needs=(Need.REASON, Need.IMPARTIAL),
    ),
    Row(
        move=Move.OVERTURN,
        sources=(State.UNDER_APPEAL,),
        to=State.OVERTURNED,
        roles=(Role.ASSEMBLY,),
        needs=(Need.REASON, Need.IMPARTIAL),
    ),
    Row(
        move=Move.LET_STAND,
        sources=(State.APPEAL_OPEN,),
        to=State.FINAL,
        roles=(Role.BOOK,),
        needs=(Need.APPEAL_TIME_OVER,),
    ),
    Row(
        move=Move.COMPLETE,
        sources=(State.FINAL,),
        to=State.DONE,
        roles=(Role.SECRETARY,),
        needs=(),
    ),
    Row(
        move=Move.RETURN_TO_CHECKING,
        sources=(
            State.CHECKING,
            State.TOLD,
            State.ANSWERED,
            State.UNANSWERED,
            State.DECIDED,
            State.APPEAL_OPEN,
            State.UNDER_APPEAL,
            State.FINAL,
        ),
        to=State.CHECKING,
        # The finding that the case rests on was withdrawn or changed.
        roles=(Role.BOOK,),
        needs=(Need.REASON,),
    ),
)


def row_of(move: Move) -> Row:
    """Return the row of a move."""
    return next(row for row in TABLE if row.move is move)


def moves_from(state: State | None) -> tuple[Move, ...]:
    """Return the moves that a state allows, in the table's order."""
    return tuple(row.move for row in TABLE if state in row.sources)
