"""The tables that go one by one: every finding and every case, without a word that people wrote."""

from datetime import date

from ledger.reports import numbers, outline
from ledger.reports.details import CaseDetail, FindingDetail
from ledger.reports.figures import SeasonFigures
from ledger.reports.outline import Cell, Sheet, Table

ENTRIES_SHOWN = 3


def findings(figures: SeasonFigures) -> Table:
    """Return every finding, by number."""
    return Table(
        sheet=Sheet.FINDING_LIST,
        caption="Every finding",
        columns=(
            *("No.", "Clause", "About", "From", "Through", "Total", "Limit", "Breach", "Unit"),
            *("Rests on entries", "State"),
        ),
        rows=tuple(map(_finding, figures.finding_details)),
        empty="Nothing was found.",
        note=(
            "Breach is what lies beyond the limit and its tolerance; for a duty, what was missing"
            " or late. Under a limit of nought nothing was allowed. Of more than"
            f" {ENTRIES_SHOWN} entries the first are named."
        ),
    )


def _finding(row: FindingDetail) -> tuple[Cell, ...]:
    return (
        outline.label_number(row.number),
        outline.text(row.clause),
        outline.text(f"{row.subject_kind} {row.subject}"),
        outline.day(row.first),
        outline.day(row.last),
        *(_amount(row, value) for value in (row.total, row.limit, row.breach)),
        outline.text(numbers.unit_word(row.unit)),
        outline.text(entries(row.entries)),
        outline.text("standing" if row.standing else "withdrawn"),
    )


def _amount(row: FindingDetail, value: int) -> Cell:
    """Return an amount in its unit; hours, which minutes seldom divide into, to two decimals."""
    if row.base != "min":
        return outline.amount(value, base=row.base, unit=row.unit)
    exact = numbers.reading(value, base=row.base, unit=row.unit)
    return outline.hundredths(exact)


def entries(found: tuple[int, ...]) -> str:
    """Write the first few entries, and how many there are where there are more."""
    said = ", ".join(map(str, found[:ENTRIES_SHOWN])) or "none"
    return said if len(found) <= ENTRIES_SHOWN else f"{said}, … ({len(found):,} in all)"


def cases(figures: SeasonFigures) -> Table:
    """Return every case, by number."""
    return Table(
        sheet=Sheet.CASE_LIST,
        caption="Every case",
        columns=(
            *("No.", "Finding", "Ladder", "Step", f"Sum, {figures.currency}", "State"),
            *("Told", "Decided", "Final"),
        ),
        rows=tuple(_case(row, figures.currency) for row in figures.case_details),
        empty="No case was opened.",
        note="A step is the rung of the ladder, counted from the first, and what it is in a word.",
    )


def _case(row: CaseDetail, currency: str) -> tuple[Cell, ...]:
    return (
        outline.label_number(row.number),
        outline.label_number(row.finding),
        outline.text(row.ladder),
        outline.text("–" if row.step is None else f"{row.step}. {row.measure}"),
        outline.money(row.amount, currency=currency) if row.amount else outline.blank(),
        outline.text(row.state),
        *map(_day, (row.told_on, row.decided_on, row.final_on)),
    )


def _day(value: date | None) -> Cell:
    return outline.blank() if value is None else outline.day(value)
