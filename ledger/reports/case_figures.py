"""Figures of findings and cases: counts, medians and reasons, without names."""

import re
from collections import Counter
from collections.abc import Iterable
from fractions import Fraction
from statistics import median

from governance.bylaws import clauses, wording
from governance.sanctions.moves import Move, State
from ledger.cases import queries as cases
from ledger.judgement import queries as judgement
from ledger.reports import figures
from ledger.reports.reported import Reported

# A reason may begin with a code and a colon; free words are never copied into a report.
_REASON_CODE = re.compile(r"([a-z_]+):")


def findings(reported: Reported) -> tuple[figures.FindingRow, ...]:
    """Return the findings of the season by clause, in the order of the book."""
    found: Counter[str] = Counter()
    withdrawn: Counter[str] = Counter()
    for key, record in judgement.latest(commons_id=reported.commons_id).items():
        if reported.during.holds(key.window.first):
            found[key.clause] += 1
            withdrawn[key.clause] += not record.standing
    return tuple(
        figures.FindingRow(
            clause=clause.head.id,
            title=clause.head.title,
            found=found[clause.head.id],
            standing=found[clause.head.id] - withdrawn[clause.head.id],
            withdrawn=withdrawn[clause.head.id],
        )
        for clause in reported.book.clauses
        if found[clause.head.id]
    )


def cases_of(reported: Reported) -> figures.CaseFigures:
    """Return the cases of the season by ladder and step, by state, and how long they took."""
    mine = [
        case
        for case in cases.cases(commons_id=reported.commons_id)
        if reported.during.holds(case.finding.finding.key.window.first)
    ]
    days = [cases.days_between(case) for case in mine]
    states = Counter(case.so_far.state for case in mine)
    reasons = Counter(_reason(case) for case in mine if case.so_far.state is State.SET_ASIDE)
    return figures.CaseFigures(
        steps=_steps(reported, mine),
        states=tuple(
            figures.CountRow(label=state.value.replace("_", " "), count=states[state])
            for state in State
            if states[state]
        ),
        set_aside=tuple(
            figures.CountRow(label=label, count=count) for label, count in sorted(reasons.items())
        ),
        days_act_to_told=_median(told for told, _ in days),
        days_told_to_decided=_median(decided for _, decided in days),
    )


def _steps(reported: Reported, mine: Iterable[cases.CaseRecord]) -> tuple[figures.CaseStepRow, ...]:
    outcomes: dict[tuple[str, int], Counter[str]] = {}
    for case in mine:
        step = case.so_far.step
        if step is None:
            due = cases.step_due(
                commons_id=reported.commons_id, case=case, decided_on=case.so_far.last_on
            )
            step = due.index
        outcomes.setdefault((case.ladder, step), Counter())[_outcome(case)] += 1
    rows = []
    for clause in reported.book.clauses:
        if not isinstance(clause, clauses.SanctionLadder):
            continue
        for index, rung in enumerate(clause.steps):
            counts = outcomes.get((clause.head.id, index))
            if counts:
                rows.append(
                    figures.CaseStepRow(
                        ladder=clause.head.id,
                        title=clause.head.title,
                        step=index + 1,
                        measure=wording.step_words(rung),
                        opened=counts.total(),
                        set_aside=counts["set_aside"],
                        upheld=counts["upheld"],
                        overturned=counts["overturned"],
                        undecided=counts["undecided"],
                    )
                )
    return tuple(rows)


def _outcome(case: cases.CaseRecord) -> str:
    match case.so_far.state:
        case State.SET_ASIDE:
            return "set_aside"
        case State.OVERTURNED:
            return "overturned"
        case State.DECIDED | State.APPEAL_OPEN | State.UNDER_APPEAL | State.FINAL | State.DONE:
            return "upheld"
        case _:
            return "undecided"


def _reason(case: cases.CaseRecord) -> str:
    words = next(event.reason for event in case.events if event.move is Move.SET_ASIDE)
    code = _REASON_CODE.match(words)
    return code[1].replace("_", " ") if code else "other reasons"


def _median(days: Iterable[int | None]) -> Fraction | None:
    known = [Fraction(each) for each in days if each is not None]
    return median(known) if known else None
