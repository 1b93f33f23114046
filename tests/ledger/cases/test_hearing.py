"""The cases hear of findings: noted once, sent back when the finding changed, and no oftener."""

from datetime import date

import pytest

from governance.sanctions.moves import Move, State
from ledger.cases import models, operations, queries
from ledger.journal import queries as journal
from ledger.judgement import queries as judgement
from tests.ledger import scene
from tests.ledger.book_text import book_text
from tests.ledger.builders import line
from tests.ledger.cases import walks

MONDAY, TUESDAY, WEDNESDAY = date(2026, 3, 2), date(2026, 3, 3), date(2026, 3, 4)


def states(bay: scene.Scene) -> list[State]:
    return [each.so_far.state for each in queries.cases(commons_id=bay.commons_id)]


class TestNote:
    def test_a_finding_with_a_ladder_is_noted_and_accuses_nobody(self, bay: scene.Scene) -> None:
        case = bay.case(walks.noted(bay, MONDAY))
        assert case.so_far.state is State.NOTED
        assert case.ladder == "ladder.overdraw"
        assert case.so_far.told_on is None
        assert case.events[0].on == MONDAY

    def test_a_household_finding_concerns_all_of_it(self, bay: scene.Scene) -> None:
        case = bay.case(walks.noted(bay, MONDAY, member=6))
        assert case.so_far.subjects == {5, 6}
        assert queries.responsible(case) == {5, 6}

    def test_a_members_finding_concerns_the_household_and_holds_one(self, bay: scene.Scene) -> None:
        """Member 6 has no allotment of mullet at all."""
        bay.lands("1", line("mullet", "1"), member=6, day=MONDAY)
        bay.judges(MONDAY)
        bay.hears()
        case = bay.case(1)
        assert case.so_far.subjects == {5, 6}
        assert queries.responsible(case) == {6}

    def test_hearing_again_appends_nothing(self, bay: scene.Scene) -> None:
        walks.noted(bay, MONDAY)
        before = bay.size
        assert bay.hears() == 0
        assert bay.hears(1) == 0
        assert bay.size == before
        assert states(bay) == [State.NOTED]

    def test_a_finding_withdrawn_before_it_was_heard_is_not_noted(self, bay: scene.Scene) -> None:
        number = bay.lands("1", line("clams", "43"), day=MONDAY)
        bay.judges(MONDAY)
        bay.corrects(number, "1", line("clams", "1"), day=MONDAY)
        bay.judges(MONDAY)
        assert bay.hears() == 0
        assert states(bay) == []

    def test_the_daily_job_leads_from_the_slip_to_the_case(self, bay: scene.Scene) -> None:
        bay.lands("1", line("clams", "43"), day=MONDAY)
        bay.midnight(TUESDAY)
        bay.drains()
        assert states(bay) == [State.NOTED]

    def test_a_book_without_a_procedure_is_said_to_have_none(self, bay: scene.Scene) -> None:
        text = book_text(edition=2, first=MONDAY)
        begins = text.index('  - id: "8.1"')
        without = text[:begins] + text[text.index("ladders:") :]
        scene.adopts(bay, without)
        with pytest.raises(operations.NoProcedure):
            walks.noted(bay, MONDAY)


