"""Which step of a ladder a breach comes to, and how much a step costs."""

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date
from fractions import Fraction
from typing import assert_never

from governance import quantities
from governance.bylaws import clauses


@dataclass(frozen=True, slots=True, kw_only=True)
class EarlierAct:
    """An earlier act of the same member under the same ladder, by the number of its case.

    ``told_on`` is the day that its notice counted as delivered, ``final_on`` the day that its
    decision became final; None where that has not happened.
    """

    case: int
    act_on: date
    told_on: date | None
    final_on: date | None


@dataclass(frozen=True, slots=True, kw_only=True)
class StepDue:
    """The step that a breach comes to; ``index`` counts from 0.

    ``counted`` are the cases that move it up, ``working`` says of every earlier one why it counts
    or does not.
    """

    index: int
    step: clauses.Step
    counted: tuple[int, ...]
    working: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Told:
    """An earlier act that stands: it was told in time and its case is final."""

    case: int
    act_on: date
    told_on: date


def step_for(
    *,
    ladder: clauses.SanctionLadder,
    act_on: date,
    earlier: Sequence[EarlierAct],
    decided_on: date,
) -> StepDue:
    """Return the step of an act: one up for each earlier act that counts, to the last step.

    An earlier act counts if it lies at most the ladder's window of days before the act, if its
    member was told of it before the act, so had the chance to change, and if its case is final by
    the day of the decision. Acts that nobody had been told of when the next one happened count
    once together: a person is not moved up twice for what no telling stood between. So the
    longest row of acts counts, each later than the telling of the one before it.

    :param earlier: in any order; acts after ``act_on`` do not count.
    """
    standing: list[_Told] = []
    working: list[str] = []
    for each in sorted(earlier, key=lambda one: (one.act_on, one.case)):
        told = _standing(each, ladder=ladder, act_on=act_on, decided_on=decided_on)
        if isinstance(told, str):
            working.append(told)
        else:
            standing.append(told)
    counted, together = _longest_row(standing)
    working.extend(
        f"case {one.case} counts: its act of {one.act_on} lies {(act_on - one.act_on).days} days"
        f" back and was told on {one.told_on}"
        for one in counted
    )
    working.extend(together)
    index = min(len(counted), len(ladder.steps) - 1)
    working.append(
        f"{len(counted)} counted within {ladder.window_days} days:"
        f" step {index + 1} of {len(ladder.steps)}"
    )
    return StepDue(
        index=index,
        step=ladder.steps[index],
        counted=tuple(one.case for one in counted),
        working=tuple(working),
    )


def _longest_row(standing: Sequence[_Told]) -> tuple[list[_Told], list[str]]:
    """Return the longest row of acts with a telling between each two, and why others stay out."""
    row: list[_Told] = []
    together: list[str] = []
    # Taking the earliest telling first finds the longest row.
    for one in sorted(standing, key=lambda one: (one.told_on, one.act_on, one.case)):
        if row and one.act_on <= row[-1].told_on:
            together.append(
                f"case {one.case} counts together with case {row[-1].case}: its act of"
                f" {one.act_on} was not after the telling of {row[-1].told_on}"
            )
        else:
            row.append(one)
    return row, together


def _standing(
    each: EarlierAct, *, ladder: clauses.SanctionLadder, act_on: date, decided_on: date
) -> _Told | str:
    """Return an earlier act that stands, or the sentence that says why it does not."""
    days_before = (act_on - each.act_on).days
    no = f"case {each.case} does not count: "
    if days_before < 0:
        return f"{no}its act of {each.act_on} came later"
    if days_before > ladder.window_days:
        return f"{no}its act of {each.act_on} lies {days_before} days back"
    if each.told_on is None or each.told_on >= act_on:
        return f"{no}nobody was told of it before {act_on}"
    if each.final_on is None or each.final_on > decided_on:
        return f"{no}it was not final on {decided_on}"
    return _Told(case=each.case, act_on=each.act_on, told_on=each.told_on)


def amount_due(*, step: clauses.Step, breach: int, base: str) -> int:
    """Return what a step costs in the smallest coin, rounded half up once; only a fine costs.

    :param breach: what lies beyond the limit and its tolerance, in base units.
    :param base: the UCUM code of the base unit.
    :raises quantities.UnitMismatch: if the fine is for a unit of something else.
    """
    match step:
        case clauses.Fine():
            return _fine(fine=step, breach=breach, base=base)
        case clauses.Warning() | clauses.Suspension() | clauses.Referral():
            return 0
        case _:
            assert_never(step)


def _fine(*, fine: clauses.Fine, breach: int, base: str) -> int:
    exact: Fraction
    if fine.flat is not None:
        exact = fine.flat.minor
    else:
        assert fine.per_excess is not None, "a fine is flat or for each unit of the breach"
        exact = fine.per_excess.of(breach, base=base)
    if fine.at_most is not None:
        exact = min(exact, fine.at_most.minor)
    return quantities.rounded(exact, quantities.Rounding.HALF_UP)
