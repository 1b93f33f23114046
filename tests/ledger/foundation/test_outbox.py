"""Jobs are promised once, ring in order, and are done once."""

from datetime import timedelta

import pytest
from django.db import IntegrityError, transaction

from ledger.foundation import outbox, transactions
from ledger.foundation.models import Job
from tests.conftest import CommittingDatabase, TickingClock


def _promise(clock: TickingClock, key: str, *, days: int = 0, commons_id: int = 1) -> bool:
    return outbox.enqueue(
        commons_id=commons_id,
        kind="judge",
        key=key,
        due_at=clock() + timedelta(days=days),
        payload={"day": key, "count": 3},
        clock=clock,
    )


@pytest.mark.django_db
def test_same_key_twice_is_one_job(ticking_clock: TickingClock) -> None:
    assert _promise(ticking_clock, "2026-03-01")
    assert not _promise(ticking_clock, "2026-03-01", days=5)
    (job,) = outbox.due(at=ticking_clock(), limit=10)
    assert (job.key, job.payload, job.attempts) == (
        "2026-03-01",
        {"day": "2026-03-01", "count": 3},
        0,
    )


@pytest.mark.django_db
def test_due_in_order_and_up_to_the_limit(ticking_clock: TickingClock) -> None:
    for key, days in (("c", 2), ("a", 0), ("b", 1), ("late", 9)):
        _promise(ticking_clock, key, days=days)
    _promise(ticking_clock, "elsewhere", commons_id=2)
    at = ticking_clock() + timedelta(days=2)
    assert [job.key for job in outbox.due(at=at, limit=10)] == ["a", "elsewhere", "b", "c"]
    assert [job.key for job in outbox.due(at=at, commons_id=1, limit=2)] == ["a", "b"]


@pytest.mark.django_db
def test_done_once(ticking_clock: TickingClock) -> None:
    _promise(ticking_clock, "a")
    (job,) = outbox.due(at=ticking_clock(), limit=1)
    begun = outbox.begin(job_id=job.id, at=ticking_clock())
    assert begun is not None and begun.attempts == 1
    assert outbox.hold(job_id=job.id)
    outbox.mark_done(job_id=job.id, outcome="judged", at=ticking_clock())
    assert outbox.due(at=ticking_clock(), limit=1) == []
    assert outbox.begin(job_id=job.id, at=ticking_clock()) is None
    assert not outbox.hold(job_id=job.id)
    with pytest.raises(outbox.JobNotOpen):
        outbox.mark_done(job_id=job.id, outcome="judged", at=ticking_clock())
    with pytest.raises(outbox.JobNotOpen):
        outbox.mark_failed(job_id=job.id, error="late", again_at=ticking_clock())
    row = Job.objects.get(pk=job.id)
    assert (row.outcome, row.done_at, row.attempts) == ("judged", ticking_clock(), 1)


@pytest.mark.django_db
def test_a_failed_job_rings_again(ticking_clock: TickingClock) -> None:
    _promise(ticking_clock, "a")
    (job,) = outbox.due(at=ticking_clock(), limit=1)
    outbox.begin(job_id=job.id, at=ticking_clock())
    again_at = ticking_clock() + timedelta(hours=1)
    outbox.mark_failed(job_id=job.id, error="no figures", again_at=again_at)
    assert outbox.due(at=ticking_clock(), limit=1) == []
    (again,) = outbox.due(at=again_at, limit=1)
    assert (again.id, again.attempts, again.due_at) == (job.id, 1, again_at)
    assert Job.objects.get(pk=job.id).last_error == "no figures"


@pytest.mark.django_db
def test_the_database_holds_a_job_to_one_key(ticking_clock: TickingClock) -> None:
    _promise(ticking_clock, "a")
    with pytest.raises(IntegrityError):
        Job.objects.create(
            commons_id=1,
            kind="judge",
            key="a",
            due_at=ticking_clock(),
            payload={},
            enqueued_at=ticking_clock(),
        )


def test_promising_needs_a_transaction_and_goes_back_with_it(
    committing_db: CommittingDatabase, ticking_clock: TickingClock
) -> None:
    with pytest.raises(transactions.NoTransaction):
        _promise(ticking_clock, "a")
    with transaction.atomic():
        _promise(ticking_clock, "a")
        transaction.set_rollback(True)
    assert outbox.due(at=ticking_clock(), limit=1) == []


@pytest.mark.django_db
def test_a_job_is_not_begun_before_it_is_due(ticking_clock: TickingClock) -> None:
    _promise(ticking_clock, "a", days=1)
    job = Job.objects.get()
    assert outbox.begin(job_id=job.pk, at=ticking_clock()) is None
    job.refresh_from_db()
    assert job.attempts == 0


@pytest.mark.django_db
def test_a_job_whose_attempts_never_end_is_parked_and_stays_visible(
    ticking_clock: TickingClock,
) -> None:
    _promise(ticking_clock, "bad")
    _promise(ticking_clock, "good")
    bad, _ = outbox.due(at=ticking_clock(), limit=2)
    for attempt in range(1, 6):
        begun = outbox.begin(job_id=bad.id, at=ticking_clock())
        assert begun is not None and begun.attempts == attempt
        # It comes last from its first death on.
        assert [job.key for job in outbox.due(at=ticking_clock(), limit=9)] == ["good", "bad"]
    assert outbox.begin(job_id=bad.id, at=ticking_clock()) is None
    assert [job.key for job in outbox.due(at=ticking_clock(), limit=9)] == ["good"]
    (parked,) = outbox.parked(commons_id=1)
    assert (parked.job.key, parked.parked_at) == ("bad", ticking_clock())
    assert "went down in each of the last 5 attempts" in parked.last_error
    assert outbox.parked(commons_id=2) == []


@pytest.mark.django_db
def test_attempts_that_end_are_not_counted_towards_parking(ticking_clock: TickingClock) -> None:
    """A job that fails in words, or is done, ended: only workers that go down count."""
    _promise(ticking_clock, "a")
    (job,) = outbox.due(at=ticking_clock(), limit=1)
    for _ in range(4):
        outbox.begin(job_id=job.id, at=ticking_clock())
    outbox.mark_failed(job_id=job.id, error="no figures", again_at=ticking_clock())
    for attempt in range(5, 10):
        begun = outbox.begin(job_id=job.id, at=ticking_clock())
        assert begun is not None and begun.attempts == attempt
    assert outbox.parked() == []


@pytest.mark.django_db
def test_the_backlog_counts_what_is_overdue_and_what_is_parked(
    ticking_clock: TickingClock,
) -> None:
    nothing = outbox.Backlog(open_due=0, oldest_due_at=None, parked=0)
    assert outbox.backlog(at=ticking_clock()) == nothing
    for key, days in (("old", -3), ("now", 0), ("later", 1), ("done", -9), ("parked", -8)):
        _promise(ticking_clock, key, days=days)
    done, stuck, *_ = outbox.due(at=ticking_clock(), limit=9)
    outbox.mark_done(job_id=done.id, outcome="", at=ticking_clock())
    for _ in range(6):
        outbox.begin(job_id=stuck.id, at=ticking_clock())
    assert outbox.backlog(at=ticking_clock()) == outbox.Backlog(
        open_due=2, oldest_due_at=ticking_clock() - timedelta(days=3), parked=1
    )
