from datetime import date

import numpy as np
import pytest

from governance import facts
from governance.compliance import ground
from governance.periods import DateRange
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Take

WEEK = scenes.days(date(2026, 4, 1), date(2026, 4, 7))


def laid(
    *takes: Take,
    as_of: date = WEEK.until,
    members: frozenset[int] | None = None,
    roster: tuple[facts.Member, ...] = (
        scenes.member(2),
        scenes.member(5),
        scenes.member(9, household=2),
    ),
) -> ground.Ground:
    return ground.lay(
        season_facts=scenes.season(takes, members=roster, window=WEEK),
        as_of=as_of,
        members=members,
        classes={None, "licensed"},
    )


def entries(ready: ground.Ground) -> list[int]:
    return ready.takes_of("clams")[0].table.entry.tolist()


class TestReady:
    def test_takes_of_the_season_up_to_the_day_are_ready(self):
        takes = [Take(entry=n, member=2, day=date(2026, 4, 1 + n)) for n in range(9)]
        before = Take(entry=99, member=2, day=date(2026, 3, 31))
        assert entries(laid(*takes, before)) == [0, 1, 2, 3, 4, 5, 6]
        assert entries(laid(*takes, before, as_of=date(2026, 4, 3))) == [0, 1, 2]
        assert entries(laid(*takes, before, as_of=date(2026, 3, 31))) == []

    def test_members_come_with_their_households(self):
        takes = [Take(entry=n, member=n) for n in (2, 5, 9)]
        assert entries(laid(*takes, members=frozenset({9}))) == [2, 9]
        assert entries(laid(*takes, members=frozenset({5}))) == [5]
        assert entries(laid(*takes, members=frozenset())) == []

    def test_places_are_positions_and_offsets(self):
        ready = laid(Take(entry=1, member=9, day=date(2026, 4, 3)))
        takes = ready.takes_of("clams")[0]
        assert (takes.position.tolist(), takes.offset.tolist(), takes.cell.tolist()) == (
            [2],
            [2],
            [2 * 7 + 2],
        )
        assert ready.holders.households.tolist() == [2, 5]
        assert ready.holders.household_of.tolist() == [0, 1, 0]

    def test_a_take_by_an_unknown_member_is_a_fault_of_the_caller(self):
        for unknown in (1, 7, 10_000):
            with pytest.raises(AssertionError):
                laid(Take(entry=1, member=unknown))

    def test_two_tables_of_one_resource_are_a_fault_of_the_caller(self):
        known = scenes.season((), window=WEEK)
        twice = facts.SeasonFacts(
            season=known.season,
            roster=known.roster,
            withdrawals=known.withdrawals * 2,
            work=known.work,
            money=known.money,
            orders=(),
            allotments={},
        )
        with pytest.raises(AssertionError):
            ground.lay(season_facts=twice, as_of=WEEK.until, members=None, classes={None})

    @pytest.mark.parametrize("zone", [-1, len(scenes.ZONES)])
    def test_a_zone_outside_the_list_is_a_fault_of_the_caller(self, zone):
        known = scenes.season((), window=WEEK)
        one = facts.column([1])
        table = facts.Withdrawals(
            resource="clams",
            base="g",
            zones=scenes.ZONES,
            entry=one,
            member=one,
            day=one,
            instant=one,
            reported=one,
            amount=one,
            zone=facts.column([zone]),
        )
        outside = facts.SeasonFacts(
            season=known.season,
            roster=known.roster,
            withdrawals=(table,),
            work=known.work,
            money=known.money,
            orders=(),
            allotments={},
        )
        with pytest.raises(AssertionError):
            ground.lay(season_facts=outside, as_of=WEEK.until, members=None, classes={None})


class TestDays:
    def test_days_lie_in_every_range(self):
        ready = laid()
        all_of_them = ready.days_in(scenes.ALWAYS)
        some = ready.days_in(
            scenes.days(date(2026, 3, 1), date(2026, 4, 4)),
            scenes.days(date(2026, 4, 2), date(2026, 5, 1)),
        )
        assert all_of_them.tolist() == [True] * 7
        assert some.tolist() == [False, True, True, True, False, False, False]

    def test_a_range_elsewhere_holds_no_day(self):
        ready = laid()
        assert not ready.days_in(scenes.days(date(2026, 3, 1), date(2026, 3, 31))).any()
        assert not ready.days_in(scenes.days(date(2026, 4, 8), date(2026, 4, 9))).any()

    def test_classes_are_dated(self):
        stays = scenes.member(2)
        leaves = scenes.member(
            5, classes={"licensed": DateRange(first=date(2026, 1, 1), until=date(2026, 4, 3))}
        )
        elsewhere = scenes.member(
            9, classes={"licensed": DateRange(first=date(2025, 1, 1), until=date(2025, 4, 3))}
        )
        ready = laid(roster=(stays, leaves, elsewhere))
        assert ready.classes["licensed"].tolist() == [
            [True] * 7,
            [True, True] + [False] * 5,
            [False] * 7,
        ]
        assert np.all(ready.classes[None])
