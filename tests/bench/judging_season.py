"""A drawn season to judge: ten thousand members, who mostly keep the rules.

About one finding for each thousand takes. The shares of those who do not keep a rule are written
below; nothing here is a claim about a real commons.
"""

from dataclasses import dataclass
from datetime import date
from fractions import Fraction

import numpy as np

from governance import facts
from governance.bylaws import clauses, editions
from governance.periods import OPEN_END, DateRange, Per, day_number
from governance.quantities import Amount

MEMBERS = 10_000
SEASON = DateRange(first=date(2026, 3, 1), until=date(2026, 6, 29))
ZONES = ("anvil_sand", "cockle_row", "long_spit", "mill_reach", "pier_sand", "west_hard")
CLOSED_ZONE = "west_hard"
ORDERED_ZONES = ("mill_reach", "pier_sand")
ORDERED = DateRange(first=date(2026, 5, 4), until=date(2026, 5, 19))
WITHIN_HOURS = 48
DAILY_KG = 40

_ALWAYS = DateRange(first=date(2020, 1, 1), until=OPEN_END)
_RETIRED_IN_MAY = DateRange(first=date(2020, 1, 1), until=date(2026, 5, 10))
_MINUTE = 60_000_000

# Of takes: handed in late; taken where it was closed. Of members: given too small an allotment.
_LATE = 0.0004
_HEEDLESS = 0.003
_OVERDRAWN = 0.005


@dataclass(frozen=True, slots=True, kw_only=True)
class Drawn:
    """A season's facts and the editions to judge them by."""

    editions: editions.Editions
    facts: facts.SeasonFacts


def draw(*, takes: int, seed: int = 20260301) -> Drawn:
    """Return a season with so many takes, the same for the same seed."""
    chance = np.random.default_rng(seed)
    table = _withdrawals(takes, chance)
    return Drawn(
        editions=editions.Editions(books=(_book(),)),
        facts=facts.SeasonFacts(
            season=SEASON,
            roster=_roster(),
            withdrawals=(table,),
            work=_none("work", "min"),
            money=_none("money", "EUR"),
            orders=(
                facts.Order(
                    entry=takes + 1,
                    authority="the shellfish-water authority",
                    resource="clams",
                    zones=ORDERED_ZONES,
                    during=ORDERED,
                ),
            ),
            allotments=_allotments(table, chance),
        ),
    )


def _withdrawals(takes: int, chance: np.random.Generator) -> facts.Withdrawals:
    first = day_number(SEASON.first)
    day = np.sort(chance.integers(first, first + SEASON.length_days, takes))
    instant = (day * 1_440 + chance.integers(300, 1_200, takes)) * _MINUTE
    delay = chance.integers(10, WITHIN_HOURS * 60, takes)
    late = chance.random(takes) < _LATE
    delay[late] += WITHIN_HOURS * 60
    return facts.Withdrawals(
        resource="clams",
        base="g",
        zones=ZONES,
        entry=facts.column(np.arange(1, takes + 1)),
        member=facts.column(chance.integers(1, MEMBERS + 1, takes)),
        day=facts.column(day),
        instant=facts.column(instant),
        reported=facts.column(instant + delay * _MINUTE),
        amount=facts.column(chance.integers(500, 12_000, takes)),
        zone=facts.column(_zones(day, chance)),
    )


def _zones(day: facts.Column, chance: np.random.Generator) -> facts.Column:
    """Draw zones; all but the heedless go to the first zone where theirs is closed."""
    zone = chance.integers(0, len(ZONES), len(day))
    april = (day >= day_number(date(2026, 4, 10))) & (day <= day_number(date(2026, 4, 30)))
    ordered = (day >= day_number(ORDERED.first)) & (day < day_number(ORDERED.until))
    shut = april & (zone == ZONES.index(CLOSED_ZONE))
    shut |= ordered & np.isin(zone, [ZONES.index(each) for each in ORDERED_ZONES])
    shut &= chance.random(len(day)) > _HEEDLESS
    return np.where(shut, 0, zone)


def _roster() -> facts.Roster:
    """Return the members: every fifth lives with the one before; one in fifty retires in May."""
    return facts.Roster(
        members=tuple(
            facts.Member(
                number=number,
                household=number - 1 if number % 5 == 0 else number,
                classes=(
                    facts.Dated(
                        value="licensed",
                        during=_RETIRED_IN_MAY if number % 50 == 7 else _ALWAYS,
                        entry=number,
                    ),
                ),
                shares={},
                suspended=(),
            )
            for number in range(1, MEMBERS + 1)
        )
    )


def _allotments(
    table: facts.Withdrawals, chance: np.random.Generator
) -> dict[tuple[str, int], int]:
    """Return allotments that members used to 70 to 99 parts in a hundred, a few to 110."""
    taken = np.zeros(MEMBERS + 1, dtype=np.int64)
    np.add.at(taken, table.member, table.amount)
    used = chance.integers(70, 100, MEMBERS + 1)
    used[chance.random(MEMBERS + 1) < _OVERDRAWN] = 110
    parts = (taken * 100 // used).tolist()
    return {("clams", number): parts[number] for number in range(1, MEMBERS + 1)}


def _none(kind: str, base: str) -> facts.Contributions:
    nothing = facts.column([])
    return facts.Contributions(
        kind=kind,
        base=base,
        duties=(),
        entry=nothing,
        member=nothing,
        day=nothing,
        amount=nothing,
        duty=nothing,
    )


def _head(clause_id: str) -> clauses.Head:
    return clauses.Head(
        id=clause_id,
        title=clause_id,
        text=clause_id,
        in_force=_ALWAYS,
        who="licensed",
        or_else=None,
    )


def _book() -> clauses.Book:
    return clauses.Book(
        name="The drawn bay",
        edition=1,
        in_force=_ALWAYS,
        adopted=clauses.Adoption(
            by="assembly", on=date(2020, 1, 1), votes_for=1, votes_against=0, votes_abstained=0
        ),
        zone="UTC",
        money="EUR",
        resources=(clauses.ResourceUnits(resource="clams", unit="kg", base="g"),),
        clauses=(
            clauses.QuantityLimit(
                head=_head("2.4"),
                resource="clams",
                more_than=None,
                per=Per.SEASON,
                counted_by=clauses.CountedBy.MEMBER,
                tolerance=Fraction(3, 100),
            ),
            clauses.QuantityLimit(
                head=_head("3.2"),
                resource="clams",
                more_than=Amount(number=Fraction(DAILY_KG), unit="kg"),
                per=Per.DAY,
                counted_by=clauses.CountedBy.HOUSEHOLD,
                tolerance=Fraction(5, 100),
            ),
            clauses.ClosedWindow(
                head=_head("4.1"),
                resource="clams",
                zones=(CLOSED_ZONE,),
                closed=clauses.YearlyWindow(first=(4, 10), last=(4, 30)),
            ),
            clauses.OutsideOrder(head=_head("4.2"), resource="clams"),
            clauses.ReportingDuty(head=_head("5.1"), within_hours=WITHIN_HOURS),
        ),
        digest="0" * 64,
    )
