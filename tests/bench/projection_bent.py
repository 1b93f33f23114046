"""The risk table under Pella and Tomlinson's growth, against the same in straightforward numpy."""

from tests.bench import projection_sides, rounds

NAME = "projection_bent"
# At most half of the baseline's time at full size. What is done once a candidate weighs twice as
# much in half the seasons, so that the small size only guards against a landslide.
_BOUND = {"small": 1 / 0.65, "full": 1 / 0.5}


def measure(*, size: str) -> rounds.Measurement:
    """Measure ``under_takes`` where growth needs a power."""
    return projection_sides.measure(name=NAME, size=size, p=0.19, bound=_BOUND[size])
