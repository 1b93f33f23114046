"""Who may move a case, what is refused and leaves nothing, and the deadlines that jobs ring."""

from datetime import UTC, date, datetime
from decimal import Decimal

import pytest
from django.db import transaction

from governance.errors import StintbookError
from governance.sanctions import procedure
from governance.sanctions.moves import State
from ledger.cases import operations, queries
from ledger.cases.operations import Act
from ledger.fieldwork import operations as fieldwork
from ledger.foundation.models import Job
from tests.ledger import builders, scene
from tests.ledger.book_text import book_text
from tests.ledger.cases import walks

MONDAY, TUESDAY, WEDNESDAY = date(2026, 3, 2), date(2026, 3, 3), date(2026, 3, 4)


def refused(bay: scene.Scene, case: int, act: Act, why: type[StintbookError]) -> str:
    """Try a move, see it refused for a reason and leave nothing, and return the words."""
    before, jobs = bay.size, Job.objects.count()
    events = len(bay.case(case).events)
    with pytest.raises(why) as told:
        bay.act(case, act)
    assert (bay.size, Job.objects.count()) == (before, jobs)
    assert len(bay.case(case).events) == events
    return str(told.value)


class TestRefused:
    def test_an_office_that_is_not_held(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        act = Act(move="check", role="secretary", member=7, officer=1)
        words = refused(bay, case, act, operations.RoleNotHeld)
        assert "Member 7" in words and "secretary" in words and "2026-03-02" in words

    def test_a_move_that_does_not_follow(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        assert "noted" in refused(bay, case, walks.decide(), procedure.WrongState)

    def test_nobody_is_decided_about_untold(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        bay.act(case, walks.check())
        refused(bay, case, walks.decide(), procedure.WrongState)

    def test_somebody_of_the_household_as_officer(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        words = refused(bay, case, walks.check(officer=6), procedure.ConflictOfInterest)
        assert "member 6" in words

    def test_an_answer_by_another(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        words = refused(bay, case, walks.answer(member=7), procedure.NotConcerned)
        assert "5, 6" in words

    def test_a_decision_without_reasons(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        bay.act(case, walks.answer())
        act = Act(move="decide", role="board", member=1, reason="  ")
        refused(bay, case, act, procedure.PartMissing)

    def test_a_monitor_who_checked_the_take(self, bay: scene.Scene) -> None:
        """The check was of one of the household, which counts as one."""
        with transaction.atomic():
            fieldwork.record_inspections(
                commons_id=bay.commons_id,
                inspections=[
                    fieldwork.Inspection(
                        member=6,
                        monitor=2,
                        seen_at=builders.at(MONDAY),
                        zone="pier_sand",
                        seen=(("clams", Decimal("43"), "kg"),),
                    )
                ],
                hand=bay.hand,
            )
        case = walks.noted(bay, MONDAY)
        words = refused(bay, case, walks.check(officer=2), procedure.ConflictOfInterest)
        assert "watched" in words

    def test_a_case_that_is_not_there(self, bay: scene.Scene) -> None:
        with pytest.raises(queries.UnknownCase):
            bay.act(1, walks.check())

    @pytest.mark.parametrize(("move", "role"), [("forgive", "board"), ("decide", "king")])
    def test_a_word_that_the_procedure_does_not_know(self, move: str, role: str) -> None:
        with pytest.raises(operations.UnknownWord) as told:
            Act(move=move, role=role)
        assert "accepted are" in str(told.value)


class TestBoardsOwn:
    """Members 1 and 3 are the board; a case on either's household is not the board's."""

    def test_the_other_board_member_may_not_decide_and_the_assembly_may(
        self, bay: scene.Scene
    ) -> None:
        case = walks.noted(bay, MONDAY, member=2)
        walks_check = walks.check(officer=3)
        bay.morning(TUESDAY)
        bay.act(case, walks_check)
        bay.act(case, walks.tell(TUESDAY))
        assert bay.case(case).so_far.concerns_board
        bay.act(case, walks.answer(member=1))
        refused(bay, case, walks.decide(member=3), procedure.OneOfTheBoard)
        bay.act(case, walks.decide(role="assembly"))
        assert bay.case(case).so_far.state is State.DECIDED

    def test_an_ordinary_case_is_the_boards(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        assert not bay.case(case).so_far.concerns_board


def rings(bay: scene.Scene, case: int) -> str:
    with transaction.atomic():
        return operations.ring(commons_id=bay.commons_id, case=case, hand=bay.hand)


class TestAnswerTime:
    """Seven days to answer a warning, fourteen otherwise; the day of telling is day nought."""

    def test_silence_counts_on_the_day_after_the_last(self, bay: scene.Scene) -> None:
        """Told on 3 March, in winter time: the eighth day begins at midnight of UTC, 11 March."""
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        assert bay.case(case).so_far.proposes_warning
        bay.clock.set(datetime(2026, 3, 10, 23, 59, tzinfo=UTC))
        bay.drains()
        assert bay.case(case).so_far.state is State.TOLD
        bay.clock.set(datetime(2026, 3, 11, 0, 0, tzinfo=UTC))
        bay.drains()
        assert bay.case(case).so_far.state is State.UNANSWERED
        assert bay.case(case).so_far.last_on == date(2026, 3, 11)

    def test_across_the_change_to_summer_time(self, bay: scene.Scene) -> None:
        """Told on 22 March, the last day is the 29th, which ends at 23:00 UTC."""
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, date(2026, 3, 22))
        job = Job.objects.get(commons_id=bay.commons_id, kind="case_deadline")
        assert job.due_at == datetime(2026, 3, 29, 23, 0, tzinfo=UTC)
        bay.clock.set(datetime(2026, 3, 29, 22, 59, tzinfo=UTC))
        bay.drains()
        assert bay.case(case).so_far.state is State.TOLD
        bay.clock.set(datetime(2026, 3, 29, 23, 0, tzinfo=UTC))
        bay.drains()
        assert bay.case(case).so_far.state is State.UNANSWERED
        assert bay.case(case).so_far.last_on == date(2026, 3, 30)

    def test_an_answer_on_the_last_day_is_in_time(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        bay.clock.set(datetime(2026, 3, 10, 23, 59, tzinfo=UTC))
        bay.act(case, walks.answer())
        bay.clock.set(datetime(2026, 3, 11, 0, 0, tzinfo=UTC))
        done = [each for each in bay.drains() if each.job.kind == "case_deadline"]
        assert [each.outcome for each in done] == ["no longer due"]
        assert bay.case(case).so_far.state is State.ANSWERED

    def test_one_unproved_attempt_starts_no_clock(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        bay.morning(TUESDAY)
        bay.act(case, walks.check())
        bay.act(case, walks.tell(TUESDAY, proved=False))
        assert not Job.objects.filter(kind="case_deadline").exists()
        bay.midnight(date(2026, 4, 20))
        bay.drains()
        assert bay.case(case).so_far.state is State.TOLD

    def test_a_second_attempt_by_other_means_starts_it(self, bay: scene.Scene) -> None:
        """Attempts on 3 and 10 March: seven days from the 10th, so silence counts on the 18th."""
        case = walks.noted(bay, MONDAY)
        bay.morning(TUESDAY)
        bay.act(case, walks.check())
        bay.act(case, walks.tell(TUESDAY, proved=False, means="by hand"))
        bay.morning(date(2026, 3, 10))
        bay.act(case, walks.attempt(date(2026, 3, 10), means="by letter"))
        bay.midnight(date(2026, 3, 17))
        bay.drains()
        assert bay.case(case).so_far.state is State.TOLD
        bay.midnight(date(2026, 3, 18))
        bay.drains()
        assert bay.case(case).so_far.state is State.UNANSWERED

    def test_a_book_that_gives_more_days_by_then_is_heeded(self, bay: scene.Scene) -> None:
        """The job promised for the eighth day rings, and is promised again for the eleventh."""
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        longer = book_text(edition=2, first=date(2026, 3, 9)).replace(
            "answer_to_warning: 7 d", "answer_to_warning: 10 d"
        )
        scene.adopts(bay, longer)
        bay.midnight(date(2026, 3, 11))
        done = [each for each in bay.drains() if each.job.kind == "case_deadline"]
        assert [each.outcome for each in done] == ["not due before 2026-03-14"]
        assert bay.case(case).so_far.state is State.TOLD
        bay.midnight(date(2026, 3, 14))
        bay.drains()
        assert bay.case(case).so_far.state is State.UNANSWERED

    def test_a_finding_that_changed_stops_the_clock(self, bay: scene.Scene) -> None:
        """What the judge has found and the cases have not heard yet lets no deadline pass."""
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        bay.lands("more", builders.line("clams", "2"), member=6, day=MONDAY)
        bay.judges(TUESDAY)
        bay.midnight(date(2026, 3, 11))
        assert rings(bay, case).startswith("no longer due: finding 1 changed")
        bay.hears()
        assert bay.case(case).so_far.state is State.CHECKING


class TestAppealTime:
    """Twenty-one days from the delivery of the reasons, to the last minute of local time."""

    def reasons_given(self, bay: scene.Scene, day: date) -> int:
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        walks.appeal_opened(bay, case, day)
        return case

    def test_the_last_minute_counts_and_the_next_does_not(self, bay: scene.Scene) -> None:
        """Reasons on 8 March: the last day is the 29th, the day that summer time begins."""
        case = self.reasons_given(bay, date(2026, 3, 8))
        bay.clock.set(datetime(2026, 3, 29, 23, 0, tzinfo=UTC))
        words = refused(bay, case, walks.appeal(), procedure.TooLate)
        assert "2026-03-29" in words
        bay.clock.set(datetime(2026, 3, 29, 22, 59, tzinfo=UTC))
        bay.act(case, walks.appeal())
        assert bay.case(case).so_far.state is State.UNDER_APPEAL

    def test_without_appeal_it_becomes_final_by_itself(self, bay: scene.Scene) -> None:
        case = self.reasons_given(bay, date(2026, 3, 8))
        bay.clock.set(datetime(2026, 3, 29, 22, 59, tzinfo=UTC))
        bay.drains()
        assert bay.case(case).so_far.state is State.APPEAL_OPEN
        bay.clock.set(datetime(2026, 3, 29, 23, 0, tzinfo=UTC))
        bay.drains()
        assert bay.case(case).so_far.state is State.FINAL
        assert bay.case(case).so_far.final_on == date(2026, 3, 30)

    def test_nobody_makes_it_final_before(self, bay: scene.Scene) -> None:
        case = self.reasons_given(bay, date(2026, 3, 8))
        bay.morning(date(2026, 3, 29))
        refused(bay, case, Act(move="let_stand", role="book"), procedure.TooEarly)

    def test_an_appeal_lets_the_deadline_pass(self, bay: scene.Scene) -> None:
        case = self.reasons_given(bay, date(2026, 3, 8))
        bay.act(case, walks.appeal(member=6))
        bay.midnight(date(2026, 4, 20))
        done = [
            each.outcome
            for each in bay.drains()
            if each.job.kind == "case_deadline" and "let_stand" in each.job.key
        ]
        assert done == ["no longer due"]
        assert bay.case(case).so_far.state is State.UNDER_APPEAL
