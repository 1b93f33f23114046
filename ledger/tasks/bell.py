"""What a worker does when the bell rings: all that is due; a bell that was missed costs nothing."""

from celery import shared_task

from ledger.foundation.clocks import system_chance, system_clock
from ledger.tasks import draining


@shared_task(name="stintbook.ring")  # type: ignore[untyped-decorator]  # Celery has no types.
def ring() -> int:
    """Do the work that is due now, in every commons; return how many jobs rang."""
    return sum(1 for _ in draining.drain(clock=system_clock, chance=system_chance))
