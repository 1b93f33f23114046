"""The tables of a season's use and its settlement, and of the season that follows."""

import statistics
from collections.abc import Callable, Iterator
from itertools import accumulate

from ledger.reports import numbers, outline, resource_cells
from ledger.reports.figures import NextSeasonRow, ResourceFigures, SeasonFigures
from ledger.reports.outline import Cell, Sheet, Table
from ledger.reports.resource_cells import RESOURCES_ACROSS

_NEXT_COLUMNS = ("Allotted", "Carried in", "Comes off", "May take")


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
        note=(
            "Left is the allowable and what was carried in, less what was taken; the settlement"
            " says where it went."
        ),
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
    """Return how what was left of each resource splits, a column each."""
    resources = figures.resources

    def row(label: str, value: Callable[[ResourceFigures], int]) -> tuple[Cell, ...]:
        return outline.text(label), *(
            resource_cells.amount(each, value(each)) for each in resources
        )

    rows = [
        row("Kept in reserve", lambda r: r.reserve),
        row("Given back in the season, off allotments", lambda r: r.settlement.given_back),
        row("Carried to the next season", lambda r: r.settlement.carried),
        row("Unclaimed, to the pool", lambda r: r.settlement.unclaimed),
        row("less what is owed from the next season", lambda r: -r.settlement.owed),
    ]
    if any(resource.settlement.after_close for resource in resources):
        rows.append(
            row("less what was entered after the close", lambda r: -r.settlement.after_close)
        )
    rows.append(row("Left of the season: all of that", lambda r: r.left))
    return Table(
        sheet=Sheet.SETTLEMENT,
        caption="Settlement of the season",
        columns=("", *map(resource_cells.in_unit, resources)),
        rows=outline.aligned(rows) if resources else (),
        empty="The commons has no resource.",
        note="Left is the allowable and what was carried in, less what was taken.",
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
            line("Adopted by", lambda row: outline.word(row.adopted_by)),
            line("Adopted on", lambda row: outline.day(row.adopted_on)),
            line("First day", lambda row: outline.day(row.opens)),
            line("Last day", lambda row: outline.day(row.closes)),
            *outline.aligned(
                (
                    amounts("Allowable, adopted", lambda row: row.allowable),
                    amounts("less the reserve", lambda row: -row.reserve),
                    amounts("Allotted to members", lambda row: row.allotted),
                    amounts("and carried in", lambda row: row.carried_in),
                    amounts("less what was taken beyond a measure", lambda row: -row.owed),
                    amounts(
                        "less what was given back since the close", lambda row: -row.given_back
                    ),
                    amounts("Members may take in all", lambda row: row.may_take),
                    amounts("The least that one may take", lambda row: min(row.shares, default=0)),
                    amounts("The median of what each may take", _median),
                    amounts("The most that one may take", lambda row: max(row.shares, default=0)),
                )
            ),
            line("Members who may take some", lambda row: outline.count(len(row.shares))),
        )
        if rows
        else (),
        empty="No allowable of the next season is adopted yet.",
    )


def _median(row: NextSeasonRow) -> int:
    """Return the median of what each may take, rounded down."""
    return int(statistics.median(row.shares)) if row.shares else 0


def next_members(figures: SeasonFigures) -> tuple[Table, ...]:
    """Return what each member may take in the next season, by number."""
    return tuple(
        _next_members(figures, figures.next_season[start : start + RESOURCES_ACROSS])
        for start in range(0, len(figures.next_season), RESOURCES_ACROSS)
    )


def _next_members(figures: SeasonFigures, rows: tuple[NextSeasonRow, ...]) -> Table:
    resources = [figures.resource(row.resource) for row in rows]
    held = [{each.member: each for each in row.holdings} for row in rows]
    household = {each.member: each.household for row in rows for each in row.holdings}

    def cells(member: int) -> Iterator[Cell]:
        yield outline.label_number(member)
        yield outline.label_number(household[member])
        for resource, of in zip(resources, held, strict=True):
            own = of.get(member)
            if own is None:
                yield from (outline.blank(),) * len(_NEXT_COLUMNS)
                continue
            off = -own.owed - own.given_back
            for value in (own.allotment, own.carried_in, off, own.may_take):
                yield resource_cells.amount(resource, value)

    def sums() -> Iterator[Cell]:
        yield from (outline.word("All"), outline.blank())
        for resource, row in zip(resources, rows, strict=True):
            for value in (row.allotted, row.carried_in, -row.owed - row.given_back, row.may_take):
                yield resource_cells.amount(resource, value)

    return Table(
        sheet=Sheet.NEXT_MEMBERS,
        caption="What each member may take in the next season",
        columns=("No.", "House", *_NEXT_COLUMNS * len(rows)),
        groups=(
            ("", 2),
            *((resource_cells.in_unit(each), len(_NEXT_COLUMNS)) for each in resources),
        ),
        rows=outline.aligned(
            (*(tuple(cells(member)) for member in sorted(household)), tuple(sums()))
        ),
        empty="Nobody has an allotment.",
        note=(
            "No. is the member's number, House the household's. Comes off: what was taken beyond"
            " the measure, and what was given back since the close."
        ),
    )
