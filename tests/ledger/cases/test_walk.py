"""Anybody tries anything in a case: a refusal leaves nothing, and nobody is decided untold."""

import random
from datetime import date

import pytest

from governance.errors import StintbookError
from governance.sanctions.moves import Move, Role, State
from governance.sanctions.record import Event
from ledger.cases.operations import Act
from tests.ledger import scene
from tests.ledger.builders import line
from tests.ledger.cases import walks

MEMBERS = (1, 2, 3, 4, 5, 6, 7, None)
MOST_TRIES = 140


def any_act(die: random.Random, on: date) -> Act:
    return Act(
        move=die.choice(list(Move)),
        role=die.choice(list(Role)),
        member=die.choice(MEMBERS),
        reason=die.choice(("", "A reason.", "Another.")),
        officer=die.choice((None, 1, 3, 5)),
        handed=die.choice((None, scene.handed(on), scene.handed(on, proved=False, means="post"))),
    )


def fitting_act(state: State, on: date) -> Act:
    """Return what the procedure would have somebody do next; a die alone seldom gets far."""
    match state:
        case State.NOTED:
            return walks.check()
        case State.CHECKING:
            return walks.tell(on)
        case State.TOLD:
            return walks.answer()
        case State.ANSWERED | State.UNANSWERED:
            return walks.decide()
        case State.DECIDED:
            return walks.reasons(on)
        case State.APPEAL_OPEN:
            return walks.appeal()
        case State.UNDER_APPEAL:
            return walks.judged_on_appeal(upheld=True)
        case _:
            return walks.complete()


def told_since_the_last_return(events: tuple[Event, ...]) -> bool:
    moves = [event.move for event in events]
    if Move.DECIDE not in moves:
        return True
    decided = len(moves) - 1 - moves[::-1].index(Move.DECIDE)
    returns = [at for at, move in enumerate(moves[:decided]) if move is Move.RETURN_TO_CHECKING]
    since = moves[(returns[-1] if returns else 0) : decided]
    return Move.TELL in since


@pytest.mark.parametrize("seed", range(5))
def test_whatever_is_tried(seed: int, bay: scene.Scene) -> None:
    die = random.Random(seed)
    day = date(2026, 3, 2)
    case = walks.noted(bay, day)
    made = refused = 0
    for attempt in range(MOST_TRIES):
        before, events = bay.size, bay.case(case).events
        today = bay.clock.now.date()
        fits = die.random() < 0.1
        try:
            act = fitting_act(bay.case(case).so_far.state, today) if fits else any_act(die, today)
            bay.act(case, act)
        except StintbookError as error:
            refused += 1
            assert str(error)
            assert bay.size == before
            assert bay.case(case).events == events
        else:
            made += 1
            after = bay.case(case)
            assert after.events[:-1] == events
            assert bay.size > before
            assert told_since_the_last_return(after.events)
        if die.random() < 0.1:
            bay.clock.advance(days=die.choice((1, 8, 15)))
        if die.random() < 0.05:
            bay.lands(f"more {attempt}", line("clams", "0.5"), member=6, day=day)
            bay.judges(day)
            bay.hears()
    assert made > 5 and refused > 50
