"""What each kind of promised work does when it rings: one call into the slice that owns it."""

from collections.abc import Callable, Mapping
from datetime import date
from typing import ClassVar

from governance.periods import DateRange
from ledger.advice import operations as advice
from ledger.cases import operations as cases
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.foundation.outbox import DueJob
from ledger.judgement import operations as judgement


class UnknownKind(LedgerError):
    """A job was promised that nothing here does."""

    code: ClassVar[str] = "tasks.unknown_kind"
    message: ClassVar[str] = "Found a job of the kind {found!r}; accepted are {accepted}."


Handler = Callable[[DueJob, Hand], str]


def judge(job: DueJob, hand: Hand) -> str:
    """Judge the open seasons as of the day that the job is named for."""
    as_of = date.fromisoformat(job.key)
    changed = judgement.judge(commons_id=job.commons_id, as_of=as_of, hand=hand)
    return f"{changed} findings changed"


def hear_findings(job: DueJob, hand: Hand) -> str:
    """Let the cases hear of changed findings."""
    moved = cases.hear(commons_id=job.commons_id, findings=job.payload["findings"], hand=hand)
    return f"{moved} cases noted or sent back"


def case_deadline(job: DueJob, hand: Hand) -> str:
    """Make the move that the passing of days calls for in a case, if it still does."""
    return cases.ring(commons_id=job.commons_id, case=job.payload["case"], hand=hand)


def assess_duties(job: DueJob, hand: Hand) -> str:
    """Charge the members with a season's duties."""
    during = DateRange(
        first=date.fromisoformat(job.payload["first"]),
        until=date.fromisoformat(job.payload["until"]),
    )
    receipt = judgement.assess_duties(commons_id=job.commons_id, during=during, hand=hand)
    return "no duties" if receipt is None else f"assessed by entry {receipt.number}"


def close_season(job: DueJob, hand: Hand) -> str:
    """Close a season, once the judge has read everything before, if it is still open."""
    return judgement.ring_close(commons_id=job.commons_id, season=job.payload["season"], hand=hand)


def advise(job: DueJob, hand: Hand) -> str:
    """Make the advice for a season on the day that the book names, if it is still due."""
    return advice.ring(commons_id=job.commons_id, season=job.payload["season"], hand=hand)


HANDLERS: Mapping[str, Handler] = {
    "judge": judge,
    "hear_findings": hear_findings,
    "case_deadline": case_deadline,
    "assess_duties": assess_duties,
    "close_season": close_season,
    "advise": advise,
}


def do(*, job: DueJob, hand: Hand) -> str:
    """Do what a job promised and say what came of it.

    :raises UnknownKind: if nothing here does such work.
    """
    handler = HANDLERS.get(job.kind)
    if handler is None:
        raise UnknownKind(found=job.kind, accepted=", ".join(HANDLERS))
    return handler(job, hand)
