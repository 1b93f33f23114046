from datetime import date

import pytest

from governance import facts
from governance.bylaws import clauses
from governance.compliance import findings, judge
from governance.periods import OPEN_END, DateRange
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Take


def found(clause: clauses.Clause, known: facts.SeasonFacts) -> tuple[findings.Finding, ...]:
    return judge.judge(editions=scenes.one(clause), facts=known, as_of=known.season.until)


class TestClosedWindow:
    """Mill reach is closed from 10 to 30 April, both included."""

    @pytest.mark.parametrize(
        ("day", "breaches"),
        [
            (date(2026, 4, 9), 0),
            (date(2026, 4, 10), 1),
            (date(2026, 4, 30), 1),
            (date(2026, 5, 1), 0),
        ],
    )
    def test_both_ends_are_closed(self, day, breaches):
        known = scenes.season((Take(entry=1, day=day, zone="mill_reach"),))
        assert len(found(scenes.closed(), known)) == breaches

    def test_the_whole_take_is_breach_and_overuse(self):
        day = date(2026, 4, 12)
        known = scenes.season(
            (
                Take(entry=5, day=day, kg=7, zone="mill_reach"),
                Take(entry=6, day=day, kg=2, zone="mill_reach"),
                Take(entry=7, day=day, kg=9, zone="pier_sand"),
            )
        )
        (one,) = found(scenes.closed(), known)
        assert one.key == findings.Key(
            clause="4.1",
            subject_kind=findings.SubjectKind.MEMBER,
            subject=1,
            resource="clams",
            window=scenes.days(day, day),
        )
        assert (one.total, one.limit, one.breach, one.overuse) == (9_000, 0, 9_000, 9_000)
        assert one.entries == (5, 6)
        assert one.working == (
            "Entries 5, 6: 7 kg + 2 kg = 9 kg on 2026-04-12.",
            "Closed each year from 10 April to 30 April, both days included: mill_reach.",
            "Nothing was allowed: all of it, 9 kg, lies beyond the limit.",
        )

    def test_no_zone_named_means_everywhere(self):
        known = scenes.season((Take(entry=1, day=date(2026, 4, 12), zone="pier_sand"),))
        (one,) = found(scenes.closed(zones=()), known)
        assert one.working[1].endswith(": everywhere.")

    def test_members_and_days_are_found_apart(self):
        takes = [
            Take(entry=1, day=date(2026, 4, 12), zone="mill_reach"),
            Take(entry=2, day=date(2026, 4, 13), zone="mill_reach"),
            Take(entry=3, day=date(2026, 4, 12), zone="mill_reach", member=2),
        ]
        answer = found(scenes.closed(), scenes.season(takes))
        assert [(one.key.subject, one.entries) for one in answer] == [
            (1, (1,)),
            (1, (2,)),
            (2, (3,)),
        ]

    @pytest.mark.parametrize(
        ("day", "breaches"),
        [
            (date(2025, 12, 14), 0),
            (date(2025, 12, 15), 1),
            (date(2025, 12, 31), 1),
            (date(2026, 1, 1), 1),
            (date(2026, 1, 10), 1),
            (date(2026, 1, 11), 0),
        ],
    )
    def test_a_window_may_run_across_the_new_year(self, day, breaches):
        winter = DateRange(first=date(2025, 11, 1), until=date(2026, 3, 1))
        known = scenes.season((Take(entry=1, day=day, zone="mill_reach"),), window=winter)
        assert len(found(scenes.closed(first=(12, 15), last=(1, 10)), known)) == breaches

    def test_a_leap_day_lies_within(self):
        leap = DateRange(first=date(2028, 2, 1), until=date(2028, 4, 1))
        known = scenes.season(
            (Take(entry=1, day=date(2028, 2, 29), zone="mill_reach"),), window=leap
        )
        assert len(found(scenes.closed(first=(2, 28), last=(3, 1)), known)) == 1

    def test_an_entry_of_nothing_is_no_breach(self):
        known = scenes.season((Take(entry=1, day=date(2026, 4, 12), zone="mill_reach", kg=0),))
        assert found(scenes.closed(), known) == ()

    def test_members_outside_the_class_are_out_of_reach(self):
        members = (scenes.member(1, classes={"retired": scenes.ALWAYS}),)
        known = scenes.season(
            (Take(entry=1, day=date(2026, 4, 12), zone="mill_reach"),), members=members
        )
        assert found(scenes.closed(who="licensed"), known) == ()


