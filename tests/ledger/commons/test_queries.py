"""What is known of a commons: now, on a day, and as known at an entry."""

from datetime import date, datetime
from fractions import Fraction

import pytest

from governance.facts import Order
from governance.periods import OPEN_END, DateRange
from ledger.commons import operations, queries
from ledger.foundation.hands import Hand
from ledger.journal import models as journal_models
from ledger.journal import operations as journal
from ledger.journal.leaves import Receipt
from tests.ledger import builders, checks

MAY = DateRange(first=date(2026, 5, 4), until=date(2026, 5, 19))


def _order(commons_id: int, hand: Hand, *, zone: str = "mill_reach") -> Receipt:
    return operations.record_order(
        commons_id=commons_id,
        authority="Shellfish-water authority",
        resource="clams",
        zones=[zone],
        during=MAY,
        notice=f"{zone} failed the test.",
        hand=hand,
    )


@pytest.mark.django_db
class TestCommons:
    """A commons is found by id or by name."""

    def test_by_id_and_by_name(self, hand: Hand) -> None:
        commons_id = builders.found(hand=hand)
        expected = queries.CommonsRecord(
            commons_id=commons_id,
            slug="reed-bank",
            name="Reed Bank Commons",
            zone="Europe/Dublin",
            money="EUR",
            is_demo=False,
        )
        assert queries.commons(commons_id=commons_id) == expected
        assert queries.commons_named(slug="reed-bank") == expected

    def test_all_by_name(self, hand: Hand) -> None:
        for slug in ("west", "east"):
            builders.found(hand=hand, slug=slug)
        assert [record.slug for record in queries.every_commons()] == ["east", "west"]

    def test_unknown(self, hand: Hand) -> None:
        with checks.refuses(queries.UnknownCommons, "'reed'", "none yet"):
            queries.commons_named(slug="reed")
        builders.found(hand=hand)
        with checks.refuses(queries.UnknownCommons, "'reed'", "reed-bank"):
            queries.commons_named(slug="reed")
        with checks.refuses(queries.UnknownCommons, "999", "reed-bank"):
            queries.commons(commons_id=999)

    def test_the_day_of_an_instant(self, hand: Hand) -> None:
        kept = queries.commons(commons_id=builders.found(hand=hand))
        # Ireland is an hour ahead of UTC from 29 March 2026.
        assert kept.day_of(datetime.fromisoformat("2026-03-28T23:30:00Z")) == date(2026, 3, 28)
        assert kept.day_of(datetime.fromisoformat("2026-03-29T23:30:00Z")) == date(2026, 3, 30)
        with checks.refuses(queries.InstantWithoutOffset, "2026-03-28T23:30:00", "offset"):
            kept.day_of(datetime.fromisoformat("2026-03-28T23:30:00"))


