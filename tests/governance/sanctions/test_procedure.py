"""Why a move is refused, and the border between refused and accepted."""

from datetime import UTC, date, datetime

import pytest

from governance import periods
from governance.sanctions import procedure, record
from governance.sanctions.moves import Move, Role, State
from tests.governance.sanctions import acts


def at(state: State) -> record.CaseSoFar:
    return acts.walked(acts.WAYS[state])


def board(member: int) -> record.Actor:
    return record.Actor(role=Role.BOARD, member=member)


class TestStateAndRole:
    def test_a_decision_without_a_notice(self) -> None:
        with pytest.raises(
            procedure.WrongState,
            match="decide does not follow checking; accepted from there:"
            " set_aside, tell, return_to_checking",
        ):
            acts.moved(at(State.CHECKING), acts.decide())

    def test_a_decision_before_any_answer(self) -> None:
        with pytest.raises(procedure.WrongState, match="decide does not follow told"):
            acts.moved(at(State.TOLD), acts.decide())

    def test_a_case_begins_with_a_note(self) -> None:
        with pytest.raises(procedure.WrongState, match="follow nothing; accepted from there: note"):
            acts.walked((acts.check(),))

    def test_a_done_case_stays(self) -> None:
        with pytest.raises(procedure.WrongState, match="accepted from there: no move"):
            acts.moved(at(State.DONE), acts.decide(70))

    def test_the_book_decides_nothing(self) -> None:
        decision = acts.decide(actor=acts.ACTORS[Role.BOOK])
        with pytest.raises(
            procedure.WrongRole, match="decide is not for the book; accepted: assembly, board"
        ):
            acts.moved(at(State.ANSWERED), decision)


class TestParts:
    def test_a_note_names_somebody(self) -> None:
        with pytest.raises(procedure.PartMissing, match="the members concerned are named"):
            acts.walked((acts.note(subjects=frozenset()),))

    @pytest.mark.parametrize("reason", ["", "  "])
    def test_set_aside_needs_a_reason(self, reason: str) -> None:
        dropped = acts.event(Move.SET_ASIDE, Role.BOARD, 12, reason=reason)
        with pytest.raises(
            procedure.PartMissing, match="set_aside is refused: it needs that a reason is given"
        ):
            acts.moved(at(State.CHECKING), dropped)

    def test_a_decision_needs_its_reasons_and_step(self) -> None:
        with pytest.raises(procedure.PartMissing, match="a reason is given"):
            acts.moved(at(State.ANSWERED), acts.decide(reason=""))
        with pytest.raises(procedure.PartMissing, match="the step is named"):
            acts.moved(at(State.ANSWERED), acts.decide(step=None))

    @pytest.mark.parametrize("move", [Move.UPHOLD, Move.OVERTURN])
    def test_an_appeal_is_answered_with_reasons(self, move: Move) -> None:
        with pytest.raises(procedure.PartMissing, match="a reason is given"):
            acts.moved(at(State.UNDER_APPEAL), acts.event(move, Role.ASSEMBLY, 40))

    def test_going_back_says_why(self) -> None:
        with pytest.raises(procedure.PartMissing, match="a reason is given"):
            acts.moved(at(State.TOLD), acts.event(Move.RETURN_TO_CHECKING, Role.BOOK, 12))

    def test_a_check_names_an_officer(self) -> None:
        with pytest.raises(procedure.PartMissing, match="a case officer"):
            acts.walked((acts.note(), acts.check(officer=None)))

    def test_telling_records_a_delivery(self) -> None:
        with pytest.raises(procedure.PartMissing, match="the attempt at delivery is recorded"):
            acts.moved(at(State.CHECKING), acts.tell(delivery=None))


class TestConflicts:
    """Nobody is officer or judge in a case of their own, their household's or their reporting."""

    NOTED_BY_MONITOR = acts.event(Move.NOTE, Role.MONITOR, 1, subjects=acts.SUBJECTS)
    NOTED_BY_BOARD = acts.event(Move.NOTE, Role.BOARD, 1, subjects=acts.SUBJECTS)

    @pytest.mark.parametrize(
        ("noted", "officer", "link"),
        [
            (acts.note(), 6, "is concerned by it or lives in the household concerned"),
            (acts.note(), 43, "is concerned by it or lives in the household concerned"),
            (NOTED_BY_BOARD, 12, "reported it"),
            (NOTED_BY_MONITOR, 8, "reported it"),
            (acts.note(monitors=frozenset({21})), 21, "watched as a monitor"),
        ],
    )
    def test_an_officer(self, noted: record.Event, officer: int, link: str) -> None:
        with pytest.raises(procedure.ConflictOfInterest, match=f"member {officer} {link}"):
            acts.walked((noted, acts.check(officer=officer)))

    @pytest.mark.parametrize("member", [6, 43, 12, 21])
    @pytest.mark.parametrize("move", [Move.DECIDE, Move.SET_ASIDE])
    def test_whoever_decides_or_sets_aside(self, member: int, move: Move) -> None:
        noted = acts.event(
            Move.NOTE, Role.BOARD, 1, subjects=acts.SUBJECTS, monitors=frozenset({21})
        )
        case = acts.walked((noted, acts.check(), acts.tell(), acts.answer()))
        decision = acts.event(move, Role.BOARD, 20, actor=board(member), reason="So be it.", step=0)
        with pytest.raises(procedure.ConflictOfInterest, match=f"member {member} "):
            acts.moved(case, decision)

    def test_another_board_member_may(self) -> None:
        case = acts.walked((self.NOTED_BY_BOARD, acts.check(), acts.tell(), acts.answer()))
        assert acts.moved(case, acts.decide(actor=board(27))).state is State.DECIDED

    def test_a_monitor_named_only_at_the_decision(self) -> None:
        with pytest.raises(procedure.ConflictOfInterest, match="member 12 watched"):
            acts.moved(at(State.ANSWERED), acts.decide(monitors=frozenset({12})))

    def test_a_speaker_of_the_assembly_too(self) -> None:
        speaker = record.Actor(role=Role.ASSEMBLY, member=43)
        upheld = acts.event(Move.UPHOLD, Role.ASSEMBLY, 40, actor=speaker, reason="Heard.")
        with pytest.raises(procedure.ConflictOfInterest):
            acts.moved(at(State.UNDER_APPEAL), upheld)


