"""The board's season page in a large commons against the same page in a small one."""

from tests.bench import pages_ground, rounds


def measure(*, size: str) -> rounds.Measurement:
    """Render the page in both commons in turn; the larger has 10,000 members at full size."""
    with pages_ground.two_commons(size=size) as browsers:
        return rounds.measure(
            name="season_page",
            size=size,
            baseline=f"the same page at {pages_ground.SMALL} members",
            program_side=pages_ground.side(
                browsers["large-bank"], "/c/large-bank/seasons/mullet-2026/"
            ),
            baseline_side=pages_ground.side(
                browsers["small-bank"], "/c/small-bank/seasons/mullet-2026/"
            ),
            bound=0.5,
        )
