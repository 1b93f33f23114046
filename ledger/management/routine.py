"""How the scenario's people handle each case: their own acts, and habit where no act is named."""

from collections.abc import Callable, Iterator
from datetime import date, datetime, timedelta

from ledger.cases import operations as cases
from ledger.cases import queries
from ledger.management import scenario_records as records
from ledger.management.stage import Play
from ledger.movements import operations as movements
from ledger.movements import queries as movements_queries

Happening = tuple[datetime, Callable[[], None]]
CaseAct = records.Answer | records.SetAside | records.Appeal | records.AppealDecision


def happenings(play: Play, day: date) -> Iterator[Happening]:
    """Yield what habit makes people do in cases on a day."""
    for case in queries.cases(commons_id=play.commons_id, is_open=True):
        planned = _next(play, case)
        if planned is not None and play.day_of(planned[0]) == day:
            yield planned


def act(play: Play, done: CaseAct) -> None:
    """Make the move that somebody makes in a case by an act of the scenario."""
    case = _case(play, done.case)
    match done:
        case records.Answer():
            _move(play, case, "answer", done.by, reason=done.words)
        case records.SetAside():
            reason = f"{done.reason}: {done.words}"
            _move(play, case, "set_aside", done.by, reason=reason)
        case records.Appeal():
            _move(play, case, "lodge_appeal", done.by, reason=done.words)
        case records.AppealDecision():
            move = "uphold" if done.upheld else "overturn"
            _move(play, case, move, done.by, reason=done.words)


def pay(play: Play, reference: records.CaseRef, *, amount: int) -> None:
    """Pay what a final case charged."""
    _pay(play, _case(play, reference), amount=amount)


def _next(play: Play, case: queries.CaseRecord) -> Happening | None:
    """Return when habit moves a case on, and the move; None where it waits for somebody else."""
    habits, so_far = play.scenario.routine, case.so_far
    last = so_far.last_on
    match so_far.state:
        case "noted":
            when = _after(play, last, habits.take_up)
            return when, lambda: _take_up(play, case)
        case "checking" if case.finding.standing and not _to_be_set_aside(play, case):
            when = _after(play, last, habits.tell.habit)
            return when, lambda: _tell(play, case, "tell")
        case "told" if so_far.told_on is None:
            again = last + timedelta(days=habits.tell.again_after_days)
            when = play.at(again, habits.tell.habit.clock)
            return when, lambda: _tell(play, case, "attempt")
        case "answered" | "unanswered" if not _to_be_set_aside(play, case):
            return _decision_day(play, case), lambda: _decide(play, case)
        case "decided":
            day = last + timedelta(days=habits.decide.reasons_after_days)
            when = play.at(day, habits.tell.habit.clock)
            return when, lambda: _deliver_reasons(play, case)
        case "final":
            return _carrying_out(play, case)
        case _:
            return None


def _after(play: Play, last: date, habit: records.Habit) -> datetime:
    return play.at(last + timedelta(days=habit.after_days), habit.clock)


def _take_up(play: Play, case: queries.CaseRecord) -> None:
    """Name the officer whose turn it is among those with no part in the case."""
    officers = play.scenario.routine.officers
    turn = officers[case.number % len(officers) :] + officers[: case.number % len(officers)]
    officer = next(each for each in turn if each not in case.so_far.subjects)
    _move(
        play,
        case,
        "check",
        play.scenario.routine.take_up.by,
        officer=officer,
    )


def _tell(play: Play, case: queries.CaseRecord, move: str) -> None:
    telling = play.scenario.routine.tell
    fails = move == "tell" and _reference(case) in telling.fails_for
    handed = cases.Handed(
        on=play.day_of(play.clock.now),
        means=telling.failing_means if fails else telling.means,
        proved=not fails,
    )
    # The officer stands behind the notice; the secretary carries it.
    teller = telling.habit.by
    _move(play, case, move, teller, handed=handed)


