"""Work that only tests promise, in processes that tests start: slow, deadly, and plain.

``python -m tests.ledger.tasks.odd_jobs serve ...`` is ``manage.py serve ...`` that knows such jobs,
and ``celery -A tests.ledger.tasks.odd_jobs worker`` is a worker that does.
"""

import os
import signal
import sys
import time
from collections.abc import Callable, Iterable
from pathlib import Path
from typing import Any

import django

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "ledger.settings")
django.setup()

from django.core.management import execute_from_command_line  # noqa: E402
from django.core.wsgi import get_wsgi_application  # noqa: E402

from ledger.celery import app  # noqa: E402, F401  (Celery looks for it here)
from ledger.commons import operations as commons  # noqa: E402
from ledger.foundation.hands import Hand  # noqa: E402
from ledger.foundation.outbox import DueJob  # noqa: E402
from ledger.management import serving  # noqa: E402
from ledger.tasks import handlers  # noqa: E402
from tests.ledger.processes import FOLDER  # noqa: E402

PATIENCE_SECONDS = 30.0


def _waits_for_go(name: str) -> None:
    """Say that something has begun, and wait until the test lets it go on."""
    folder = Path(os.environ[FOLDER])
    (folder / f"begun-{name}").touch()
    until = time.monotonic() + PATIENCE_SECONDS
    while not (folder / "go").exists() and time.monotonic() < until:
        time.sleep(0.02)


def writes(job: DueJob, hand: Hand) -> str:
    """Leave an entry behind."""
    commons.enter(commons_id=job.commons_id, kind="test", facts={"key": job.key}, hand=hand)
    return "written"


def slow(job: DueJob, hand: Hand) -> str:
    """Leave an entry behind, and end only when the test says so."""
    writes(job, hand)
    _waits_for_go(job.key)
    return "written at leisure"


def deadly(job: DueJob, hand: Hand) -> str:
    """Leave an entry behind and bring the worker down."""
    writes(job, hand)
    os.kill(os.getpid(), signal.SIGKILL)
    return "never"


handlers.HANDLERS.update(  # type: ignore[attr-defined]  # read-only by its type alone
    {"writes": writes, "slow": slow, "deadly": deadly}
)


def _application() -> Callable[..., Iterable[bytes]]:
    """Return the service's own application with one slow address more."""
    inner = get_wsgi_application()

    def answers(environ: dict[str, Any], start_response: Callable[..., Any]) -> Iterable[bytes]:
        if environ["PATH_INFO"] != "/slow":
            return inner(environ, start_response)
        _waits_for_go("request")
        start_response("200 OK", [("Content-Type", "text/plain")])
        return [b"at last"]

    return answers


if __name__ == "__main__":
    serving.get_wsgi_application = _application
    execute_from_command_line(sys.argv)
