"""Where time and chance enter: doors take them here and pass them in."""

import random
import secrets
from collections.abc import Callable
from datetime import UTC, datetime

Clock = Callable[[], datetime]
"""Gives the present instant, aware and in UTC."""

Chance = Callable[[int], bytes]
"""Gives so many bytes that nobody can foresee."""

system_chance: Chance = secrets.token_bytes


def system_clock() -> datetime:
    """Return the present instant in UTC."""
    return datetime.now(tz=UTC)


def seeded_chance(seed: int) -> Chance:
    """Return a source that gives the same bytes for the same seed.

    For demos and tests only: whoever knows the seed can foresee every salt.
    """
    return random.Random(seed).randbytes  # noqa: S311 (its being foreseeable is the purpose)
