"""Rows of the commons as the rules read them."""

from collections import defaultdict
from collections.abc import Iterable, Mapping
from fractions import Fraction

from governance.facts import Dated, Member, Order, Roster
from governance.periods import DateRange
from ledger.commons import models


def _during(row: models.DatedRow) -> DateRange:
    return DateRange(first=row.first_day, until=row.until_day)


def _by_member(
    rows: Iterable[models.MemberClass] | Iterable[models.Suspension], *, field: str
) -> Mapping[int, tuple[Dated[str], ...]]:
    held: dict[int, list[Dated[str]]] = defaultdict(list)
    for row in rows:
        dated = Dated(value=str(getattr(row, field)), during=_during(row), entry=row.entry_number)
        held[row.member].append(dated)
    return {member: tuple(values) for member, values in held.items()}


def _shares(
    rows: Iterable[models.Share],
) -> Mapping[int, Mapping[str, tuple[Dated[Fraction], ...]]]:
    held: dict[int, dict[str, list[Dated[Fraction]]]] = defaultdict(lambda: defaultdict(list))
    for row in rows:
        measure = Fraction(row.numerator, row.denominator)
        dated = Dated(value=measure, during=_during(row), entry=row.entry_number)
        held[row.member][row.resource].append(dated)
    return {
        member: {resource: tuple(values) for resource, values in by_resource.items()}
        for member, by_resource in held.items()
    }


def roster(
    *,
    members: Iterable[models.Member],
    classes: Iterable[models.MemberClass],
    shares: Iterable[models.Share],
    suspensions: Iterable[models.Suspension],
) -> Roster:
    """Return the roster that the rows make, in order of member number."""
    class_of = _by_member(classes, field="value")
    suspended = _by_member(suspensions, field="clause")
    shares_of = _shares(shares)
    return Roster(
        members=tuple(
            Member(
                number=row.number,
                household=row.household,
                classes=class_of.get(row.number, ()),
                shares=shares_of.get(row.number, {}),
                suspended=suspended.get(row.number, ()),
            )
            for row in sorted(members, key=lambda row: row.number)
        )
    )


def orders(rows: Iterable[models.OutsideOrder]) -> tuple[Order, ...]:
    """Return the outside orders that the rows make, in order of entry."""
    return tuple(
        Order(
            entry=row.entry_number,
            authority=row.authority,
            resource=row.resource,
            zones=tuple(row.zones),
            during=_during(row),
        )
        for row in sorted(rows, key=lambda row: row.entry_number)
    )
