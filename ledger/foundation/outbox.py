"""Promise work in the same transaction as the fact that calls for it; find what is due."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime
from typing import Any, ClassVar

from django.db import connection
from django.db.models import F, QuerySet

from ledger.foundation import transactions
from ledger.foundation.clocks import Clock
from ledger.foundation.errors import LedgerError
from ledger.foundation.models import Job


class JobNotOpen(LedgerError):
    """A job that is done, or that nobody promised, was to be marked."""

    code: ClassVar[str] = "foundation.job_not_open"
    message: ClassVar[str] = "Job {job_id} is done already or does not exist."


@dataclass(frozen=True, slots=True, kw_only=True)
class DueJob:
    """One job that has rung: where it belongs, what is to be done, how often it was tried."""

    id: int
    commons_id: int
    kind: str
    key: str
    due_at: datetime
    payload: Mapping[str, Any]
    attempts: int


@transactions.required
def enqueue(
    *,
    commons_id: int,
    kind: str,
    key: str,
    due_at: datetime,
    payload: Mapping[str, Any],
    clock: Clock,
) -> bool:
    """Promise a job and return whether it is new; the same commons, kind and key are one job.

    :raises NoTransaction: outside a transaction.
    """
    _, is_new = Job.objects.get_or_create(
        commons_id=commons_id,
        kind=kind,
        key=key,
        defaults={"due_at": due_at, "payload": dict(payload), "enqueued_at": clock()},
    )
    return is_new


def due(*, at: datetime, commons_id: int | None = None, limit: int) -> list[DueJob]:
    """Return up to so many open jobs due by an instant, the longest due first."""
    return [_due_job(job) for job in _open_by(at, commons_id)[:limit]]


def is_due(*, at: datetime, commons_id: int | None = None) -> bool:
    """Return whether an open job is due by an instant."""
    return _open_by(at, commons_id).exists()


@transactions.required
def claim(*, at: datetime, commons_id: int | None = None) -> DueJob | None:
    """Return the job that is longest due and keep it from other workers to the transaction's end.

    None means that nothing is due but what others have in hand.
    """
    free = _open_by(at, commons_id).select_for_update(
        skip_locked=connection.features.has_select_for_update_skip_locked
    )
    job = free.first()
    return None if job is None else _due_job(job)


@transactions.required
def mark_done(*, job_id: int, outcome: str, at: datetime) -> None:
    """Close a job, in the transaction that holds its effect, so that the effect happens once.

    :raises JobNotOpen: if it was done before; the transaction should then be given up.
    """
    closed = Job.objects.filter(pk=job_id, done_at__isnull=True).update(
        done_at=at, outcome=outcome, attempts=F("attempts") + 1
    )
    if not closed:
        raise JobNotOpen(job_id=job_id)


@transactions.required
def mark_failed(*, job_id: int, error: str, again_at: datetime) -> None:
    """Note a failed attempt and when the job is to ring again.

    :raises JobNotOpen: if it is done.
    """
    noted = Job.objects.filter(pk=job_id, done_at__isnull=True).update(
        attempts=F("attempts") + 1, last_error=error, due_at=again_at
    )
    if not noted:
        raise JobNotOpen(job_id=job_id)


def _open_by(at: datetime, commons_id: int | None) -> QuerySet[Job]:
    jobs = Job.objects.filter(done_at__isnull=True, due_at__lte=at).order_by("due_at", "id")
    return jobs if commons_id is None else jobs.filter(commons_id=commons_id)


def _due_job(job: Job) -> DueJob:
    return DueJob(
        id=job.pk,
        commons_id=job.commons_id,
        kind=job.kind,
        key=job.key,
        due_at=job.due_at,
        payload=job.payload,
        attempts=job.attempts,
    )
