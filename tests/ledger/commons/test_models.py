"""The tables of the commons: every constraint refuses its row, and dated rows are sealed."""

from collections.abc import Callable
from datetime import date
from typing import Any

import pytest
from django.db import models as db

from governance.periods import DateRange
from ledger.commons import models, operations
from ledger.foundation.hands import Hand
from tests.ledger import builders, checks

NO_DAY = {"first_day": date(2026, 5, 1), "until_day": date(2026, 5, 1), "entry_number": 1}
A_DAY = {"first_day": date(2026, 5, 1), "until_day": date(2026, 5, 2), "entry_number": 1}


def _member(commons_id: int, **changes: Any) -> db.Model:
    values: dict[str, Any] = {"number": 9, "household": 9, "name": "N", "draw_point": ""}
    return models.Member(commons_id=commons_id, entry_number=1, **(values | changes))


def _zone(commons_id: int) -> db.Model:
    resource = models.Resource.objects.get(commons_id=commons_id, code="clams")
    return models.Zone(commons_id=commons_id, resource=resource, code="outer_bay", name="Again")


def _share(commons_id: int, **changes: Any) -> db.Model:
    values: dict[str, Any] = {"numerator": 1, "denominator": 1, **A_DAY}
    return models.Share(commons_id=commons_id, member=1, resource="clams", **(values | changes))


BROKEN: dict[str, Callable[[int], db.Model]] = {
    "commons_slug_once": lambda _: models.Commons(slug="reed-bank", name="B", zone="Z", money="M"),
    "resource_code_once": lambda commons_id: models.Resource(
        commons_id=commons_id, code="clams", name="Again", unit="kg", base="g"
    ),
    "zone_code_once": _zone,
    "member_number_once": lambda commons_id: _member(commons_id, number=2),
    "member_number_from_one": lambda commons_id: _member(commons_id, number=0),
    "share_is_positive": lambda commons_id: _share(commons_id, numerator=0),
    "share_holds_a_day": lambda commons_id: _share(commons_id, **NO_DAY),
    "memberclass_holds_a_day": lambda commons_id: models.MemberClass(
        commons_id=commons_id, member=1, value="licensed", **NO_DAY
    ),
    "roleheld_holds_a_day": lambda commons_id: models.RoleHeld(
        commons_id=commons_id, member=1, role="board", **NO_DAY
    ),
    "suspension_holds_a_day": lambda commons_id: models.Suspension(
        commons_id=commons_id, member=1, clause="ladder.overdraw", **NO_DAY
    ),
    "outsideorder_holds_a_day": lambda commons_id: models.OutsideOrder(
        commons_id=commons_id, authority="A", resource="clams", zones=[], **NO_DAY
    ),
}


def test_every_constraint_is_tried() -> None:
    assert set(BROKEN) == checks.constraints_of("commons")


@pytest.mark.django_db
@pytest.mark.parametrize("name", BROKEN)
def test_the_database_refuses(name: str, hand: Hand) -> None:
    commons_id = builders.people(hand=hand)
    with checks.violates(name):
        BROKEN[name](commons_id).save()


@pytest.mark.django_db
@pytest.mark.parametrize("denominator", [0, -1])
def test_a_share_has_no_denominator_below_one(denominator: int, hand: Hand) -> None:
    commons_id = builders.people(hand=hand)
    with checks.violates("share_is_positive"):
        _share(commons_id, denominator=denominator).save()


@pytest.mark.django_db
@pytest.mark.parametrize("model", checks.sealed_of("commons"))
def test_dated_rows_are_sealed(model: type[db.Model], hand: Hand) -> None:
    commons_id = builders.people(hand=hand)
    during = DateRange(first=date(2026, 5, 4), until=date(2026, 5, 19))
    operations.suspend(
        commons_id=commons_id, member=1, clause="ladder.x", during=during, reason="", hand=hand
    )
    operations.record_order(
        commons_id=commons_id,
        authority="Shellfish-water authority",
        resource="clams",
        zones=["mill_reach"],
        during=during,
        notice="Closed.",
        hand=hand,
    )
    checks.assert_sealed(model)
