"""Five hundred balanced entries a transaction, against the same by hand."""

from tests.bench import posting_sides, rounds

NAME = "posting_batch"
_BATCHES_A_SLICE = {"small": 1, "full": 4}
# Below the least median of a few runs on two shared cores.
_BOUND = {"postgresql": 0.5, "sqlite": 0.35}


def measure(*, size: str) -> rounds.Measurement:
    """Measure ``append`` of five hundred entries at a time."""
    return posting_sides.measure(
        name=NAME, size=size, transactions=_BATCHES_A_SLICE[size], entries=500, bounds=_BOUND
    )
