"""How a bench measures: the program and its baseline in turn, a ratio for each round."""

import json
import random
import statistics
from collections.abc import Callable
from dataclasses import asdict, dataclass

ROUNDS = 11
ROUNDS_MIN = 9

Side = Callable[[], float]
"""Does one slice of work and returns its speed, or any figure of which more is better."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Measurement:
    """What one bench found: the speed of the program over that of its baseline.

    ``ratio``, ``low`` and ``high`` are the median, least and greatest over the rounds. ``holds``
    says whether the median reaches the bound.
    """

    name: str
    size: str
    baseline: str
    ratio: float
    low: float
    high: float
    bound: float
    holds: bool


def measure(
    *,
    name: str,
    size: str,
    baseline: str,
    program_side: Side,
    baseline_side: Side,
    bound: float,
    rounds: int = ROUNDS,
) -> Measurement:
    """Run both sides in turn, in a random order within a round, and compare round by round.

    Speeds of different rounds are not compared: the machine may be faster in one than in another.
    One round goes before, unmeasured, so that both sides start warm.
    """
    assert rounds >= ROUNDS_MIN, "fewer rounds tell little"
    program_side(), baseline_side()
    order = random.Random(name)
    ratios = []
    for _ in range(rounds):
        if order.random() < 0.5:
            ours = program_side()
            theirs = baseline_side()
        else:
            theirs = baseline_side()
            ours = program_side()
        ratios.append(ours / theirs)
    ratio = statistics.median(ratios)
    return Measurement(
        name=name,
        size=size,
        baseline=baseline,
        ratio=round(ratio, 3),
        low=round(min(ratios), 3),
        high=round(max(ratios), 3),
        bound=bound,
        holds=ratio >= bound,
    )


def as_json(found: list[Measurement]) -> str:
    """Return measurements as a JSON list."""
    return json.dumps([asdict(one) for one in found], indent=2)


def as_table(found: list[Measurement]) -> str:
    """Return measurements as a table in plain text."""
    head = ("name", "size", "baseline", "ratio", "low", "high", "bound", "holds")
    lines = [head] + [
        (
            one.name,
            one.size,
            one.baseline,
            f"{one.ratio:.2f}",
            f"{one.low:.2f}",
            f"{one.high:.2f}",
            f"{one.bound:.2f}",
            "yes" if one.holds else "NO",
        )
        for one in found
    ]
    widths = [max(len(line[at]) for line in lines) for at in range(len(head))]
    table = "\n".join(
        "  ".join(cell.ljust(width) for cell, width in zip(line, widths, strict=True)).rstrip()
        for line in lines
    )
    return f"{table}\nratio: the program's speed over the baseline's; it holds from the bound up."
