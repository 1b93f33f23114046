"""The days to answer and to appeal, at their borders.

The act is day 0. A notice proved on day 10 with 14 days leaves day 24 to answer, so silence shows
on day 25; a failed attempt on day 10 and another by a second means on day 17 make that day 32; a
warning's 7 days make it 18 and 25. Worked by hand from the rule.
"""

import pytest

from governance.sanctions import clocks, record
from governance.sanctions.moves import Move, Role, State
from tests.governance.sanctions import acts

PROVED = (acts.delivery(10),)
FAILED_TWICE = (acts.delivery(10, proved=False), acts.delivery(17, "visit", proved=False))


def told(deliveries: tuple[record.Delivery, ...], *, warning: bool) -> record.CaseSoFar:
    first, *others = deliveries
    number = (first.on - acts.ACT).days
    events = [acts.note(), acts.check()]
    events.append(acts.tell(number, delivery=first, proposes_warning=warning))
    for each in others:
        number = (each.on - acts.ACT).days
        events.append(acts.event(Move.ATTEMPT, Role.SECRETARY, number, delivery=each))
    return acts.walked(events)


@pytest.mark.parametrize(
    ("deliveries", "warning", "silent_from"),
    [
        (PROVED, False, 25),
        (FAILED_TWICE, False, 32),
        (PROVED, True, 18),
        (FAILED_TWICE, True, 25),
    ],
)
def test_silence_shows_on_the_day_after_the_answer_days(
    deliveries: tuple[record.Delivery, ...], warning: bool, silent_from: int
) -> None:
    case = told(deliveries, warning=warning)
    until = clocks.answer_until(case=case, procedure=acts.PROCEDURE)
    assert until == acts.day(silent_from - 1)
    due = clocks.due(case=case, procedure=acts.PROCEDURE)
    assert due == ((Move.CLOSE_SILENCE, acts.day(silent_from)),)


def test_one_unproved_attempt_starts_no_clock() -> None:
    case = told((acts.delivery(10, proved=False),), warning=False)
    assert clocks.answer_until(case=case, procedure=acts.PROCEDURE) is None
    assert clocks.due(case=case, procedure=acts.PROCEDURE) == ()


def test_the_appeal_runs_from_the_delivery_of_the_reasons() -> None:
    """Decided on day 20, reasons delivered on day 22, 21 days: day 43 is the last."""
    case = acts.walked(acts.WAYS[State.APPEAL_OPEN])
    assert clocks.appeal_until(case=case, procedure=acts.PROCEDURE) == acts.day(43)
    due = clocks.due(case=case, procedure=acts.PROCEDURE)
    assert due == ((Move.LET_STAND, acts.day(44)),)


def test_no_appeal_runs_before_the_reasons_are_delivered() -> None:
    case = acts.walked(acts.WAYS[State.DECIDED])
    assert clocks.appeal_until(case=case, procedure=acts.PROCEDURE) is None


@pytest.mark.parametrize("state", sorted(set(State) - {State.TOLD, State.APPEAL_OPEN}))
def test_no_other_state_waits_for_a_day(state: State) -> None:
    assert clocks.due(case=acts.walked(acts.WAYS[state]), procedure=acts.PROCEDURE) == ()
