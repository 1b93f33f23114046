"""What a case's events make of it."""

from datetime import date

import pytest

from governance.sanctions import record
from governance.sanctions.moves import Move, Role, State
from tests.governance.sanctions import acts


class TestActor:
    @pytest.mark.parametrize(
        "role", [Role.SECRETARY, Role.MONITOR, Role.BOARD, Role.AUDITOR, Role.MEMBER]
    )
    def test_a_person_needs_a_number(self, role: Role) -> None:
        with pytest.raises(record.ActorUnnamed, match=f"acts as {role} needs a member number"):
            record.Actor(role=role, member=None)

    @pytest.mark.parametrize("role", [Role.BOOK, Role.ASSEMBLY])
    def test_the_book_and_the_assembly_need_none(self, role: Role) -> None:
        assert record.Actor(role=role, member=None).member is None


class TestToldOn:
    """Proved delivery counts; without one, the last of at least two attempts by other means.

    Attempts lie a week apart.
    """

    @pytest.mark.parametrize(
        ("deliveries", "expected"),
        [
            ((), None),
            (((10, "post", True),), 10),
            (((10, "post", False),), None),
            (((10, "post", False), (17, "visit", False)), 17),
            (((10, "post", False), (17, "post", False)), None),
            (((10, "post", False), (17, "post", True)), 17),
            (((10, "post", False), (17, "visit", False), (24, "post", False)), 17),
            (((10, "post", False), (17, "visit", False), (24, "phone", False)), 24),
            (((10, "post", False), (17, "visit", False), (24, "phone", True)), 24),
            (((10, "post", False), (17, " Post", False)), None),
            (((10, "post", False), (10, "visit", False)), None),
            (((10, "post", False), (16, "visit", False)), None),
            (((10, "post", False), (16, "visit", False), (17, "phone", False)), 17),
            (((10, "post", False), (16, "visit", False), (17, "visit", False)), 17),
            (((10, "post", False), (17, "visit", False), (20, "phone", False)), 17),
            (((10, "post", False), (12, "visit", True)), 12),
        ],
    )
    def test_by_hand(
        self, deliveries: tuple[tuple[int, str, bool], ...], expected: int | None
    ) -> None:
        first = acts.walked(acts.WAYS[State.TOLD])
        case = record.CaseSoFar(
            state=first.state,
            last_on=first.last_on,
            subjects=first.subjects,
            concerns_board=False,
            reporter=None,
            monitors=frozenset(),
            deliveries=tuple(
                acts.delivery(number, means, proved=proved) for number, means, proved in deliveries
            ),
        )
        assert case.told_on == (None if expected is None else acts.day(expected))


class TestFold:
    @pytest.mark.parametrize("state", list(State))
    def test_recorded_events_make_the_case_that_advancing_made(self, state: State) -> None:
        assert record.fold(acts.WAYS[state]) == acts.walked(acts.WAYS[state])

    def test_what_a_case_knows_when_final(self) -> None:
        case = record.fold(acts.WAYS[State.FINAL])
        assert case == record.CaseSoFar(
            state=State.FINAL,
            last_on=date(2026, 4, 15),
            subjects=frozenset({6, 43}),
            concerns_board=False,
            reporter=None,
            monitors=frozenset(),
            officer=5,
            deliveries=(record.Delivery(on=date(2026, 3, 12), means="post", proved=True),),
            proposes_warning=False,
            decided_on=date(2026, 3, 22),
            step=1,
            amount_minor=300,
            reasons_delivered_on=date(2026, 3, 24),
            final_on=date(2026, 4, 15),
        )

    def test_a_return_to_checking_forgets_notice_and_decision(self) -> None:
        back = acts.event(Move.RETURN_TO_CHECKING, Role.BOOK, 50, reason="Entry 812 was reversed.")
        case = record.fold((*acts.WAYS[State.FINAL], back))
        assert case == record.CaseSoFar(
            state=State.CHECKING,
            last_on=acts.day(50),
            subjects=frozenset({6, 43}),
            concerns_board=False,
            reporter=None,
            monitors=frozenset(),
            officer=5,
        )

    def test_who_noted_it_is_its_reporter(self) -> None:
        noted = acts.event(Move.NOTE, Role.MONITOR, 1, subjects=acts.SUBJECTS)
        case = record.fold((noted,))
        assert (case.reporter, case.monitors) == (8, frozenset({8}))

    def test_facts_about_people_add_up(self) -> None:
        events = (
            acts.note(monitors=frozenset({8})),
            acts.check(concerns_board=True, monitors=frozenset({21})),
            acts.tell(),
        )
        case = record.fold(events)
        assert (case.concerns_board, case.monitors) == (True, frozenset({8, 21}))

    def test_a_proposed_warning_stays_proposed_at_the_next_attempt(self) -> None:
        first = acts.tell(10, proposes_warning=True, delivery=acts.delivery(10, proved=False))
        second = acts.event(
            Move.ATTEMPT, Role.SECRETARY, 17, delivery=acts.delivery(17, "visit", proved=False)
        )
        assert record.fold((acts.note(), acts.check(), first, second)).proposes_warning

    @pytest.mark.parametrize("events", [(), (acts.note(), acts.decide())])
    def test_an_impossible_run_is_an_assertion(self, events: tuple[record.Event, ...]) -> None:
        with pytest.raises(AssertionError):
            record.fold(events)
