"""The standing of every member, as wide as a sheet of paper lets it be."""

from collections.abc import Iterable

from ledger.reports import numbers, outline, resource_cells
from ledger.reports.figures import ResourceFigures, SeasonFigures, StandingRow
from ledger.reports.outline import Cell, Sheet, Table

# A standing table with more resources than this does not fit across a sheet of A4.
_RESOURCES_ACROSS = 2


def standings(figures: SeasonFigures) -> tuple[Table, ...]:
    """Return the standing of every member; the duties stand beside the first resources."""
    resources = figures.resources
    runs = [
        resources[start : start + _RESOURCES_ACROSS]
        for start in range(0, max(1, len(resources)), _RESOURCES_ACROSS)
    ]
    return tuple(
        _standing(figures, resources=run, duties=index == 0) for index, run in enumerate(runs)
    )


def _standing(
    figures: SeasonFigures, *, resources: tuple[ResourceFigures, ...], duties: bool
) -> Table:
    duty = figures.duties
    groups = [("", 3), *((resource_cells.in_unit(resource), 4) for resource in resources)]
    columns = ["No.", "House", "Class"]
    columns += ["Allotted", "Carried in", "Taken", "Left"] * len(resources)
    if duties and duty is not None:
        groups.append((f"Work, {numbers.unit_word(duty.unit)}", 3))
        columns += ["Owed", "Given", "Short"]
    if duties:
        groups.append(("", 2))
        columns += [f"Dues, {figures.currency}", "Open cases"]

    def cells(row: StandingRow) -> Iterable[Cell]:
        yield outline.label_number(row.member)
        yield outline.label_number(row.household)
        yield outline.text(row.member_class)
        held = {holding.resource: holding for holding in row.holdings}
        for resource in resources:
            if resource.code not in held:
                yield from (outline.blank(),) * 4
                continue
            own = held[resource.code]
            for value in (own.allotment, own.carried_in, own.taken, own.left):
                yield resource_cells.amount(resource, value)
        if duties and duty is not None:
            for value in (row.duty_owed, row.duty_rendered, row.duty_short):
                yield outline.amount(value, base=duty.base, unit=duty.unit)
        if duties:
            yield outline.money(row.dues_owed, currency=figures.currency)
            yield outline.count(row.open_cases)

    return Table(
        sheet=Sheet.STANDING,
        caption="Standing of every member at the end of the season",
        columns=tuple(columns),
        groups=tuple(groups),
        rows=outline.aligned(tuple(cells(row)) for row in figures.standings),
        empty="The roll has no member.",
        note=(
            "No. is the member's number, House the household's. Left below zero means more was"
            " taken than the member had."
        ),
    )
