"""The risk table under Pella and Tomlinson's growth, against the same in straightforward numpy."""

from tests.bench import projection_sides, rounds

NAME = "projection_bent"
# At most half of the baseline's time.
_BOUND = 1 / 0.5


def measure(*, size: str) -> rounds.Measurement:
    """Measure ``under_takes`` where growth needs a power."""
    return projection_sides.measure(name=NAME, size=size, p=0.19, bound=_BOUND)
