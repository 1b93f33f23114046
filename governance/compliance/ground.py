"""One season's facts made ready for judging.

Members become positions and days become offsets from the season's first day, so that a sum over
(holder, window) is one pass over a plain array. A take is ready when its day lies in the season
and has come.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import date

import numpy as np
from numpy.typing import NDArray

from governance import facts, periods
from governance.compliance import reach

Mask = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Holders:
    """The members under judgement, in order of number, and their households.

    ``households`` are the distinct household numbers; ``household_of`` is the position in them of
    each member's own.
    """

    members: tuple[facts.Member, ...]
    numbers: facts.Column
    households: facts.Column
    household_of: facts.Column

    def positions(self, numbers: facts.Column) -> facts.Column:
        """Return the position of each member number; -1 for a member not under judgement."""
        largest = max(self.numbers.max(initial=0), numbers.max(initial=0))
        # Numbers are given out one by one and never reused, so a table over all of them is small.
        table = np.full(int(largest) + 1, -1, dtype=np.int64)
        table[self.numbers] = np.arange(len(self.numbers))
        return table[numbers]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Takes:
    """The takes of one resource that are ready: the table, and three columns beside it.

    ``cell`` numbers the (member, day) pairs. ``bound`` maps each class that a clause names to the
    rows whose member was in it on the day of the take; None stands for everybody.
    """

    table: facts.Withdrawals
    position: facts.Column
    offset: facts.Column
    cell: facts.Column
    bound: Mapping[str | None, Mask]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Ground:
    """What every clause is judged on. ``classes`` are tables of (member, day of the season)."""

    season: periods.DateRange
    as_of: date
    holders: Holders
    takes: tuple[Takes, ...]
    classes: Mapping[str | None, Mask]
    facts: facts.SeasonFacts

    def takes_of(self, resource: str) -> tuple[Takes, ...]:
        """Return the takes of a resource: one table, or none."""
        return tuple(each for each in self.takes if each.table.resource == resource)

    def offset_of(self, day: date) -> int:
        """Return how many days after the season's first a day lies."""
        return (day - self.season.first).days

    def days_in(self, *ranges: periods.DateRange) -> Mask:
        """Return which days of the season lie in every one of the ranges."""
        kept = np.ones(self.season.length_days, dtype=np.bool_)
        for each in ranges:
            kept[: max(0, self.offset_of(each.first))] = False
            kept[max(0, self.offset_of(each.until)) :] = False
        return kept

    def member_days(self, held: Iterable[tuple[int, periods.DateRange]]) -> Mask:
        """Return the table of (member, day) that ranges by member position cover."""
        return _member_days(held=held, members=len(self.holders.members), season=self.season)


def lay(
    *,
    season_facts: facts.SeasonFacts,
    as_of: date,
    members: frozenset[int] | None,
    classes: Iterable[str | None],
) -> Ground:
    """Return a season's facts made ready, for all members or for these and their households.

    :param classes: the classes of member that clauses name.
    """
    holders = _holders(roster=season_facts.roster, members=members)
    tables = {each: _class_table(each, holders, season_facts.season) for each in classes}
    last = min(as_of, season_facts.season.last)
    takes = tuple(
        _takes(
            table=table,
            holders=holders,
            season=season_facts.season,
            last=last,
            classes=tables,
            whole=members is None,
        )
        for table in season_facts.withdrawals
    )
    assert len({table.resource for table in season_facts.withdrawals}) == len(takes), (
        "the takes of a resource stand in one table"
    )
    return Ground(
        season=season_facts.season,
        as_of=as_of,
        holders=holders,
        takes=takes,
        classes=tables,
        facts=season_facts,
    )


def _holders(*, roster: facts.Roster, members: frozenset[int] | None) -> Holders:
    if members is None:
        kept = roster.members
    else:
        whole = reach.touched(roster=roster, members=members)
        kept = tuple(each for each in roster.members if each.number in whole)
    households, household_of = np.unique(
        np.array([each.household for each in kept], dtype=np.int64), return_inverse=True
    )
    return Holders(
        members=kept,
        numbers=facts.column([each.number for each in kept]),
        households=facts.column(households),
        household_of=facts.column(household_of),
    )


def _class_table(name: str | None, holders: Holders, season: periods.DateRange) -> Mask:
    if name is None:
        return np.ones((len(holders.members), season.length_days), dtype=np.bool_)
    held = (
        (position, each.during)
        for position, member in enumerate(holders.members)
        for each in member.classes
        if each.value == name
    )
    return _member_days(held=held, members=len(holders.members), season=season)


def _member_days(
    *, held: Iterable[tuple[int, periods.DateRange]], members: int, season: periods.DateRange
) -> Mask:
    table = np.zeros((members, season.length_days), dtype=np.bool_)
    first = season.first.toordinal()
    for position, during in held:
        begins, ends = during.first.toordinal() - first, during.until.toordinal() - first
        table[position, max(0, begins) : max(0, ends)] = True
    return table


def _takes(
    *,
    table: facts.Withdrawals,
    holders: Holders,
    season: periods.DateRange,
    last: date,
    classes: Mapping[str | None, Mask],
    whole: bool,
) -> Takes:
    assert not len(table) or table.zone.min() >= 0, "a zone is an index"
    assert not len(table) or table.zone.max() < len(table.zones), "a zone is an index into zones"
    position = holders.positions(table.member)
    assert not whole or not len(table) or position.min() >= 0, "every take has a known member"
    first = periods.day_number(season.first)
    offset = table.day - first
    ready = (position >= 0) & (offset >= 0) & (table.day <= periods.day_number(last))
    if not ready.all():
        table, position, offset = table.where(ready), position[ready], offset[ready]
    cell = position * season.length_days + offset
    return Takes(
        table=table,
        position=position,
        offset=offset,
        cell=cell,
        bound={name: each.ravel()[cell] for name, each in classes.items()},
    )
