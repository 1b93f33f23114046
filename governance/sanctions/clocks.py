"""The days that a fair procedure gives, counted from what was delivered."""

from datetime import date, timedelta

from governance.bylaws import clauses
from governance.sanctions import moves, record


def answer_until(*, case: record.CaseSoFar, procedure: clauses.Procedure) -> date | None:
    """Return the last day to answer, or None while the notice does not count as delivered."""
    if case.told_on is None:
        return None
    days = procedure.answer_to_warning_days if case.proposes_warning else procedure.answer_days
    return case.told_on + timedelta(days=days)


def appeal_until(*, case: record.CaseSoFar, procedure: clauses.Procedure) -> date | None:
    """Return the last day to appeal, or None while the reasons are not delivered."""
    if case.reasons_delivered_on is None:
        return None
    return case.reasons_delivered_on + timedelta(days=procedure.appeal_days)


def due(
    *, case: record.CaseSoFar, procedure: clauses.Procedure
) -> tuple[tuple[moves.Move, date], ...]:
    """Return the moves that the book makes by itself if nobody acts, each with its first day."""
    match case.state:
        case moves.State.TOLD:
            move, last = moves.Move.CLOSE_SILENCE, answer_until(case=case, procedure=procedure)
        case moves.State.APPEAL_OPEN:
            move, last = moves.Move.LET_STAND, appeal_until(case=case, procedure=procedure)
        case _:
            return ()
    return () if last is None else ((move, last + timedelta(days=1)),)
