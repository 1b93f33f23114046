"""Amounts as people write them; the expected values are read off the texts by eye."""

from decimal import Decimal

import pytest

from ledger.web import amounts


@pytest.mark.parametrize(
    ("text", "amount"),
    [
        ("12.5", "12.5"),
        ("12,5", "12.5"),
        (" 7 ", "7"),
        ("0", "0"),
        ("007.50", "7.50"),
        ("١٢٫٥", "12.5"),
        ("१२.५", "12.5"),
        ("１２", "12"),
        ("9223372036854775807", "9223372036854775807"),
    ],
)
def test_an_amount_is_read_as_it_is_written(text: str, amount: str) -> None:
    """Digits of any script, with a point or a comma, say the same number."""
    assert amounts.parse_amount(text) == Decimal(amount)


@pytest.mark.parametrize(
    "text",
    [
        *("", " ", "-1", "+5", "-0", "1e5", "1_000", "0x10", ".5", "5.", "1.000.000", "1,000,5"),
        *("twelve", "²", "NaN", "Infinity", "1 000", "½", "9" * 31, "1\u202e2", "12.5 kg"),
    ],
)
def test_what_is_no_amount_is_refused(text: str) -> None:
    """The refusal says what was found."""
    with pytest.raises(amounts.NotAnAmount) as refused:
        amounts.parse_amount(text)
    assert refused.value.facts["found"] == text[:31]