class TestSendBack:
    def test_a_withdrawn_finding_sends_the_case_back_and_forgets_the_notice(
        self, bay: scene.Scene
    ) -> None:
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        correct(bay, "10")
        assert bay.hears() == 1
        after = bay.case(case)
        assert after.so_far.state is State.CHECKING
        assert after.so_far.told_on is None
        assert (after.version, after.finding.standing) == (2, False)
        assert "withdrawn" in after.events[-1].reason
        assert bay.hears() == 0

    def test_a_changed_finding_sends_the_case_back(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        correct(bay, "45")
        assert bay.hears() == 1
        assert bay.case(case).so_far.state is State.CHECKING
        assert bay.case(case).finding.finding.total == 45_000

    def test_an_answer_in_between_does_not_hide_the_change(self, bay: scene.Scene) -> None:
        """The member answered to the old figures: the case goes back all the same."""
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        correct(bay, "45")
        bay.act(case, walks.answer())
        assert bay.case(case).version == 1
        assert bay.hears() == 1
        assert bay.case(case).so_far.state is State.CHECKING

    def test_a_case_only_noted_stays_and_rests_on_what_is_checked(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        correct(bay, "45")
        assert bay.hears() == 0
        bay.act(case, walks.check())
        assert (bay.case(case).so_far.state, bay.case(case).version) == (State.CHECKING, 2)

    @pytest.mark.parametrize("kilograms", ["45", "10"])
    def test_nothing_is_decided_on_figures_that_were_not_told(
        self, bay: scene.Scene, kilograms: str
    ) -> None:
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        bay.act(case, walks.answer())
        correct(bay, kilograms)
        before = bay.size
        refusals = (operations.FindingChanged, operations.FindingWithdrawn)
        with pytest.raises(refusals) as refused:
            bay.act(case, walks.decide())
        assert "finding 1" in str(refused.value)
        assert bay.size == before

    def test_nobody_is_told_of_a_finding_that_was_withdrawn(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        bay.act(case, walks.check())
        correct(bay, "10")
        with pytest.raises(operations.FindingWithdrawn):
            bay.act(case, walks.tell(WEDNESDAY))
        bay.act(case, walks.set_aside())
        assert states(bay) == [State.SET_ASIDE]

    def test_the_return_is_nobodys_move(self, bay: scene.Scene) -> None:
        """By hand it would leave a fine standing that was decided on nothing."""
        case = walks.noted(bay, MONDAY)
        bay.act(case, walks.check())
        act = operations.Act(move="return_to_checking", role="book", reason="again")
        before = bay.size
        with pytest.raises(operations.NotByHand):
            bay.act(case, act)
        assert bay.size == before


class TestStandsAnew:
    """What was set aside because nothing stood is no shield when something does."""

    def test_a_finding_that_stands_again_gets_another_case(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        bay.act(case, walks.check())
        again = correct(bay, "10")
        bay.hears()
        bay.act(case, walks.set_aside())
        bay.corrects(again, "1", line("clams", "44"), day=MONDAY)
        bay.judges(WEDNESDAY)
        assert bay.hears() == 1
        assert states(bay) == [State.SET_ASIDE, State.NOTED]
        assert bay.case(2).finding.number == bay.case(1).finding.number
        assert bay.hears() == 0

    def test_what_the_board_set_aside_on_its_merits_stays_so(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        bay.act(case, walks.check())
        bay.act(case, walks.set_aside())
        correct(bay, "45")
        assert bay.hears() == 0
        assert states(bay) == [State.SET_ASIDE]


class TestEntries:
    def test_every_move_is_an_entry_with_actor_and_reason(self, bay: scene.Scene) -> None:
        case = walks.noted(bay, MONDAY)
        walks.told(bay, case, TUESDAY)
        walks.decided(bay, case, WEDNESDAY)
        record = bay.case(case)
        assert len(record.entries) == len(record.events) == 5
        finding = judgement.finding(commons_id=bay.commons_id, number=1).finding
        for event, number in zip(record.events, record.entries, strict=True):
            entry = journal.entry(commons_id=bay.commons_id, number=number)
            assert entry.kind == f"case_{event.move.value}"
            assert entry.facts["role"] == event.actor.role.value
            assert entry.facts["actor"] == event.actor.member
            assert entry.facts["inputs"] == finding.inputs
            assert (entry.facts["clause"], entry.facts["edition"]) == ("3.2", 1)
            assert entry.texts.get("reason", "") == event.reason
        assert [each.reason for each in record.events] == [
            "",
            "",
            "",
            "The scales were wet.",
            "More was landed than agreed.",
        ]

    def test_a_reason_stands_where_it_can_be_erased_and_nowhere_else(self) -> None:
        assert "reason" not in {field.name for field in models.Event._meta.get_fields()}

    def test_the_notes_entry_is_the_books_own(self, bay: scene.Scene) -> None:
        bay.lands("1", line("clams", "43"), day=MONDAY)
        bay.midnight(TUESDAY)
        bay.drains()
        entry = journal.entry(commons_id=bay.commons_id, number=bay.case(1).entries[0])
        assert (entry.by, entry.facts["role"], entry.facts["actor"]) == (0, "book", None)
        assert bay.case(1).events[0].move is Move.NOTE


def correct(bay: scene.Scene, kilograms: str, *, day: date = MONDAY) -> int:
    """Correct the slip of a day and judge again, two days later."""
    bay.morning(WEDNESDAY)
    (number,) = (
        each.number
        for each in journal.rows(commons_id=bay.commons_id, kinds=("withdrawal",))
        if each.day == day
    )
    again = bay.corrects(number, "1", line("clams", kilograms), day=day)
    bay.judges(TUESDAY)
    return again
