"""Whose hand writes: who acts, by which clock, and with which source of chance."""

from dataclasses import dataclass

from ledger.foundation.clocks import Chance, Clock

# The number that stands for the book itself, where no person acts.
THE_BOOK = 0


@dataclass(frozen=True, slots=True, kw_only=True)
class Hand:
    """The member number of whoever acts (0 is the book itself), a clock, and a source of salts."""

    by: int
    clock: Clock
    chance: Chance
