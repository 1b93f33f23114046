"""The tables of a season's use, its settlement, and the season that follows."""

from collections.abc import Callable
from itertools import accumulate

from ledger.reports import numbers, outline, resource_cells
from ledger.reports.figures import NextSeasonRow, ResourceFigures, SeasonFigures
from ledger.reports.outline import Cell, Sheet, Table


def use(figures: SeasonFigures) -> Table:
    """Return the use of each resource, a column each."""
    resources = figures.resources

    def row(label: str, cell: Callable[[ResourceFigures], Cell]) -> tuple[Cell, ...]:
        return outline.text(label), *map(cell, resources)

    amounts = (
        row("Allowable", lambda r: resource_cells.amount(r, r.allowable)),
        row("of it kept in reserve", lambda r: resource_cells.amount(r, r.reserve)),
        row("of it allotted to members", lambda r: resource_cells.amount(r, r.allotted)),
        row("Carried in from the season before", lambda r: resource_cells.amount(r, r.carried_in)),
        row("Taken", lambda r: resource_cells.amount(r, r.taken)),
        row("Left", lambda r: resource_cells.amount(r, r.left)),
    )
    return Table(
        sheet=Sheet.SUMMARY,
        caption="Use of each resource in the season",
        columns=("", *map(resource_cells.in_unit, resources)),
        rows=(
            row("First day", lambda r: outline.day(r.opens)),
            row("Last day", lambda r: outline.day(r.closes)),
            *outline.aligned(amounts),
            row("Share of the allowable taken", lambda r: outline.share(r.used)),
            row("Slips", lambda r: outline.count(r.slips)),
            row("Members who took", lambda r: outline.count(r.members_took)),
            row("Members entitled to take", lambda r: outline.count(r.members_entitled)),
        ),
        empty="The commons has no resource.",
    )


def zones(resource: ResourceFigures) -> Table:
    """Return what was taken from each zone of a resource."""
    return Table(
        sheet=Sheet.SUMMARY,
        caption=f"Where the {resource.name} came from",
        columns=("Zone", "Slips", f"Taken, {numbers.unit_word(resource.unit)}", "Share"),
        rows=outline.aligned(
            (
                outline.text(row.zone),
                outline.count(row.slips),
                resource_cells.amount(resource, row.taken),
                outline.share(resource_cells.part(row.taken, resource.taken)),
            )
            for row in resource.zones
        ),
        empty=f"No zone was named for {resource.name}.",
    )


def allowable_steps(figures: SeasonFigures) -> Table:
    """Return the allowables in force, by the day each began to hold."""
    return Table(
        sheet=Sheet.BY_DAY,
        caption="Allowables in force",
        columns=("Resource", "From", "Allowable", "Unit"),
        rows=outline.aligned(
            (
                outline.text(resource.name),
                outline.day(step.from_day),
                resource_cells.amount(resource, step.amount),
                outline.text(numbers.unit_word(resource.unit)),
            )
            for resource in figures.resources
            for step in resource.allowable_steps
        ),
        empty="No allowable was in force.",
    )


def by_day(figures: SeasonFigures) -> Table:
    """Return the take of each day and the sum so far, two columns for each resource."""
    resources = figures.resources
    taken = [{row.day: row.amount for row in resource.daily} for resource in resources]
    days = sorted(set().union(*taken))
    columns: list[list[Cell]] = [[outline.day(day) for day in days]]
    for resource, amounts in zip(resources, taken, strict=True):
        daily = [amounts.get(day, 0) for day in days]
        columns.append([resource_cells.amount(resource, value) for value in daily])
        columns.append([resource_cells.amount(resource, value) for value in accumulate(daily)])
    return Table(
        sheet=Sheet.BY_DAY,
        caption="Take by day",
        columns=("Day", *("Taken", "Sum so far") * len(resources)),
        groups=(("", 1), *((resource_cells.in_unit(resource), 2) for resource in resources)),
        rows=outline.aligned(zip(*columns, strict=True)),
        empty="Nothing was taken.",
    )


def settlement(figures: SeasonFigures) -> Table:
    """Return how each resource's season was settled."""
    return Table(
        sheet=Sheet.SETTLEMENT,
        caption="Settlement of the season",
        columns=("Resource", "Carried to the next season", "Unclaimed, to the pool", "Owed back"),
        rows=outline.aligned(
            (
                outline.text(resource_cells.in_unit(resource)),
                resource_cells.amount(resource, resource.settlement.carried),
                resource_cells.amount(resource, resource.settlement.unclaimed),
                resource_cells.amount(resource, resource.settlement.owed),
            )
            for resource in figures.resources
        ),
        empty="The commons has no resource.",
    )


def next_season(figures: SeasonFigures) -> Table:
    """Return the next season as adopted, a column for each resource."""
    rows = figures.next_season

    def line(label: str, cell: Callable[[NextSeasonRow], Cell]) -> tuple[Cell, ...]:
        return outline.text(label), *map(cell, rows)

    def amounts(label: str, value: Callable[[NextSeasonRow], int]) -> tuple[Cell, ...]:
        return line(
            label, lambda row: resource_cells.amount(figures.resource(row.resource), value(row))
        )

    return Table(
        sheet=Sheet.NEXT_SEASON,
        caption="The next season as adopted",
        columns=("", *(resource_cells.in_unit(figures.resource(row.resource)) for row in rows)),
        rows=(
            line("Adopted by", lambda row: outline.text(row.adopted_by)),
            line("Adopted on", lambda row: outline.day(row.adopted_on)),
            line("First day", lambda row: outline.day(row.opens)),
            line("Last day", lambda row: outline.day(row.closes)),
            *outline.aligned(
                (
                    amounts("Allowable", lambda row: row.allowable),
                    amounts("of it kept in reserve", lambda row: row.reserve),
                    amounts("of it allotted to members", lambda row: row.allotted),
                    amounts("Smallest allotment", lambda row: row.smallest),
                    amounts("Median allotment", lambda row: row.median),
                    amounts("Largest allotment", lambda row: row.largest),
                )
            ),
            line("Members with an allotment", lambda row: outline.count(row.holders)),
        )
        if rows
        else (),
        empty="No allowable of the next season is adopted yet.",
    )
