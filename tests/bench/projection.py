"""The risk table under Schaefer's growth, against the same in straightforward numpy."""

from tests.bench import projection_sides, rounds

NAME = "projection"
# At most 0.35 of the baseline's time at full size. What is done once a candidate weighs twice as
# much in half the seasons, so that the small size only guards against a landslide.
_BOUND = {"small": 1 / 0.5, "full": 1 / 0.35}


def measure(*, size: str) -> rounds.Measurement:
    """Measure ``under_takes`` where growth is a product."""
    return projection_sides.measure(name=NAME, size=size, p=1.0, bound=_BOUND[size])
