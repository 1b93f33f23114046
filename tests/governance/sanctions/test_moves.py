"""Every state, move and role: accepted as written out here by hand, or refused with a reason."""

import itertools
from dataclasses import replace

import pytest

from governance.sanctions import moves, procedure, record
from governance.sanctions.moves import Move, Role, State
from tests.governance.sanctions import acts

ANYBODY = "book secretary monitor board assembly auditor member"

# state before, move, who may, state after
ALLOWED = f"""
-             note                {ANYBODY}           -> noted
noted         check               secretary           -> checking
checking      set_aside           board assembly      -> set_aside
checking      tell                secretary           -> told
checking      return_to_checking  book                -> checking
told          attempt             secretary           -> told
told          answer              member secretary    -> answered
told          close_silence       book                -> unanswered
told          return_to_checking  book                -> checking
answered      set_aside           board assembly      -> set_aside
answered      decide              board assembly      -> decided
answered      return_to_checking  book                -> checking
unanswered    decide              board assembly      -> decided
unanswered    return_to_checking  book                -> checking
decided       open_appeal         book                -> appeal_open
decided       return_to_checking  book                -> checking
appeal_open   lodge_appeal        member              -> under_appeal
appeal_open   let_stand           book                -> final
appeal_open   return_to_checking  book                -> checking
under_appeal  uphold              assembly            -> final
under_appeal  overturn            assembly            -> overturned
under_appeal  return_to_checking  book                -> checking
final         complete            secretary           -> done
final         return_to_checking  book                -> checking
"""


def _written_out() -> dict[tuple[State | None, Move, Role], State]:
    table = {}
    for line in ALLOWED.strip().splitlines():
        given, _, to = line.partition(" -> ")
        before, move, *roles = given.split()
        state = None if before == "-" else State(before)
        for role in roles:
            table[state, Move(move), Role(role)] = State(to.strip())
    return table


ACCEPTED = _written_out()

# The days on which each move finds its time right: the answer time over on day 25, the appeal
# time, from day 22, on until day 43 and over on day 44.
DAY_OF = {Move.CLOSE_SILENCE: 25, Move.LET_STAND: 44, Move.LODGE_APPEAL: 43}


def before(state: State | None, move: Move) -> record.CaseSoFar | None:
    if state is None:
        return None
    case = acts.walked(acts.WAYS[state])
    if move is Move.ATTEMPT and case.deliveries:
        # Another attempt makes sense only while the first one is not proved.
        return replace(case, deliveries=(acts.delivery(10, proved=False),))
    return case


def complete_event(case: record.CaseSoFar | None, move: Move, role: Role) -> record.Event:
    """Return the move with everything that any move could need."""
    number = DAY_OF.get(move, 20)
    if case is not None:
        number = max(number, (case.last_on - acts.ACT).days)
    return acts.event(
        move,
        role,
        number,
        reason="Because.",
        subjects=acts.SUBJECTS,
        officer=5,
        delivery=acts.delivery(number, "visit"),
        step=1,
    )


def test_the_table_by_hand_names_every_state_and_move() -> None:
    assert {move for _, move, _ in ACCEPTED} == set(Move)
    states = {state for state, _, _ in ACCEPTED} | set(ACCEPTED.values())
    assert states == {None, *State}
    assert set(acts.WAYS) == set(State)


@pytest.mark.parametrize("state", list(State))
def test_every_state_is_reached_by_accepted_moves(state: State) -> None:
    assert acts.walked(acts.WAYS[state]).state is state


@pytest.mark.parametrize("state", [None, *State])
def test_every_move_by_every_role(state: State | None) -> None:
    for move, role in itertools.product(Move, Role):
        case = before(state, move)
        event = complete_event(case, move, role)
        if (state, move, role) in ACCEPTED:
            moved = procedure.advance(case=case, event=event, procedure=acts.PROCEDURE)
            assert moved.state is ACCEPTED[state, move, role], (state, move, role)
            continue
        with pytest.raises(procedure.MoveRefused) as refused:
            procedure.advance(case=case, event=event, procedure=acts.PROCEDURE)
        right_state = any((state, move, other) in ACCEPTED for other in Role)
        expected = procedure.WrongRole if right_state else procedure.WrongState
        assert type(refused.value) is expected, (state, move, role)


def test_nothing_reaches_decided_without_told() -> None:
    """Take tell out of the table: no way from the note to a decision is left."""
    reached: set[State | None] = {None}
    for _ in State:
        for row in moves.TABLE:
            if row.move is not Move.TELL and reached & set(row.sources):
                reached.add(row.to)
    assert reached == {None, State.NOTED, State.CHECKING, State.SET_ASIDE}


def test_only_people_move_a_case_towards_a_decision() -> None:
    """What the book does by itself: count days, open what was delivered, go back."""
    by_the_book_alone = {row.move for row in moves.TABLE if row.roles == (Role.BOOK,)}
    assert by_the_book_alone == {
        Move.CLOSE_SILENCE,
        Move.OPEN_APPEAL,
        Move.LET_STAND,
        Move.RETURN_TO_CHECKING,
    }
    also = {row.move for row in moves.TABLE if Role.BOOK in row.roles} - by_the_book_alone
    assert also == {Move.NOTE}


def test_moves_from_lists_what_a_state_allows() -> None:
    assert moves.moves_from(State.APPEAL_OPEN) == (
        Move.LODGE_APPEAL,
        Move.LET_STAND,
        Move.RETURN_TO_CHECKING,
    )
    assert moves.moves_from(State.DONE) == ()


def test_each_move_has_one_row() -> None:
    assert sorted(row.move for row in moves.TABLE) == sorted(Move)
    assert moves.row_of(Move.TELL).to is State.TOLD
