"""The one way in which promised work is done: everything due at a moment, in order of its day."""

import logging
from collections.abc import Iterator
from dataclasses import dataclass
from datetime import timedelta

from django.db import transaction

from ledger.foundation import outbox
from ledger.foundation.clocks import Chance, Clock
from ledger.foundation.hands import THE_BOOK, Hand
from ledger.foundation.outbox import DueJob
from ledger.tasks import handlers

logger = logging.getLogger(__name__)

# A job that fails rings again after so many hours for each time it failed.
PATIENCE = timedelta(hours=1)


@dataclass(frozen=True, slots=True, kw_only=True)
class Drained:
    """A job that rang: what came of it, or why it failed and will ring again."""

    job: DueJob
    outcome: str
    failed: bool


def drain(*, clock: Clock, chance: Chance, commons_id: int | None = None) -> Iterator[Drained]:
    """Do the work that is due now, the longest due first, until none is left.

    Each job's effect commits together with its mark, so it happens once; what another worker has
    in hand is left to it. A job that fails leaves nothing behind and rings again later.
    """
    while outbox.is_due(at=clock(), commons_id=commons_id):
        done = _next(clock=clock, chance=chance, commons_id=commons_id)
        if done is None:
            return
        yield done


def _next(*, clock: Clock, chance: Chance, commons_id: int | None) -> Drained | None:
    hand = Hand(by=THE_BOOK, clock=clock, chance=chance)
    job: DueJob | None = None
    try:
        with transaction.atomic():
            job = outbox.claim(at=clock(), commons_id=commons_id)
            if job is None:
                return None
            outcome = handlers.do(job=job, hand=hand)
            outbox.mark_done(job_id=job.id, outcome=outcome, at=clock())
    except Exception as error:
        if job is None:
            raise
        logger.exception("job %s of kind %s failed", job.id, job.kind)
        return _failed(job, f"{type(error).__name__}: {error}", clock=clock)
    return Drained(job=job, outcome=outcome, failed=False)


def _failed(job: DueJob, error: str, *, clock: Clock) -> Drained:
    """Note why a job failed and when it rings again."""
    try:
        with transaction.atomic():
            outbox.mark_failed(
                job_id=job.id, error=error, again_at=clock() + PATIENCE * (job.attempts + 1)
            )
    except outbox.JobNotOpen:
        return Drained(job=job, outcome="done by another", failed=False)
    return Drained(job=job, outcome=error, failed=True)
