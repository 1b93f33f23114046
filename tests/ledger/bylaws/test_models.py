"""The table of editions: every constraint refuses its row, and rows are sealed."""

from datetime import date

import pytest

from ledger.bylaws import models
from ledger.foundation.hands import Hand
from tests.ledger import builders, checks

BROKEN = {
    "edition_number_once": {"number": 1, "in_force_from": date(2026, 4, 1)},
    "edition_in_force_once": {"number": 2, "in_force_from": date(2026, 3, 1)},
}


def test_every_constraint_is_tried() -> None:
    assert set(BROKEN) == checks.constraints_of("bylaws")


@pytest.mark.django_db
@pytest.mark.parametrize("name", BROKEN)
def test_the_database_refuses(name: str, hand: Hand) -> None:
    commons_id = builders.governed(hand=hand)
    with checks.violates(name):
        models.Edition.objects.create(
            commons_id=commons_id, text="", digest="", entry_number=1, **BROKEN[name]
        )


@pytest.mark.django_db
@pytest.mark.parametrize("model", checks.sealed_of("bylaws"))
def test_editions_are_sealed(model: type[models.Edition], hand: Hand) -> None:
    builders.governed(hand=hand)
    checks.assert_sealed(model)
