"""The tables of dues, duties, reporting, inspections and outside orders."""

from ledger.reports import numbers, outline, resource_cells
from ledger.reports.figures import INSTEAD_OF_WORK, SeasonFigures
from ledger.reports.outline import Cell, Sheet, Table


def dues(figures: SeasonFigures) -> Table:
    """Return the dues in money by kind, without what came in place of work."""
    return Table(
        sheet=Sheet.DUES,
        caption=f"Fines and other dues in {figures.currency}",
        columns=("Kind", "Number", "Charged", "Paid", "Open"),
        rows=tuple(
            (
                outline.text(row.kind),
                outline.count(row.count),
                *(
                    outline.money(value, currency=figures.currency)
                    for value in (row.charged, row.paid, row.open)
                ),
            )
            for row in figures.dues
            if row.kind != INSTEAD_OF_WORK
        ),
        empty="No dues in money were charged.",
    )


def instead_of_work(figures: SeasonFigures) -> Table:
    """Return the payments that came in place of work, which are no dues."""
    return Table(
        sheet=Sheet.DUES,
        caption=f"Payments in place of work in {figures.currency}",
        columns=("Kind", "Number", "Paid"),
        rows=tuple(
            (
                outline.text(row.kind),
                outline.count(row.count),
                outline.money(row.paid, currency=figures.currency),
            )
            for row in figures.dues
            if row.kind == INSTEAD_OF_WORK
        ),
        empty="Nothing was paid in place of work.",
    )


def restitution(figures: SeasonFigures) -> Table:
    """Return what cases took off members' allotments."""
    rows = []
    for row in figures.restitution:
        resource = figures.resource(row.resource)
        rows.append(
            (
                outline.text(resource_cells.in_unit(resource)),
                outline.count(row.count),
                resource_cells.amount(resource, row.amount),
            )
        )
    return Table(
        sheet=Sheet.DUES,
        caption="Given back, off members' allotments",
        columns=("Resource", "Times", "Taken off"),
        rows=outline.aligned(rows),
        empty="Nothing is given back off an allotment.",
        note=(
            "What was taken beyond a limit comes off the member's own allotment and is left to all:"
            " off the season's, or where that was closed by then, off the next."
        ),
    )


def duties(figures: SeasonFigures) -> Table:
    """Return the duties of work over all members."""
    duty = figures.duties
    rows: tuple[tuple[Cell, ...], ...] = ()
    unit = ""
    if duty is not None:
        unit = f", {numbers.unit_word(duty.unit)}"
        amounts = (duty.owed, duty.rendered, duty.replaced, duty.short, duty.beyond)
        cells = (outline.amount(value, base=duty.base, unit=duty.unit) for value in amounts)
        rows = ((outline.text("All members"), *cells, outline.count(duty.members_short)),)
    titles = ("Owed", "Given as work", "Replaced by money", "Short", "Given beyond what was owed")
    return Table(
        sheet=Sheet.DUES,
        caption="Duties of work",
        columns=("", *(f"{title}{unit}" for title in titles), "Members short"),
        rows=rows,
        empty="The book asks for no work.",
        note="What was given, replaced and is short is what was owed and what some gave beyond it.",
    )


def reporting(figures: SeasonFigures) -> Table:
    """Return how soon the slips were reported."""
    delays = figures.reporting
    parts = (
        ("Within 24 hours", delays.within_24),
        ("After 24 and within 48 hours", delays.within_48),
        ("Later", delays.later),
        ("All slips", delays.slips),
    )
    median = delays.median_hours
    return Table(
        sheet=Sheet.REPORTING,
        caption="How soon slips were reported after the landing",
        columns=("Delay", "Slips", "Share"),
        rows=tuple(
            (
                outline.text(label),
                outline.count(count),
                outline.share(resource_cells.part(count, delays.slips)),
            )
            for label, count in parts
        ),
        empty="",
        note="" if median is None else f"The median delay is {numbers.tenths(median)} hours.",
    )


def inspections(figures: SeasonFigures) -> Table:
    """Return the slips that monitors checked, by class of members."""
    counts = [
        (row.member_class, row.slips, row.checked, row.differences) for row in figures.inspections
    ]
    if len(counts) > 1:
        _, *columns = zip(*counts, strict=True)
        slips, checked, differences = map(sum, columns)
        counts.append(("All classes", slips, checked, differences))
    return Table(
        sheet=Sheet.REPORTING,
        caption="Slips checked by the monitors",
        columns=("Class of members", "Slips", "Checked", "Share checked", "Differences found"),
        rows=tuple(
            (
                outline.text(label),
                outline.count(slips),
                outline.count(checked),
                outline.share(resource_cells.part(checked, slips)),
                outline.count(differences),
            )
            for label, slips, checked, differences in counts
        ),
        empty="No slip was checked.",
    )


def orders(figures: SeasonFigures) -> Table:
    """Return the orders of outside authorities in the season."""
    return Table(
        sheet=Sheet.REPORTING,
        caption="Orders of outside authorities in the season",
        columns=("Authority", "Resource", "Zones", "From", "Until, not included", "Reason given"),
        rows=tuple(
            (
                outline.text(row.authority),
                outline.text(figures.resource(row.resource).name),
                outline.text(", ".join(row.zones) or "all"),
                outline.day(row.from_day),
                outline.blank() if row.until is None else outline.day(row.until),
                outline.text(row.reason),
            )
            for row in figures.orders
        ),
        empty="No order of an outside authority is recorded in the season.",
    )
