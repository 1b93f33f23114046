"""The tables of findings and of the cases made of them."""

from ledger.reports import outline
from ledger.reports.figures import CountRow, SeasonFigures
from ledger.reports.outline import Sheet, Table

STATE_MEANINGS = {
    "noted": "somebody put it down; nobody has looked yet",
    "checking": "a person looks whether the facts hold",
    "set aside": "closed without a decision; nothing follows",
    "told": "the member has been told and has time to answer",
    "answered": "the member has answered",
    "unanswered": "the time to answer is over",
    "decided": "decided; the member is yet to be given the reasons",
    "appeal open": "decided; the member may still appeal",
    "under appeal": "the member has appealed",
    "overturned": "the appeal took the decision back; nothing follows",
    "final": "the decision stands; something of it is still to be done, such as paying",
    "done": "the decision stands, and all of it is carried out",
}
"""What each state of a case means, for those who were not there."""

_CASE_OUTCOMES = ("Opened", "Set aside", "Decided, stands", "Overturned on appeal", "Undecided")


def findings(figures: SeasonFigures) -> Table:
    """Return the findings by clause."""
    return Table(
        sheet=Sheet.FINDINGS,
        caption="Findings by clause",
        columns=("Clause", "Title", "Found", "Withdrawn", "Standing"),
        rows=tuple(
            (
                outline.text(row.clause),
                outline.text(row.title),
                outline.count(row.found),
                outline.count(row.withdrawn),
                outline.count(row.standing),
            )
            for row in figures.findings
        ),
        empty="Nothing was found.",
        note=(
            "A later entry, such as a correction, may withdraw a finding. Every finding stands one"
            " by one in the annex."
        ),
    )


def case_steps(figures: SeasonFigures) -> Table:
    """Return the cases by ladder and step."""
    return Table(
        sheet=Sheet.CASES,
        caption="Cases by ladder and step",
        columns=("Ladder", "Step", *_CASE_OUTCOMES),
        rows=tuple(
            (
                outline.text(row.title),
                outline.text(f"{row.step}. {row.measure}"),
                outline.count(row.opened),
                outline.count(row.set_aside),
                outline.count(row.upheld),
                outline.count(row.overturned),
                outline.count(row.undecided),
            )
            for row in figures.cases.steps
        ),
        empty="No case was opened.",
    )


def case_states(figures: SeasonFigures) -> Table:
    """Return the cases by the state they are in, and what that means."""
    return Table(
        sheet=Sheet.CASES,
        caption="Cases by present state",
        columns=("State", "Cases", "What it means"),
        rows=tuple(
            (
                outline.text(row.label),
                outline.count(row.count),
                outline.text(STATE_MEANINGS.get(row.label, "")),
            )
            for row in figures.cases.states
        ),
        empty="No case was opened.",
    )


def set_aside(figures: SeasonFigures) -> Table:
    """Return the reasons for which cases were set aside."""
    return _counts(
        figures.cases.set_aside,
        caption="Why cases were set aside",
        columns=("Reason", "Cases"),
        empty="No case was set aside.",
    )


def case_days(figures: SeasonFigures) -> Table:
    """Return how long the procedure took."""
    return Table(
        sheet=Sheet.CASES,
        caption="How long it took",
        columns=("Stretch", "Median days"),
        rows=outline.aligned(
            (
                (
                    outline.text("From the act until the member was told"),
                    outline.tenths(figures.cases.days_act_to_told),
                ),
                (
                    outline.text("From then until the decision"),
                    outline.tenths(figures.cases.days_told_to_decided),
                ),
            )
        ),
        empty="",
    )


def _counts(
    rows: tuple[CountRow, ...], *, caption: str, columns: tuple[str, str], empty: str
) -> Table:
    return Table(
        sheet=Sheet.CASES,
        caption=caption,
        columns=columns,
        rows=tuple((outline.text(row.label), outline.count(row.count)) for row in rows),
        empty=empty,
    )
