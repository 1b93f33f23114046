"""What a worker does when the bell rings: all that is due; a bell that was missed costs nothing."""

import threading
import time

from celery import shared_task

from ledger.foundation import ringing
from ledger.foundation.clocks import system_chance, system_clock
from ledger.tasks import draining

# So long a worker goes on at one ring; then it rings for the next, and may be stopped between.
SHIFT_SECONDS = 60.0
# Set where the worker of this process is to stop once the job in hand is done.
closing = threading.Event()


@shared_task(name=ringing.RING)  # type: ignore[untyped-decorator]  # Celery has no types.
def ring() -> int:
    """Do the work that is due now, in every commons; return how many jobs rang."""
    until = time.monotonic() + SHIFT_SECONDS
    rang = 0
    if closing.is_set():
        return rang
    for _ in draining.drain(clock=system_clock, chance=system_chance):
        rang += 1
        if closing.is_set():
            break
        if time.monotonic() > until:
            ringing.ring()
            break
    return rang
