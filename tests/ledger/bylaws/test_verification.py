"""An edition changed behind its adoption is told, with the entry: 10 in the small commons."""

import hashlib

import pytest

from ledger.bylaws import models, verification
from ledger.foundation.hands import Hand
from tests.ledger import builders, falsifying


@pytest.fixture
def governed(db: None, hand: Hand) -> int:
    return builders.governed(hand=hand)


def test_an_honest_edition_is_sound(governed: int) -> None:
    assert verification.problems(commons_id=governed) == ()


def test_another_text(governed: int) -> None:
    """The text changes, and whoever changes it writes the digest of the new text as well."""
    text = models.Edition.objects.get().text
    forged = text.replace("40 kg", "190 kg")
    assert forged != text
    falsifying.falsify("UPDATE bylaws_edition SET text = %s", forged)
    (problem,) = verification.problems(commons_id=governed)
    assert (problem.invariant, problem.number) == ("bylaw editions", 10)
    assert "digest of the text" in problem.what
    digest = hashlib.sha256(forged.encode()).hexdigest()
    falsifying.falsify("UPDATE bylaws_edition SET digest = %s", digest)
    both = verification.problems(commons_id=governed)
    assert [each.number for each in both] == [10, 10]


@pytest.mark.parametrize(
    "sql",
    [
        "UPDATE bylaws_edition SET text = text || ' '",
        "UPDATE bylaws_edition SET number = 2",
        "UPDATE bylaws_edition SET digest = '00'",
        "UPDATE bylaws_edition SET in_force_from = '2026-02-01'",
        "UPDATE bylaws_edition SET entry_number = 9",
        "DELETE FROM bylaws_edition",
    ],
)
def test_a_changed_row(governed: int, sql: str) -> None:
    falsifying.falsify(sql)
    told = falsifying.told(verification.problems(commons_id=governed))
    assert ("bylaw editions", 10) in told


def test_an_edition_that_nobody_adopted(governed: int) -> None:
    falsifying.falsify(
        "INSERT INTO bylaws_edition (commons_id, number, text, digest, in_force_from,"
        " entry_number) SELECT commons_id, 2, text, digest, '2026-05-01', 9 FROM bylaws_edition"
    )
    told = falsifying.told(verification.problems(commons_id=governed))
    assert told == {("bylaw editions", 9)}
