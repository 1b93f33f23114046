"""Entries of observations turned into what the rules read."""

from datetime import UTC, date, datetime
from fractions import Fraction

import pytest

from governance.facts import Observation
from ledger.fieldwork import columns
from ledger.journal.leaves import Row

NOON = datetime(2026, 1, 10, 12, tzinfo=UTC)


@pytest.mark.parametrize(
    ("error", "expected"), [("", None), ("0.18", Fraction(9, 50)), ("0", Fraction(0))]
)
def test_an_observation(error: str, expected: Fraction | None) -> None:
    facts = {
        "resource": "clams",
        "kind": "survey",
        "zone": "mill_reach",
        "year": 2026,
        "value": "1840.25",
        "unit": "kg",
        "error": error,
    }
    row = Row(7, "observation", None, date(2026, 1, 10), NOON, NOON, facts)
    assert columns.observations([row]) == (
        Observation(
            entry=7,
            resource="clams",
            kind="survey",
            zone="mill_reach",
            year=2026,
            value=Fraction(7361, 4),
            unit="kg",
            error=expected,
        ),
    )
