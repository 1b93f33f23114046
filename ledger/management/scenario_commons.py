"""Read commons.yaml: the association on the day its book is opened."""

from collections.abc import Collection
from datetime import timedelta
from fractions import Fraction
from pathlib import Path
from zoneinfo import ZoneInfo, ZoneInfoNotFoundError

from governance.periods import DateRange
from ledger.management import scenario_cells as cells
from ledger.management import scenario_records as records


def read(*, folder: Path) -> records.Commons:
    """Return what the page says.

    :raises ledger.management.scenario_cells.ScenarioError: naming file, row and column.
    """
    page = cells.page(folder=folder, file="commons.yaml").only(
        *("name", "zone", "money", "book_opened", "resources", "seasons"),
        *("zones", "draw_points", "members", "roles"),
    )
    resources = tuple(_resource(page.page("resources"), code) for code in _codes(page))
    codes = [resource.code for resource in resources]
    boats = tuple(_boat(each) for each in page.pages("draw_points"))
    members = _members(page, codes, [boat.code for boat in boats])
    return records.Commons(
        name=page["name"].words(),
        zone=zone(page["zone"]).key,
        money=page["money"].words(),
        book_opened=page["book_opened"].day(),
        resources=resources,
        seasons=tuple(_season(each, codes) for each in page.pages("seasons")),
        zones=tuple(_zone(each, codes) for each in page.pages("zones")),
        boats=boats,
        members=members,
        offices=_offices(page.page("roles"), {member.number for member in members}),
    )


def zone(cell: cells.Cell) -> ZoneInfo:
    """Return the time zone that a cell names."""
    try:
        return ZoneInfo(cell.words())
    except (ZoneInfoNotFoundError, ValueError):
        raise cell.wrong("a time zone, such as Europe/Dublin") from None


def _codes(page: cells.Page) -> tuple[str, ...]:
    return page.page("resources").keys()


def _resource(resources: cells.Page, code: str) -> records.Resource:
    page = resources.page(code).only("name", "unit", "base")
    return records.Resource(
        code=code,
        name=page["name"].words(),
        unit=page["unit"].words(),
        base=page["base"].words(),
    )


def _season(page: cells.Page, resources: Collection[str]) -> records.Season:
    page.only("code", "resource", "first", "last", "closes_on", "allowable_kg")
    first, last = page["first"].day(), page["last"].day()
    if last < first:
        raise page["last"].wrong("a day on or after the first")
    return records.Season(
        code=page["code"].words(),
        resource=page["resource"].one_of(resources),
        during=DateRange(first=first, until=last + timedelta(days=1)),
        closes_on=page["closes_on"].day(),
        allowable=page["allowable_kg"].above_zero() if "allowable_kg" in page else None,
    )


def _zone(page: cells.Page, resources: Collection[str]) -> records.Zone:
    page.only("code", "name", "resource")
    return records.Zone(
        code=page["code"].words(),
        name=page["name"].words(),
        resource=page["resource"].one_of(resources),
    )


def _boat(page: cells.Page) -> records.Boat:
    page.only("code", "name")
    return records.Boat(code=page["code"].words(), name=page["name"].words())


def _members(
    page: cells.Page, resources: Collection[str], boats: Collection[str]
) -> tuple[records.Member, ...]:
    members: dict[int, records.Member] = {}
    for each in page.pages("members"):
        member = _member(each, resources, boats)
        if member.number in members:
            raise each["number"].wrong("a number that stands once")
        members[member.number] = member
        # A household bears the number of its first member, who is listed before the others.
        each["household"].known(members, what="member listed so far")
    return tuple(members.values())


def _member(page: cells.Page, resources: Collection[str], boats: Collection[str]) -> records.Member:
    page.only("number", "name", "household", "class", "shares", "boat")
    return records.Member(
        number=page["number"].whole(),
        name=page["name"].words(),
        household=page["household"].whole(),
        membership_class=page["class"].words(),
        shares=_shares(page.page("shares").only(*resources)) if "shares" in page else (),
        boat=page["boat"].one_of(boats) if "boat" in page else None,
    )


def _shares(page: cells.Page) -> tuple[records.Share, ...]:
    return tuple(
        records.Share(resource=resource, measure=Fraction(page[resource].above_zero()))
        for resource in page.keys()
    )


def _offices(page: cells.Page, members: Collection[int]) -> tuple[records.Office, ...]:
    return tuple(
        records.Office(role=role, member=cell.known(members, what="member"))
        for role in page.keys()
        for cell in page.list_of(role)
    )
