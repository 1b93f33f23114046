"""A season of a million takes under five clauses, against a plain pandas script for the same.

Both start from loaded columns and give the same findings with the entries behind them. The program
also knows editions, seals each finding's inputs and writes out its arithmetic, which costs some
thirty millionths of a second for each finding: with a finding for every thousand takes that is a
third of its time, and with many more it is nearly all of it.
"""

import time
from typing import TYPE_CHECKING

from governance.compliance import findings, judge
from tests.bench import judging_by_pandas, judging_season, rounds

if TYPE_CHECKING:
    import pandas as pd

NAME = "judging"
_TAKES = {"small": 50_000, "full": 1_000_000}
# Measured beside other work: 2.2 and 2.9; the bound leaves room for a busier machine.
_BOUND = {"small": 1.5, "full": 2.0}


def measure(*, size: str) -> rounds.Measurement:
    """Measure the judgement of one season, in takes a second.

    :raises AssertionError: if the two sides do not find the same, row for row.
    """
    takes = _TAKES[size]
    drawn = judging_season.draw(takes=takes)
    frames = judging_by_pandas.frames(drawn.facts)

    def ours() -> tuple[findings.Finding, ...]:
        return judge.judge(
            editions=drawn.editions, facts=drawn.facts, as_of=drawn.facts.season.last
        )

    def by_pandas() -> "pd.DataFrame":
        return judging_by_pandas.judged(takes=frames[0], members=frames[1])

    assert rows_of_findings(ours()) == rows_of_frame(by_pandas()), "the sides find different things"

    def program_side() -> float:
        begun = time.perf_counter()
        ours()
        return takes / (time.perf_counter() - begun)

    def baseline_side() -> float:
        begun = time.perf_counter()
        by_pandas()
        return takes / (time.perf_counter() - begun)

    return rounds.measure(
        name=NAME,
        size=size,
        baseline="a plain pandas script",
        program_side=program_side,
        baseline_side=baseline_side,
        bound=_BOUND[size],
    )


def rows_of_findings(found: tuple[findings.Finding, ...]) -> list[tuple[object, ...]]:
    """Return findings as rows to compare: clause, subject, first day, total, breach, entries."""
    return [
        (
            each.key.clause,
            each.key.subject,
            each.key.window.first,
            each.total,
            each.breach,
            each.entries,
        )
        for each in found
    ]


def rows_of_frame(found: "pd.DataFrame") -> list[tuple[object, ...]]:
    """Return the script's breaches as the same rows."""
    return [
        (clause, subject, first.date(), int(total), int(breach), tuple(sorted(entries)))
        for clause, subject, first, total, breach, entries in found.itertuples(index=False)
    ]