@pytest.mark.django_db
class TestWhatIsKept:
    """Resources, zones and members by code or number."""

    def test_resources(self, hand: Hand) -> None:
        commons_id = builders.found(hand=hand)
        clams = queries.ResourceRecord(code="clams", name="Clams", unit="kg", base="g")
        assert list(queries.resources(commons_id=commons_id)) == ["clams", "mullet"]
        assert queries.resource(commons_id=commons_id, code="clams") == clams
        with checks.refuses(queries.UnknownResource, "'eels'", "clams, mullet"):
            queries.resource(commons_id=commons_id, code="eels")

    def test_zones_belong_to_a_resource(self, hand: Hand) -> None:
        kept = queries.zones(commons_id=builders.found(hand=hand))
        assert {code: zone.resource for code, zone in kept.items()} == {
            "inner_flats": "mullet",
            "mill_reach": "clams",
            "outer_bay": "mullet",
            "pier_sand": "clams",
        }

    def test_members_and_households(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        assert list(queries.members(commons_id=commons_id)) == [1, 2, 3, 4]
        assert queries.members(commons_id=commons_id)[2] == queries.MemberRecord(
            number=2, name="Member 2", household=1, draw_point="Boat 2"
        )
        assert queries.household_of(commons_id=commons_id, household=1) == {1, 2}
        assert queries.household_of(commons_id=commons_id, household=2) == frozenset()
        assert queries.is_member(commons_id=commons_id, number=4)
        assert not queries.is_member(commons_id=commons_id, number=5)


@pytest.mark.django_db
class TestRoster:
    """The roster as the rules read it, as known at an entry."""

    def test_members_with_households_classes_and_shares(self, hand: Hand) -> None:
        roster = queries.roster(commons_id=builders.people(hand=hand))
        day = date(2026, 4, 1)
        assert [(member.number, member.household) for member in roster.members] == [
            (1, 1),
            (2, 1),
            (3, 3),
            (4, 3),
        ]
        assert [member.share_of("mullet", day) for member in roster.members] == [
            3,
            1,
            Fraction(3, 2),
            0,
        ]
        assert [member.is_in("retired", day) for member in roster.members] == [
            False,
            False,
            False,
            True,
        ]

    def test_class_and_shares_begin_on_the_day_of_admission(self, hand: Hand) -> None:
        commons_id = builders.found(hand=hand)
        operations.admit(
            commons_id=commons_id,
            admissions=[builders.admission(1, mullet=3, admitted_on=date(2026, 4, 10))],
            hand=hand,
        )
        (member,) = queries.roster(commons_id=commons_id).members
        before, after = date(2026, 4, 9), date(2026, 4, 10)
        assert [member.share_of("mullet", day) for day in (before, after)] == [0, 3]
        assert (member.is_in("licensed", before), member.is_in("licensed", after)) == (False, True)

    def test_as_known_at_an_entry(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        # Entry 1 founds the commons; entries 2 to 5 admit members 1 to 4.
        known = [
            [each.number for each in queries.roster(commons_id=commons_id, up_to=up_to).members]
            for up_to in range(7)
        ]
        assert known == [[], [], [1], [1, 2], [1, 2, 3], [1, 2, 3, 4], [1, 2, 3, 4]]

    def test_a_suspension_is_known_from_its_entry_until_it_is_reversed(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        entry = operations.suspend(
            commons_id=commons_id, member=3, clause="ladder.x", during=MAY, reason="", hand=hand
        ).number
        journal.reverse(
            commons_id=commons_id,
            number=entry,
            reason="overturned",
            by=1,
            occurred_at=hand.clock(),
            day=date(2026, 3, 1),
            clock=hand.clock,
            chance=hand.chance,
        )
        suspended = [
            queries.roster(commons_id=commons_id, up_to=up_to).members[2].suspended
            for up_to in (entry - 1, entry, entry + 1, None)
        ]
        assert [len(each) for each in suspended] == [0, 1, 0, 0]
        assert (suspended[1][0].value, suspended[1][0].during) == ("ladder.x", MAY)

    def test_of_one_commons_only(self, hand: Hand) -> None:
        builders.people(hand=hand, slug="other")
        assert queries.roster(commons_id=builders.found(hand=hand)).members == ()


@pytest.mark.django_db
class TestOrders:
    """Outside orders, for the rules and for people."""

    def test_as_known_at_an_entry(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        first = _order(commons_id, hand).number
        second = _order(commons_id, hand, zone="pier_sand").number
        known = [
            queries.orders(commons_id=commons_id, up_to=up_to)
            for up_to in (first - 1, first, second, None)
        ]
        expected = [
            Order(
                entry=entry,
                authority="Shellfish-water authority",
                resource="clams",
                zones=(zone,),
                during=MAY,
            )
            for entry, zone in ((first, "mill_reach"), (second, "pier_sand"))
        ]
        assert known == [(), (expected[0],), tuple(expected), tuple(expected)]

    def test_records_carry_the_notice_until_it_is_erased(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        entry = _order(commons_id, hand).number
        assert queries.order_records(commons_id=commons_id) == (
            queries.OrderRecord(
                entry=entry,
                authority="Shellfish-water authority",
                resource="clams",
                zones=("mill_reach",),
                first=MAY.first,
                until=MAY.until,
                notice="mill_reach failed the test.",
            ),
        )
        journal_models.Text.objects.filter(commons_id=commons_id, name="notice").delete()
        (record,) = queries.order_records(commons_id=commons_id)
        assert record.notice == ""


@pytest.mark.django_db
class TestHoldersOf:
    """Offices are held on days."""

    def test_from_the_first_day_to_before_the_last(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        operations.give_role(commons_id=commons_id, member=4, role="monitor", during=MAY, hand=hand)
        held = [
            queries.holders_of(commons_id=commons_id, role="monitor", day=day)
            for day in (date(2026, 2, 28), date(2026, 5, 3), MAY.first, MAY.last, MAY.until)
        ]
        assert held == [set(), {2}, {2, 4}, {2, 4}, {2}]

    def test_who_is_given_an_office_twice_holds_it_once(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        during = DateRange(first=MAY.first, until=OPEN_END)
        operations.give_role(
            commons_id=commons_id, member=1, role="board", during=during, hand=hand
        )
        assert queries.holders_of(commons_id=commons_id, role="board", day=MAY.last) == {1, 3}