def _decision_day(play: Play, case: queries.CaseRecord) -> datetime:
    deciding = play.scenario.routine.decide
    if case.so_far.concerns_board:
        after = play.at(case.so_far.last_on, deciding.own_at.timetz())
        return max(deciding.own_at, after)
    wait = (deciding.weekday - case.so_far.last_on.weekday() - 1) % 7 + 1
    return play.at(case.so_far.last_on + timedelta(days=wait), deciding.clock)


def _decide(play: Play, case: queries.CaseRecord) -> None:
    deciding = play.scenario.routine.decide
    by = deciding.own_by if case.so_far.concerns_board else deciding.by
    answered = case.so_far.state == "answered"
    heard = "after the member's answer" if answered else "the member said nothing"
    finding = case.finding.finding
    reason = f"Clause {finding.key.clause} was not kept; {heard}. {finding.working[-1]}"
    _move(play, case, "decide", by, reason=reason)


def _deliver_reasons(play: Play, case: queries.CaseRecord) -> None:
    handed = cases.Handed(
        on=play.day_of(play.clock.now), means=play.scenario.routine.tell.means, proved=True
    )
    _move(play, case, "open_appeal", records.Actor(role="book", member=None), handed=handed)


def _carrying_out(play: Play, case: queries.CaseRecord) -> Happening | None:
    """Return the payment that is due, or the completion of what is worked off."""
    habits, so_far = play.scenario.routine, case.so_far
    final_on = so_far.final_on
    assert final_on is not None, "a final case became final on a day"
    if so_far.amount_minor:
        if _reference(case) in habits.pay.unpaid or _pays_by_act(play, case):
            return None
        when = play.at(final_on + timedelta(days=habits.pay.after_days), habits.pay.clock)
        return when, lambda: _pay(play, case, amount=so_far.amount_minor)
    if queries.measure(commons_id=play.commons_id, case=case) in habits.complete.steps:
        when = _after(play, final_on, habits.complete.habit)
        return when, lambda: _complete(play, case)
    return None


def _pay(play: Play, case: queries.CaseRecord, *, amount: int) -> None:
    movements.pay_due(
        commons_id=play.commons_id,
        member=case.finding.finding.key.subject,
        kind=movements_queries.FINE,
        amount=amount,
        hand=play.hand_of("secretary"),
    )
    _complete(play, queries.case(commons_id=play.commons_id, number=case.number))


def _complete(play: Play, case: queries.CaseRecord) -> None:
    _move(play, case, "complete", play.scenario.routine.complete.habit.by)


def _move(
    play: Play,
    case: queries.CaseRecord,
    move: str,
    by: records.Actor,
    *,
    reason: str = "",
    officer: int | None = None,
    handed: cases.Handed | None = None,
) -> None:
    # A board member who is not named is the case's officer.
    is_officer = by.role == "board" and by.member is None
    cases.move(
        commons_id=play.commons_id,
        case=case.number,
        act=cases.Act(
            move=move,
            role=by.role,
            member=case.so_far.officer if is_officer else by.member,
            reason=reason,
            officer=officer,
            handed=handed,
        ),
        hand=play.hand_of("secretary"),
    )


def _case(play: Play, reference: records.CaseRef) -> queries.CaseRecord:
    return queries.case_on(
        commons_id=play.commons_id,
        clause=reference.clause,
        subject=reference.subject,
        first=reference.window_first,
    )


def _reference(case: queries.CaseRecord) -> records.CaseRef:
    key = case.finding.finding.key
    return records.CaseRef(clause=key.clause, subject=key.subject, window_first=key.window.first)


def _to_be_set_aside(play: Play, case: queries.CaseRecord) -> bool:
    """Return whether the next thing done in the case is to set it aside, so that habit waits."""
    to_come = (done for done in _acts_on(play, case) if done.at > play.clock.now)
    return isinstance(next(to_come, None), records.SetAside)


def _pays_by_act(play: Play, case: queries.CaseRecord) -> bool:
    return any(isinstance(done, records.Payment) for done in _acts_on(play, case))


def _acts_on(play: Play, case: queries.CaseRecord) -> Iterator[CaseAct | records.Payment]:
    """Yield the scenario's acts on a case, in order of time."""
    for done in play.scenario.acts:
        if not isinstance(done, records.Correction) and done.case == _reference(case):
            yield done