class TestOneOfTheBoard:
    @pytest.mark.parametrize("stated_at", ["note", "check", "decide"])
    def test_the_board_does_not_decide_on_its_own(self, stated_at: str) -> None:
        flag = {stated_at: {"concerns_board": True}}
        case = acts.walked(
            (
                acts.note(**flag.get("note", {})),
                acts.check(**flag.get("check", {})),
                acts.tell(),
                acts.answer(),
            )
        )
        with pytest.raises(procedure.OneOfTheBoard, match="accepted: assembly"):
            acts.moved(case, acts.decide(**flag.get("decide", {})))

    def test_nor_sets_it_aside(self) -> None:
        case = acts.walked((acts.note(concerns_board=True), acts.check()))
        dropped = acts.event(Move.SET_ASIDE, Role.BOARD, 5, reason="We know him.")
        with pytest.raises(procedure.OneOfTheBoard):
            acts.moved(case, dropped)

    def test_the_assembly_decides(self) -> None:
        noted = acts.note(concerns_board=True)
        case = acts.walked((noted, acts.check(), acts.tell(), acts.answer()))
        decision = acts.decide(actor=acts.ACTORS[Role.ASSEMBLY])
        assert acts.moved(case, decision).state is State.DECIDED


class TestDays:
    def test_a_move_is_not_dated_before_the_last(self) -> None:
        with pytest.raises(
            procedure.BeforeLastMove,
            match="answer is dated 2026-03-11; accepted from the day of the last move, 2026-03-12",
        ):
            acts.moved(at(State.TOLD), acts.answer(9))
        assert acts.moved(at(State.TOLD), acts.answer(10)).state is State.ANSWERED

    @pytest.mark.parametrize("delivered", [2, 11])
    def test_a_delivery_lies_between_the_last_move_and_its_recording(self, delivered: int) -> None:
        with pytest.raises(
            procedure.DeliveryOutOfOrder, match="accepted from 2026-03-05 to 2026-03-12"
        ):
            acts.moved(at(State.CHECKING), acts.tell(10, delivery=acts.delivery(delivered)))

    @pytest.mark.parametrize("delivered", [3, 10])
    def test_both_ends_are_accepted(self, delivered: int) -> None:
        told = acts.moved(at(State.CHECKING), acts.tell(10, delivery=acts.delivery(delivered)))
        assert told.told_on == acts.day(delivered)


class TestSilence:
    @staticmethod
    def closed(case: record.CaseSoFar, number: int) -> record.CaseSoFar:
        return acts.moved(case, acts.event(Move.CLOSE_SILENCE, Role.BOOK, number))

    def test_proved_delivery(self) -> None:
        with pytest.raises(procedure.TooEarly, match="accepted from 2026-03-27"):
            self.closed(at(State.TOLD), 24)
        assert self.closed(at(State.TOLD), 25).state is State.UNANSWERED

    def test_two_failed_attempts_by_different_means(self) -> None:
        first = acts.tell(10, delivery=acts.delivery(10, proved=False))
        second = acts.event(
            Move.ATTEMPT, Role.SECRETARY, 17, delivery=acts.delivery(17, "visit", proved=False)
        )
        case = acts.walked((acts.note(), acts.check(), first, second))
        with pytest.raises(procedure.TooEarly):
            self.closed(case, 31)
        assert self.closed(case, 32).state is State.UNANSWERED

    def test_a_warning_is_answered_sooner(self) -> None:
        case = acts.walked((acts.note(), acts.check(), acts.tell(proposes_warning=True)))
        with pytest.raises(procedure.TooEarly):
            self.closed(case, 17)
        assert self.closed(case, 18).state is State.UNANSWERED

    def test_one_unproved_attempt_stays_told_for_ever(self) -> None:
        first = acts.tell(10, delivery=acts.delivery(10, proved=False))
        case = acts.walked((acts.note(), acts.check(), first))
        with pytest.raises(procedure.NotDelivered, match="two attempts by different means"):
            self.closed(case, 400)

    def test_an_attempt_says_by_what_means(self) -> None:
        nameless = acts.tell(10, delivery=acts.delivery(10, " ", proved=False))
        with pytest.raises(procedure.PartMissing, match="recorded with its means"):
            acts.walked((acts.note(), acts.check(), nameless))

    def test_nothing_is_left_to_try_after_proof(self) -> None:
        again = acts.event(Move.ATTEMPT, Role.SECRETARY, 12, delivery=acts.delivery(12, "visit"))
        with pytest.raises(procedure.AlreadyDelivered, match="delivered on 2026-03-12"):
            acts.moved(at(State.TOLD), again)