def order(
    entry: int,
    *,
    first: date = date(2026, 5, 4),
    until: date = date(2026, 5, 19),
    zones: tuple[str, ...] = ("mill_reach", "pier_sand"),
    resource: str = "clams",
) -> facts.Order:
    return facts.Order(
        entry=entry,
        authority="the shellfish-water authority",
        resource=resource,
        zones=zones,
        during=DateRange(first=first, until=until),
    )


class TestOutsideOrder:
    """The authority closes two grounds from 4 May; they reopen on 19 May."""

    @pytest.mark.parametrize(
        ("day", "zone", "breaches"),
        [
            (date(2026, 5, 3), "mill_reach", 0),
            (date(2026, 5, 4), "mill_reach", 1),
            (date(2026, 5, 18), "pier_sand", 1),
            (date(2026, 5, 19), "pier_sand", 0),
            (date(2026, 5, 10), "anvil_sand", 0),
        ],
    )
    def test_an_order_closes_its_zones_on_its_days(self, day, zone, breaches):
        known = scenes.season((Take(entry=1, day=day, zone=zone),), orders=(order(77),))
        assert len(found(scenes.order_clause(), known)) == breaches

    def test_the_working_names_the_order_and_the_authority(self):
        known = scenes.season(
            (Take(entry=1, day=date(2026, 5, 4), zone="mill_reach", kg=3),), orders=(order(77),)
        )
        (one,) = found(scenes.order_clause(), known)
        assert one.working == (
            "Entry 1: 3 kg on 2026-05-04.",
            "Order 77 of the shellfish-water authority closed mill_reach, pier_sand"
            " from 2026-05-04 to 2026-05-18.",
            "Nothing was allowed: all of it, 3 kg, lies beyond the limit.",
        )
        assert (one.breach, one.overuse, one.limit, one.or_else) == (
            3_000,
            3_000,
            0,
            "ladder.closure",
        )

    def test_two_orders_over_one_day_are_one_finding_that_names_both(self):
        known = scenes.season(
            (
                Take(entry=1, day=date(2026, 5, 4), zone="mill_reach"),
                Take(entry=2, day=date(2026, 5, 4), zone="anvil_sand"),
            ),
            orders=(
                order(80, zones=("anvil_sand",), until=OPEN_END),
                order(77),
                order(79, zones=("cockle_row",)),
            ),
        )
        (one,) = found(scenes.order_clause(), known)
        assert one.entries == (1, 2)
        assert [line.split(" of ")[0] for line in one.working[1:-1]] == ["Order 77", "Order 80"]
        assert one.working[2].endswith("closed anvil_sand from 2026-05-04 until further notice.")

    def test_an_order_without_zones_closes_everywhere(self):
        known = scenes.season(
            (Take(entry=1, day=date(2026, 5, 4), zone="anvil_sand"),), orders=(order(77, zones=()),)
        )
        (one,) = found(scenes.order_clause(), known)
        assert "closed everywhere" in one.working[1]

    def test_an_order_on_another_resource_closes_nothing_here(self):
        known = scenes.season(
            (Take(entry=1, day=date(2026, 5, 4), zone="mill_reach"),),
            orders=(order(77, resource="mullet"),),
        )
        assert found(scenes.order_clause(), known) == ()

    def test_the_order_is_part_of_the_inputs(self):
        takes = (Take(entry=1, day=date(2026, 5, 4), zone="mill_reach"),)
        digests = {
            found(scenes.order_clause(), scenes.season(takes, orders=(each,)))[0].inputs
            for each in (order(77), order(78), order(77, until=date(2026, 5, 20)))
        }
        assert len(digests) == 3
