"""The standing of every member, as wide as a sheet of paper lets it be."""

from collections.abc import Iterator

from ledger.reports import numbers, outline, resource_cells
from ledger.reports.figures import HoldingFigures, ResourceFigures, SeasonFigures, StandingRow
from ledger.reports.outline import Cell, Sheet, Table

_COLUMNS = ("Allotted", "Carried in", "Given back", "Taken", "Left")
_WHO = "No. is the member's number, House the household's."


def standings(figures: SeasonFigures) -> tuple[Table, ...]:
    """Return the standing of every member: in the resources, then in work and dues."""
    resources, across = figures.resources, resource_cells.RESOURCES_ACROSS
    return (
        *(
            _holdings(figures, resources[start : start + across])
            for start in range(0, len(resources), across)
        ),
        _duties(figures),
    )


def _holdings(figures: SeasonFigures, resources: tuple[ResourceFigures, ...]) -> Table:
    def cells(row: StandingRow) -> Iterator[Cell]:
        yield from _whose(row)
        held = {holding.resource: holding for holding in row.holdings}
        for resource in resources:
            if resource.code in held:
                yield from _amounts(resource, [held[resource.code]])
            else:
                yield from (outline.blank(),) * len(_COLUMNS)

    def sums() -> Iterator[Cell]:
        yield from (outline.word("All"), outline.blank(), outline.text(""))
        for resource in resources:
            held = [
                holding
                for row in figures.standings
                for holding in row.holdings
                if holding.resource == resource.code
            ]
            yield from _amounts(resource, held)

    rows = [tuple(cells(row)) for row in figures.standings]
    return Table(
        sheet=Sheet.STANDING,
        caption="Standing of every member at the end of the season",
        columns=("No.", "House", "Class", *_COLUMNS * len(resources)),
        groups=(
            ("", 3),
            *((resource_cells.in_unit(each), len(_COLUMNS)) for each in resources),
        ),
        rows=outline.aligned((*rows, tuple(sums()))) if rows else (),
        empty="The roll has no member.",
        note=(
            f"{_WHO} Allotted is the part of the allowable as first split; given back is what cases"
            " took off it by the close and left to all. Left is allotted and carried in, less given"
            " back and taken; below zero, more was taken than the member had."
        ),
    )


def _whose(row: StandingRow) -> Iterator[Cell]:
    yield outline.label_number(row.member)
    yield outline.label_number(row.household)
    yield outline.text(row.member_class)


def _amounts(resource: ResourceFigures, held: list[HoldingFigures]) -> Iterator[Cell]:
    for field in ("allotment", "carried_in", "given_back", "taken", "left"):
        total = sum(getattr(holding, field) for holding in held)
        yield resource_cells.amount(resource, total)


def _duties(figures: SeasonFigures) -> Table:
    duty = figures.duties
    groups: list[tuple[str, int]] = [("", 3)]
    columns = ["No.", "House", "Class"]
    if duty is not None:
        groups.append((f"Work, {numbers.unit_word(duty.unit)}", 3))
        columns += ["Owed", "Given or paid for", "Short"]
    groups.append(("", 2))
    columns += [f"Fines open, {figures.currency}", "Cases not completed"]

    def cells(row: StandingRow) -> Iterator[Cell]:
        yield from _whose(row)
        if duty is not None:
            for value in (row.duty_owed, row.duty_rendered, row.duty_short):
                yield outline.amount(value, base=duty.base, unit=duty.unit)
        yield outline.money(row.dues_owed, currency=figures.currency)
        yield outline.count(row.open_cases)

    return Table(
        sheet=Sheet.MEMBERS,
        caption="Work, dues and cases of every member",
        columns=tuple(columns),
        groups=tuple(groups),
        rows=outline.aligned(tuple(cells(row)) for row in figures.standings),
        empty="The roll has no member.",
        note=(
            f"{_WHO} A case is not completed while something of it may still happen, such as a fine"
            " to be paid; a household that counts as one shares its cases."
        ),
    )
