"""The tables of seasons: every constraint refuses its row, and rows are sealed."""

from collections.abc import Callable
from datetime import date

import pytest
from django.db import models as db

from ledger.foundation.hands import Hand
from ledger.seasons import models, operations
from tests.ledger import builders, checks

BROKEN: dict[str, Callable[[int], db.Model]] = {
    "season_code_once": lambda commons_id: models.Season(
        commons_id=commons_id,
        code="clams-2026",
        resource="clams",
        first_day=date(2028, 1, 1),
        until_day=date(2028, 2, 1),
        entry_number=1,
    ),
    "season_holds_a_day": lambda commons_id: models.Season(
        commons_id=commons_id,
        code="clams-2028",
        resource="clams",
        first_day=date(2028, 1, 1),
        until_day=date(2028, 1, 1),
        entry_number=1,
    ),
    "allowable_once": lambda commons_id: models.Allowable(
        commons_id=commons_id, season="clams-2026", amount=1, reserve=0, entry_number=1
    ),
    "allowable_not_negative": lambda commons_id: models.Allowable(
        commons_id=commons_id, season="clams-2028", amount=-1, reserve=0, entry_number=1
    ),
    "season_closed_once": lambda commons_id: models.Close(
        commons_id=commons_id, season="mullet-2026", entry_number=1
    ),
}


@pytest.fixture
def commons_id(hand: Hand) -> int:
    """A commons whose season of mullet is closed."""
    opened = builders.opened(hand=hand)
    operations.record_close(commons_id=opened, season="mullet-2026", postings=(), hand=hand)
    return opened


def test_every_constraint_is_tried() -> None:
    assert set(BROKEN) == checks.constraints_of("seasons")


@pytest.mark.django_db
@pytest.mark.parametrize("name", BROKEN)
def test_the_database_refuses(name: str, commons_id: int) -> None:
    with checks.violates(name):
        BROKEN[name](commons_id).save()


@pytest.mark.django_db
@pytest.mark.parametrize("model", checks.sealed_of("seasons"))
def test_rows_are_sealed(model: type[db.Model], commons_id: int) -> None:
    checks.assert_sealed(model)
