"""Rows of the commons turned into what the rules read."""

from datetime import date
from fractions import Fraction
from typing import Any

from governance.facts import Dated, Member, Order
from governance.periods import DateRange
from ledger.commons import columns, models

SPRING = DateRange(first=date(2026, 3, 1), until=date(2026, 6, 1))
SUMMER = DateRange(first=date(2026, 6, 1), until=date(2026, 9, 1))


def _held(during: DateRange, entry: int) -> dict[str, Any]:
    return {"first_day": during.first, "until_day": during.until, "entry_number": entry}


def test_a_roster_stands_in_order_of_number() -> None:
    roster = columns.roster(
        members=[
            models.Member(number=9, household=2, entry_number=4),
            models.Member(number=2, household=2, entry_number=5),
        ],
        classes=[
            models.MemberClass(member=9, value="licensed", **_held(SPRING, 4)),
            models.MemberClass(member=9, value="retired", **_held(SUMMER, 7)),
        ],
        shares=[
            models.Share(
                member=9, resource="clams", numerator=3, denominator=2, **_held(SPRING, 4)
            ),
            models.Share(
                member=9, resource="clams", numerator=1, denominator=1, **_held(SUMMER, 7)
            ),
            models.Share(
                member=2, resource="mullet", numerator=4, denominator=1, **_held(SPRING, 5)
            ),
        ],
        suspensions=[models.Suspension(member=2, clause="ladder.x", **_held(SUMMER, 8))],
    )
    assert roster.members == (
        Member(
            number=2,
            household=2,
            classes=(),
            shares={"mullet": (Dated(value=Fraction(4), during=SPRING, entry=5),)},
            suspended=(Dated(value="ladder.x", during=SUMMER, entry=8),),
        ),
        Member(
            number=9,
            household=2,
            classes=(
                Dated(value="licensed", during=SPRING, entry=4),
                Dated(value="retired", during=SUMMER, entry=7),
            ),
            shares={
                "clams": (
                    Dated(value=Fraction(3, 2), during=SPRING, entry=4),
                    Dated(value=Fraction(1), during=SUMMER, entry=7),
                )
            },
            suspended=(),
        ),
    )


def test_orders_stand_in_order_of_entry() -> None:
    rows = [
        models.OutsideOrder(authority="A", resource="clams", zones=[zone], **_held(SUMMER, entry))
        for zone, entry in (("pier_sand", 12), ("mill_reach", 11))
    ]
    assert columns.orders(rows) == tuple(
        Order(entry=entry, authority="A", resource="clams", zones=(zone,), during=SUMMER)
        for zone, entry in (("mill_reach", 11), ("pier_sand", 12))
    )
