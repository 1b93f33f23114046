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
    outbox.mark_done(job_id=job.id, outcome="judged", at=ticking_clock())
    assert outbox.due(at=ticking_clock(), limit=1) == []
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
def test_the_longest_due_is_claimed_until_it_is_done(ticking_clock: TickingClock) -> None:
    for key, days in (("later", 1), ("second", -1), ("first", -2)):
        _promise(ticking_clock, key, days=days)
    for key in ("first", "second"):
        assert outbox.is_due(at=ticking_clock(), commons_id=1)
        job = outbox.claim(at=ticking_clock(), commons_id=1)
        assert job is not None
        assert job.key == key
        outbox.mark_done(job_id=job.id, outcome="", at=ticking_clock())
    assert not outbox.is_due(at=ticking_clock())
    assert outbox.claim(at=ticking_clock()) is None


@pytest.mark.django_db
def test_a_claim_is_of_one_commons_where_it_is_named(ticking_clock: TickingClock) -> None:
    _promise(ticking_clock, "theirs", commons_id=2)
    assert outbox.claim(at=ticking_clock(), commons_id=1) is None
    assert not outbox.is_due(at=ticking_clock(), commons_id=1)
    job = outbox.claim(at=ticking_clock())
    assert job is not None and job.key == "theirs"
