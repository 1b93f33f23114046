"""``manage.py jobs``: what is overdue, what is parked, and how a parked job rings again."""

import io
from datetime import UTC, datetime

import pytest
from django.core.management import CommandError, call_command

from ledger.foundation import outbox
from tests.conftest import TickingClock
from tests.ledger.processes import promise

pytestmark = pytest.mark.django_db


def _told(*arguments: str) -> list[str]:
    out = io.StringIO()
    call_command("jobs", *arguments, stdout=out)
    return out.getvalue().splitlines()


def test_a_parked_job_is_told_with_its_reason_and_rings_again_when_asked(
    ticking_clock: TickingClock,
) -> None:
    assert _told() == ["0 overdue; 0 parked"]
    promise(commons_id=3, kind="judge", key="a", due_at=datetime(2026, 1, 2, 3, 4, 5, tzinfo=UTC))
    assert _told() == ["1 overdue, since 2026-01-02 03:04:05 UTC; 0 parked"]
    (job,) = outbox.due(at=ticking_clock(), limit=1)
    for _ in range(6):
        outbox.begin(job_id=job.id, at=ticking_clock())
    assert _told() == [
        "0 overdue; 1 parked",
        f"job {job.id}: judge a of commons 3, parked 2026-03-01 09:00:00 UTC:"
        " The worker went down in each of the last 5 attempts.",
    ]
    assert _told("--again", str(job.id)) == ["1 overdue, since 2026-01-02 03:04:05 UTC; 0 parked"]
    begun = outbox.begin(job_id=job.id, at=ticking_clock())
    assert begun is not None and begun.attempts == 6
    with pytest.raises(CommandError, match="is not parked"):
        _told("--again", str(job.id))
