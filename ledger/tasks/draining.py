"""The one way in which promised work is done: everything due at a moment, in order of its day."""

import logging
from collections.abc import Iterator
from dataclasses import dataclass
from datetime import timedelta

from django.db import transaction

from ledger.foundation import locks, outbox
from ledger.foundation.clocks import Chance, Clock
from ledger.foundation.hands import THE_BOOK, Hand
from ledger.foundation.outbox import DueJob
from ledger.tasks import handlers

logger = logging.getLogger(__name__)

# A job that fails rings again after so many hours for each time it failed.
PATIENCE = timedelta(hours=1)
# Jobs looked at in one query: more than the workers that could have one in hand at a time.
MANY = 32


@dataclass(frozen=True, slots=True, kw_only=True)
class Drained:
    """A job that rang: what came of it, or why it failed and will ring again."""

    job: DueJob
    outcome: str
    failed: bool


def drain(*, clock: Clock, chance: Chance, commons_id: int | None = None) -> Iterator[Drained]:
    """Do the work that is due now, the longest due first, until none is left.

    Each job's effect commits together with its mark, so it happens once; what another worker has
    in hand is left to it. A job that fails leaves nothing behind and rings again later; a job in
    which one worker after the other went down is parked.
    """
    hand = Hand(by=THE_BOOK, clock=clock, chance=chance)
    while True:
        done = _next(hand, commons_id)
        if done is None:
            return
        yield done


def _next(hand: Hand, commons_id: int | None) -> Drained | None:
    """Attempt the job that is longest due and in nobody's hand; None if there is none."""
    for job in outbox.due(at=hand.clock(), commons_id=commons_id, limit=MANY):
        with locks.held(name="job", key=job.id) as is_mine:
            done = _attempt(job, hand) if is_mine else None
        if done is not None:
            return done
    return None


def _attempt(job: DueJob, hand: Hand) -> Drained | None:
    """Count the attempt, then do the work; None if the job was done meanwhile, or is parked."""
    with transaction.atomic():
        begun = outbox.begin(job_id=job.id, at=hand.clock())
    if begun is None:
        return None
    try:
        with transaction.atomic():
            if not outbox.hold(job_id=begun.id):
                return None
            outcome = handlers.do(job=begun, hand=hand)
            outbox.mark_done(job_id=begun.id, outcome=outcome, at=hand.clock())
    except Exception as error:
        logger.exception("job %s of kind %s failed", begun.id, begun.kind)
        return _failed(begun, f"{type(error).__name__}: {error}", clock=hand.clock)
    return Drained(job=begun, outcome=outcome, failed=False)


def _failed(job: DueJob, error: str, *, clock: Clock) -> Drained:
    """Note why a job failed and when it rings again."""
    try:
        with transaction.atomic():
            outbox.mark_failed(
                job_id=job.id, error=error, again_at=clock() + PATIENCE * job.attempts
            )
    except outbox.JobNotOpen:
        return Drained(job=job, outcome="done by another", failed=False)
    return Drained(job=job, outcome=error, failed=True)
