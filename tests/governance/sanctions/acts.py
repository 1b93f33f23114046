"""A procedure clause, actors and the events of a case, for the tests of this folder.

Days are counted from the act, as the rule-sets that these cases come from count them.
"""

from collections.abc import Sequence
from datetime import date, timedelta
from typing import Any

from governance.bylaws import clauses
from governance.periods import OPEN_END, DateRange
from governance.sanctions import moves, procedure, record
from governance.sanctions.moves import Move, Role

ACT = date(2026, 3, 2)

# Members 6 and 43 are one household; 12 and 5 sit on the board, 8 is a monitor, 3 the secretary.
SUBJECTS = frozenset({6, 43})

ACTORS = {
    Role.BOOK: record.Actor(role=Role.BOOK, member=None),
    Role.SECRETARY: record.Actor(role=Role.SECRETARY, member=3),
    Role.MONITOR: record.Actor(role=Role.MONITOR, member=8),
    Role.BOARD: record.Actor(role=Role.BOARD, member=12),
    Role.ASSEMBLY: record.Actor(role=Role.ASSEMBLY, member=None),
    Role.AUDITOR: record.Actor(role=Role.AUDITOR, member=41),
    Role.MEMBER: record.Actor(role=Role.MEMBER, member=6),
}

PROCEDURE = clauses.Procedure(
    head=clauses.Head(
        id="8.1",
        title="A fair hearing",
        text="Whoever is told of a breach has time to answer and to appeal.",
        in_force=DateRange(first=date(2026, 3, 1), until=OPEN_END),
        who=None,
        or_else=None,
    ),
    answer_days=14,
    answer_to_warning_days=7,
    appeal_days=21,
    appeal_to="assembly",
)


def day(number: int) -> date:
    """Return the day so many days after the act."""
    return ACT + timedelta(days=number)


def delivery(number: int, means: str = "post", *, proved: bool = True) -> record.Delivery:
    return record.Delivery(on=day(number), means=means, proved=proved)


def event(move: Move, role: Role, number: int, **data: Any) -> record.Event:
    actor = data.pop("actor", ACTORS[role])
    return record.Event(move=move, actor=actor, on=day(number), **data)


def note(**data: Any) -> record.Event:
    return event(Move.NOTE, Role.BOOK, 1, **{"subjects": SUBJECTS, **data})


def check(**data: Any) -> record.Event:
    return event(Move.CHECK, Role.SECRETARY, 3, **{"officer": 5, **data})


def tell(number: int = 10, **data: Any) -> record.Event:
    given = {"delivery": delivery(number), **data}
    return event(Move.TELL, Role.SECRETARY, number, **given)


def answer(number: int = 15, **data: Any) -> record.Event:
    return event(Move.ANSWER, Role.MEMBER, number, **data)


def decide(number: int = 20, **data: Any) -> record.Event:
    given = {"reason": "The scale was read twice.", "step": 1, "amount_minor": 300, **data}
    return event(Move.DECIDE, Role.BOARD, number, **given)


def open_appeal(number: int = 22, **data: Any) -> record.Event:
    given = {"delivery": delivery(number), **data}
    return event(Move.OPEN_APPEAL, Role.BOOK, number, **given)


def walked(events: Sequence[record.Event]) -> record.CaseSoFar:
    """Return the case that a run of accepted moves makes."""
    case: record.CaseSoFar | None = None
    for each in events:
        case = procedure.advance(case=case, event=each, procedure=PROCEDURE)
    assert case is not None
    return case


def moved(case: record.CaseSoFar, each: record.Event) -> record.CaseSoFar:
    return procedure.advance(case=case, event=each, procedure=PROCEDURE)


# One accepted way into every state.
_TOLD = (note(), check(), tell())
_ANSWERED = (*_TOLD, answer())
_DECIDED = (*_ANSWERED, decide())
_APPEAL_OPEN = (*_DECIDED, open_appeal())
_UNDER_APPEAL = (*_APPEAL_OPEN, event(Move.LODGE_APPEAL, Role.MEMBER, 30))
_FINAL = (*_APPEAL_OPEN, event(Move.LET_STAND, Role.BOOK, 44))

WAYS: dict[moves.State, tuple[record.Event, ...]] = {
    moves.State.NOTED: (note(),),
    moves.State.CHECKING: (note(), check()),
    moves.State.SET_ASIDE: (
        *(note(), check()),
        event(Move.SET_ASIDE, Role.BOARD, 5, reason="The scale was faulty."),
    ),
    moves.State.TOLD: _TOLD,
    moves.State.ANSWERED: _ANSWERED,
    moves.State.UNANSWERED: (*_TOLD, event(Move.CLOSE_SILENCE, Role.BOOK, 25)),
    moves.State.DECIDED: _DECIDED,
    moves.State.APPEAL_OPEN: _APPEAL_OPEN,
    moves.State.UNDER_APPEAL: _UNDER_APPEAL,
    moves.State.OVERTURNED: (
        *_UNDER_APPEAL,
        event(Move.OVERTURN, Role.ASSEMBLY, 40, reason="Two boats were confused."),
    ),
    moves.State.FINAL: _FINAL,
    moves.State.DONE: (*_FINAL, event(Move.COMPLETE, Role.SECRETARY, 60)),
}
