"""Whether the service is alive, and whether it can do its work; to strangers, no more than that.

What is wrong stands in the log. A supervisor that restarts a process should ask ``healthz``: a
process started again mends neither a database nor a broken journal.
"""

import logging
from collections.abc import Iterator
from datetime import datetime, timedelta

from django.db import DatabaseError
from django.http import HttpRequest, HttpResponse
from django.views.decorators.http import require_safe

from ledger.foundation import outbox, tables
from ledger.foundation.clocks import system_clock
from ledger.journal import queries as journal

# The clock rings every half minute, and a night's judging takes a few.
LATE_AFTER = timedelta(minutes=15)
_log = logging.getLogger("stintbook.health")


@require_safe
def healthz(request: HttpRequest) -> HttpResponse:
    """Answer that the process is alive; nothing else is asked."""
    return _said("alive", status=200)


@require_safe
def readyz(request: HttpRequest) -> HttpResponse:
    """Answer whether the database, its tables, every journal and the jobs are in order."""
    reasons = list(troubles(now=system_clock()))
    for reason in reasons:
        _log.warning("Not ready: %s", reason)
    return _said("not ready", status=503) if reasons else _said("ready", status=200)


def troubles(*, now: datetime) -> Iterator[str]:
    """Yield why the service cannot do its work, each reason in words."""
    try:
        if not tables.are_current():
            yield "tables are missing or old"
            return
        for commons_id in journal.journals():
            if why := journal.why_stopped(commons_id=commons_id):
                yield f"posting is stopped in journal {commons_id}: {why}"
        waiting = outbox.backlog(at=now)
        if waiting.oldest_due_at is not None and now - waiting.oldest_due_at > LATE_AFTER:
            yield f"a job is due since {waiting.oldest_due_at.isoformat()}"
    except DatabaseError as error:
        yield f"the database does not answer: {type(error).__name__}"


def _said(words: str, *, status: int) -> HttpResponse:
    return HttpResponse(f"{words}\n", status=status, content_type="text/plain; charset=utf-8")
