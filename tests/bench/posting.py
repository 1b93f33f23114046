"""One balanced entry of two postings a transaction, against the same by hand."""

from tests.bench import posting_sides, rounds

NAME = "posting"
_POSTS_A_SLICE = {"small": 100, "full": 400}
# Below the least median of a few runs on two shared cores.
_BOUND = {"postgresql": 0.7, "sqlite": 0.6}


def measure(*, size: str) -> rounds.Measurement:
    """Measure ``append`` of one entry at a time."""
    return posting_sides.measure(
        name=NAME, size=size, transactions=_POSTS_A_SLICE[size], entries=1, bounds=_BOUND
    )