class TestAnswer:
    def test_a_stranger(self) -> None:
        stranger = record.Actor(role=Role.MEMBER, member=7)
        with pytest.raises(procedure.NotConcerned, match="member 7; accepted: 6, 43"):
            acts.moved(at(State.TOLD), acts.answer(actor=stranger))

    @pytest.mark.parametrize("member", [6, 43])
    def test_anybody_of_the_household(self, member: int) -> None:
        actor = record.Actor(role=Role.MEMBER, member=member)
        assert acts.moved(at(State.TOLD), acts.answer(actor=actor)).state is State.ANSWERED

    def test_spoken_and_written_down_by_the_secretary(self) -> None:
        spoken = acts.answer(actor=acts.ACTORS[Role.SECRETARY])
        assert acts.moved(at(State.TOLD), spoken).state is State.ANSWERED


class TestAppeal:
    def test_the_reasons_need_proof_of_delivery(self) -> None:
        unproved = acts.open_appeal(delivery=acts.delivery(22, proved=False))
        with pytest.raises(procedure.DeliveryUnproved):
            acts.moved(at(State.DECIDED), unproved)

    @pytest.mark.parametrize(
        ("instant", "accepted"),
        [
            (datetime(2026, 4, 14, 22, 59, tzinfo=UTC), True),  # 23:59 in Dublin, summer time
            (datetime(2026, 4, 14, 23, 0, tzinfo=UTC), False),  # midnight there, still the 14th UTC
        ],
    )
    def test_the_last_minute_in_local_time(self, instant: datetime, accepted: bool) -> None:
        """Reasons delivered on 24 March, 21 days: the last day is 14 April."""
        on = periods.local_day(instant, zone="Europe/Dublin")
        lodged = record.Event(move=Move.LODGE_APPEAL, actor=acts.ACTORS[Role.MEMBER], on=on)
        if accepted:
            assert acts.moved(at(State.APPEAL_OPEN), lodged).state is State.UNDER_APPEAL
            return
        with pytest.raises(
            procedure.TooLate, match="2026-04-15 is too late; accepted to 2026-04-14, that day"
        ):
            acts.moved(at(State.APPEAL_OPEN), lodged)

    def test_a_decision_stands_from_the_day_after(self) -> None:
        with pytest.raises(procedure.TooEarly, match="accepted from 2026-04-15"):
            acts.moved(at(State.APPEAL_OPEN), acts.event(Move.LET_STAND, Role.BOOK, 43))
        stands = acts.moved(at(State.APPEAL_OPEN), acts.event(Move.LET_STAND, Role.BOOK, 44))
        assert stands.final_on == date(2026, 4, 15)

    def test_a_stranger_cannot_appeal(self) -> None:
        stranger = record.Actor(role=Role.MEMBER, member=7)
        lodged = acts.event(Move.LODGE_APPEAL, Role.MEMBER, 30, actor=stranger)
        with pytest.raises(procedure.NotConcerned):
            acts.moved(at(State.APPEAL_OPEN), lodged)


class TestGoingBack:
    def test_a_case_sent_back_is_told_again_before_a_decision(self) -> None:
        back = acts.event(Move.RETURN_TO_CHECKING, Role.BOOK, 50, reason="Entry 812 was reversed.")
        case = acts.moved(at(State.FINAL), back)
        with pytest.raises(procedure.WrongState):
            acts.moved(case, acts.decide(51))
        told = acts.moved(case, acts.tell(52))
        assert (told.state, told.told_on) == (State.TOLD, acts.day(52))

    def test_a_withdrawn_finding_ends_in_a_reasoned_set_aside(self) -> None:
        back = acts.event(Move.RETURN_TO_CHECKING, Role.BOOK, 50, reason="The finding was wrong.")
        dropped = acts.event(Move.SET_ASIDE, Role.BOARD, 51, reason="Nothing is left of it.")
        assert acts.moved(acts.moved(at(State.FINAL), back), dropped).state is State.SET_ASIDE


def test_every_refusal_has_its_own_code() -> None:
    codes = [each.code for each in procedure.MoveRefused.__subclasses__()]
    assert len(codes) == len(set(codes)) == 13
    assert all(code.startswith("procedure.") for code in codes)
