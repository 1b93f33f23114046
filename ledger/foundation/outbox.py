"""Promise work in the same transaction as the fact that calls for it; find what is due."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime
from typing import Any, ClassVar

from django.db.models import Count, Min, Q, QuerySet

from ledger.foundation import ringing, transactions
from ledger.foundation.clocks import Clock
from ledger.foundation.errors import LedgerError
from ledger.foundation.models import Job

# A job in which so many workers in a row went down is left to a person.
UNENDED_ATTEMPTS = 5


class JobNotOpen(LedgerError):
    """A job that is done, or that nobody promised, was to be marked."""

    code: ClassVar[str] = "foundation.job_not_open"
    message: ClassVar[str] = "Job {job_id} is done already or does not exist."


class JobNotParked(LedgerError):
    """A job that nobody parked was to ring again."""

    code: ClassVar[str] = "foundation.job_not_parked"
    message: ClassVar[str] = "Job {job_id} is not parked; accepted is a job that jobs lists."


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


@dataclass(frozen=True, slots=True, kw_only=True)
class ParkedJob:
    """A job that rings no more until a person has looked at it, and why."""

    job: DueJob
    parked_at: datetime
    last_error: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Backlog:
    """How much promised work is overdue at an instant, since when, and how much is parked."""

    open_due: int
    oldest_due_at: datetime | None
    parked: int


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

    A job that is due already rings the bell of the workers once this transaction is committed.

    :raises NoTransaction: outside a transaction.
    """
    now = clock()
    _, is_new = Job.objects.get_or_create(
        commons_id=commons_id,
        kind=kind,
        key=key,
        defaults={"due_at": due_at, "payload": dict(payload), "enqueued_at": now},
    )
    if is_new and due_at <= now:
        ringing.after_commit()
    return is_new


def due(*, at: datetime, commons_id: int | None = None, limit: int) -> list[DueJob]:
    """Return up to so many open jobs due by an instant, the longest due first.

    Those in which a worker went down come after all others, so that they hold up none.
    """
    return [_due_job(job) for job in _open_by(at, commons_id)[:limit]]


def parked(*, commons_id: int | None = None) -> list[ParkedJob]:
    """Return the jobs that were parked, the longest parked first."""
    jobs = Job.objects.filter(done_at__isnull=True, parked_at__isnull=False)
    if commons_id is not None:
        jobs = jobs.filter(commons_id=commons_id)
    return [
        ParkedJob(job=_due_job(job), parked_at=job.parked_at, last_error=job.last_error)
        for job in jobs.order_by("parked_at", "id")
        if job.parked_at is not None
    ]


def backlog(*, at: datetime) -> Backlog:
    """Return what is overdue at an instant in all commons, and what is parked."""
    overdue = Q(parked_at__isnull=True, due_at__lte=at)
    figures = Job.objects.filter(done_at__isnull=True).aggregate(
        open_due=Count("id", filter=overdue),
        oldest_due_at=Min("due_at", filter=overdue),
        parked=Count("id", filter=Q(parked_at__isnull=False)),
    )
    return Backlog(**figures)


@transactions.required
def begin(*, job_id: int, at: datetime) -> DueJob | None:
    """Count an attempt, in a transaction that is committed before the work begins.

    So an attempt in which the worker goes down is counted too, and the job that brings it down is
    parked after so many in a row. None means that there is nothing to do: the job is no longer
    due, or it was parked.
    """
    job = _open_by(at, None).filter(pk=job_id).select_for_update().first()
    if job is None:
        return None
    if job.unended >= UNENDED_ATTEMPTS:
        job.parked_at = at
        job.last_error = f"The worker went down in each of the last {job.unended} attempts."
        job.save(update_fields=["parked_at", "last_error"])
        return None
    job.attempts += 1
    job.unended += 1
    job.save(update_fields=["attempts", "unended"])
    return _due_job(job)


@transactions.required
def try_again(*, job_id: int) -> None:
    """Let a parked job ring again, with its count of lost workers begun anew.

    :raises JobNotParked: if it is not parked, or does not exist.
    """
    parked_job = Job.objects.filter(pk=job_id, done_at__isnull=True, parked_at__isnull=False)
    if not parked_job.update(parked_at=None, unended=0):
        raise JobNotParked(job_id=job_id)
    ringing.after_commit()


@transactions.required
def hold(*, job_id: int) -> bool:
    """Keep a job from others to the transaction's end; return whether it is still open."""
    job = Job.objects.select_for_update().filter(pk=job_id, done_at__isnull=True).first()
    return job is not None


@transactions.required
def mark_done(*, job_id: int, outcome: str, at: datetime) -> None:
    """Close a job, in the transaction that holds its effect, so that the effect happens once.

    :raises JobNotOpen: if it was done before; the transaction should then be given up.
    """
    closed = Job.objects.filter(pk=job_id, done_at__isnull=True).update(
        done_at=at, outcome=outcome, unended=0
    )
    if not closed:
        raise JobNotOpen(job_id=job_id)


@transactions.required
def mark_failed(*, job_id: int, error: str, again_at: datetime) -> None:
    """Note why an attempt failed, and when the job is to ring again.

    :raises JobNotOpen: if it is done.
    """
    noted = Job.objects.filter(pk=job_id, done_at__isnull=True).update(
        unended=0, last_error=error, due_at=again_at
    )
    if not noted:
        raise JobNotOpen(job_id=job_id)


def _open_by(at: datetime, commons_id: int | None) -> QuerySet[Job]:
    jobs = Job.objects.filter(
        done_at__isnull=True, parked_at__isnull=True, due_at__lte=at
    ).order_by("unended", "due_at", "id")
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
