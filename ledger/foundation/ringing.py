"""Ring the bell of the workers once a promise that is due now has been committed.

The bell only saves time: whatever it does not reach, the next ring of the clock finds. So a broker
that does not answer may cost a post a moment now and then, and never the post itself.
"""

import logging
import threading
import time

from django.db import transaction

from ledger.celery import app

RING = "stintbook.ring"
# So long nobody tries again after a failure, so that a dead broker slows one post in a while.
SILENCE_SECONDS = 30.0

logger = logging.getLogger("stintbook.bell")
_answered_here = threading.Event()


class _Silence:
    """Until when this process leaves the bell alone, and whether it said why."""

    until = 0.0


def answer_here() -> None:
    """Say that a worker in this very process answers the bell."""
    _answered_here.set()


def after_commit() -> None:
    """Ring once when the transaction in hand is committed, if anybody could hear it."""
    if not _can_be_heard():
        return
    waiting = transaction.get_connection().run_on_commit
    if not any(each[1] is ring for each in waiting):
        transaction.on_commit(ring, robust=True)


def ring() -> None:
    """Ring now; a broker that does not answer is left alone for a while, and said once."""
    if time.monotonic() < _Silence.until:
        return
    try:
        app.send_task(RING, retry=False)
    except Exception as error:  # Whatever a broker's client raises: no post may fail for a bell.
        if not _Silence.until:
            logger.warning("The broker does not answer (%s); the clock rings later.", error)
        _Silence.until = time.monotonic() + SILENCE_SECONDS
    else:
        _Silence.until = 0.0


def _can_be_heard() -> bool:
    """Return whether there may be a worker: a bell in memory reaches this process alone."""
    return _answered_here.is_set() or not str(app.conf.broker_url).startswith("memory:")
