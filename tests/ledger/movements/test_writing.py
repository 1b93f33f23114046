"""A measure as given becomes whole base units, rounded half up, once."""

from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.movements import operations, writing


@pytest.mark.parametrize(
    ("given_", "unit", "base", "amount"),
    [
        ("12.345", "kg", "g", 12_345),
        ("12.3454", "kg", "g", 12_345),
        ("12.3455", "kg", "g", 12_346),
        ("0.0005", "kg", "g", 1),
        ("0.0004999", "kg", "g", 0),
        ("2.5", "g", "g", 3),
        ("3.5", "g", "g", 4),  # half up, and not to the even one
        ("-2.5", "g", "g", -3),
        ("1.5", "t", "g", 1_500_000),
        ("0.25", "h", "min", 15),
        ("999999999999", "kg", "g", 999_999_999_999_000),
        ("1E+3", "kg", "g", 1_000_000),
        ("1E-12", "t", "g", 0),
    ],
)
def test_rounded_half_up(given_: str, unit: str, base: str, amount: int) -> None:
    assert operations.base_amount(given=Decimal(given_), unit=unit, base=base) == amount


@given(milligrams=st.integers(-(10**11), 10**11))
def test_rounding_moves_an_amount_by_half_a_gram_at_most(milligrams: int) -> None:
    kilograms = Decimal(milligrams).scaleb(-6)
    grams = operations.base_amount(given=kilograms, unit="kg", base="g")
    assert abs(1_000 * grams - milligrams) <= 500


def test_nought_moves_nothing() -> None:
    assert writing.moved("a", "b", resource="work", unit="min", amount=0) == ()
