"""Small books and seasons that the compliance tests are set in: an invented bay with two stocks."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from datetime import UTC, date, datetime, timedelta
from fractions import Fraction
from typing import Any

from governance import facts
from governance.bylaws import clauses, editions
from governance.periods import OPEN_END, DateRange, Per, day_number
from governance.quantities import Amount, Price

SEASON = DateRange(first=date(2026, 3, 1), until=date(2026, 6, 29))
AFTER = SEASON.until
ALWAYS = DateRange(first=date(2020, 1, 1), until=OPEN_END)
ZONES = ("anvil_sand", "cockle_row", "mill_reach", "pier_sand")


def days(first: date, last: date) -> DateRange:
    """Return the range from one day to another, both included."""
    return DateRange(first=first, until=last + timedelta(days=1))


def head(
    clause_id: str,
    *,
    who: str | None = None,
    or_else: str | None = None,
    in_force: DateRange = ALWAYS,
) -> clauses.Head:
    return clauses.Head(
        id=clause_id,
        title=f"Title of {clause_id}",
        text=f"Text of {clause_id}.",
        in_force=in_force,
        who=who,
        or_else=or_else,
    )


def with_head(clause: clauses.Clause, **changes: Any) -> clauses.Clause:
    """Return a clause with some parts of its head changed."""
    return replace(clause, head=replace(clause.head, **changes))


def limit(
    clause_id: str = "3.2",
    *,
    resource: str = "clams",
    more_than: str | None = "40 kg",
    per: Per = Per.DAY,
    counted_by: clauses.CountedBy = clauses.CountedBy.HOUSEHOLD,
    tolerance: Fraction = Fraction(5, 100),
    who: str | None = None,
    or_else: str | None = "ladder.overdraw",
    in_force: DateRange = ALWAYS,
) -> clauses.QuantityLimit:
    return clauses.QuantityLimit(
        head=head(clause_id, who=who, or_else=or_else, in_force=in_force),
        resource=resource,
        more_than=None if more_than is None else Amount.parse(more_than),
        per=per,
        counted_by=counted_by,
        tolerance=tolerance,
    )


def closed(
    clause_id: str = "4.1",
    *,
    first: tuple[int, int] = (4, 10),
    last: tuple[int, int] = (4, 30),
    zones: tuple[str, ...] = ("mill_reach",),
    who: str | None = None,
) -> clauses.ClosedWindow:
    return clauses.ClosedWindow(
        head=head(clause_id, who=who, or_else="ladder.closure"),
        resource="clams",
        zones=zones,
        closed=clauses.YearlyWindow(first=first, last=last),
    )


def order_clause(clause_id: str = "4.2", *, who: str | None = None) -> clauses.OutsideOrder:
    return clauses.OutsideOrder(
        head=head(clause_id, who=who, or_else="ladder.closure"), resource="clams"
    )


def reporting_duty(
    clause_id: str = "5.1", *, hours: int = 48, who: str | None = None
) -> clauses.ReportingDuty:
    return clauses.ReportingDuty(
        head=head(clause_id, who=who, or_else="ladder.paperwork"), within_hours=hours
    )


def work_duty(
    clause_id: str = "6.1",
    *,
    work_days: Fraction = Fraction(2),
    instead: str | None = "60 EUR/d",
    who: str | None = None,
    in_force: DateRange = ALWAYS,
) -> clauses.WorkDuty:
    return clauses.WorkDuty(
        head=head(clause_id, who=who, or_else="ladder.shirking", in_force=in_force),
        days=work_days,
        day_minutes=360,
        instead=None if instead is None else Price.parse(instead),
    )


def book(
    *held: clauses.Clause, edition: int = 4, in_force: DateRange = ALWAYS, digest: str = "b0" * 32
) -> clauses.Book:
    return clauses.Book(
        name="Tarrin Bay Fishing Cooperative",
        edition=edition,
        in_force=in_force,
        adopted=clauses.Adoption(
            by="assembly",
            on=date(2026, 2, 14),
            votes_for=31,
            votes_against=4,
            votes_abstained=2,
        ),
        zone="Europe/Dublin",
        money="EUR",
        resources=(
            clauses.ResourceUnits(resource="clams", unit="kg", base="g"),
            clauses.ResourceUnits(resource="mullet", unit="kg", base="g"),
        ),
        clauses=held,
        digest=digest,
    )


def one(*held: clauses.Clause) -> editions.Editions:
    """Return the editions of a commons that only ever had one, with these clauses."""
    return editions.Editions(books=(book(*held),))


@dataclass(frozen=True, slots=True, kw_only=True)
class Take:
    """One row of takes, as people write it: kilos may be a fraction; a delay in minutes."""

    entry: int
    member: int = 1
    day: date = date(2026, 4, 3)
    kg: Fraction | int = 1
    zone: str = "anvil_sand"
    resource: str = "clams"
    delay_min: Fraction | int = 60


def microseconds(day: date) -> int:
    """Return noon of a day in UTC as microseconds since 1970."""
    return round(datetime(day.year, day.month, day.day, 12, tzinfo=UTC).timestamp()) * 1_000_000


def withdrawals(takes: Iterable[Take], *, resource: str = "clams") -> facts.Withdrawals:
    rows = [take for take in takes if take.resource == resource]
    instants = [microseconds(take.day) for take in rows]
    return facts.Withdrawals(
        resource=resource,
        base="g",
        zones=ZONES,
        entry=facts.column([take.entry for take in rows]),
        member=facts.column([take.member for take in rows]),
        day=facts.column([day_number(take.day) for take in rows]),
        instant=facts.column(instants),
        reported=facts.column(
            [
                instant + int(take.delay_min * 60_000_000)
                for instant, take in zip(instants, rows, strict=True)
            ]
        ),
        amount=facts.column([int(take.kg * 1000) for take in rows]),
        zone=facts.column([ZONES.index(take.zone) for take in rows]),
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Gift:
    """One row of contributions: minutes of work, or cents."""

    entry: int
    member: int
    amount: int
    day: date = date(2026, 5, 2)
    duty: str = "6.1"


def contributions(kind: str, base: str, gifts: Iterable[Gift]) -> facts.Contributions:
    rows = list(gifts)
    duties = tuple(sorted({gift.duty for gift in rows}))
    return facts.Contributions(
        kind=kind,
        base=base,
        duties=duties,
        entry=facts.column([gift.entry for gift in rows]),
        member=facts.column([gift.member for gift in rows]),
        day=facts.column([day_number(gift.day) for gift in rows]),
        amount=facts.column([gift.amount for gift in rows]),
        duty=facts.column([duties.index(gift.duty) for gift in rows]),
    )


def member(
    number: int,
    *,
    household: int | None = None,
    classes: Mapping[str, DateRange] | None = None,
    suspended: Mapping[str, DateRange] | None = None,
) -> facts.Member:
    """Return a member: licensed for ever and never suspended unless something else is said."""
    in_classes = {"licensed": ALWAYS} if classes is None else classes
    return facts.Member(
        number=number,
        household=number if household is None else household,
        classes=tuple(
            facts.Dated(value=name, during=during, entry=number)
            for name, during in in_classes.items()
        ),
        shares={},
        suspended=tuple(
            facts.Dated(value=clause, during=during, entry=900 + place)
            for place, (clause, during) in enumerate((suspended or {}).items())
        ),
    )


def season(
    takes: Iterable[Take] = (),
    *,
    members: Iterable[facts.Member] = (member(1), member(2), member(3, household=1)),
    work: Iterable[Gift] = (),
    money: Iterable[Gift] = (),
    orders: Iterable[facts.Order] = (),
    allotments: Mapping[tuple[str, int], int] | None = None,
    window: DateRange = SEASON,
) -> facts.SeasonFacts:
    """Return the facts of a season: members 1 and 3 keep one household, unless others are given."""
    rows = list(takes)
    return facts.SeasonFacts(
        season=window,
        roster=facts.Roster(members=tuple(members)),
        withdrawals=(
            withdrawals(rows, resource="clams"),
            withdrawals(rows, resource="mullet"),
        ),
        work=contributions("work", "min", work),
        money=contributions("money", "EUR", money),
        orders=tuple(orders),
        allotments=allotments or {},
    )


def shuffled(known: facts.SeasonFacts, order: Iterable[int]) -> facts.SeasonFacts:
    """Return the same facts with the rows of every table of takes in another order.

    ``order`` holds a rank for each row; ranks beyond a table's length are left out.
    """
    ranks = list(order)

    def reordered(table: facts.Withdrawals) -> facts.Withdrawals:
        rows = facts.column([rank for rank in ranks if rank < len(table)])
        return facts.Withdrawals(
            resource=table.resource,
            base=table.base,
            zones=table.zones,
            entry=table.entry[rows],
            member=table.member[rows],
            day=table.day[rows],
            instant=table.instant[rows],
            reported=table.reported[rows],
            amount=table.amount[rows],
            zone=table.zone[rows],
        )

    return replace(known, withdrawals=tuple(reordered(table) for table in known.withdrawals))
