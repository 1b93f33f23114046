from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from governance import quantities
from governance.quantities import Amount, Money, Price, Rounding, UnreadableQuantity


class TestRounded:
    @pytest.mark.parametrize(
        ("value", "half_up", "down", "up"),
        [
            (Fraction(5, 2), 3, 2, 3),
            (Fraction(-5, 2), -3, -3, -2),
            (Fraction(1, 2), 1, 0, 1),
            (Fraction(49, 100), 0, 0, 1),
            (Fraction(7), 7, 7, 7),
            (2.5, 3, 2, 3),
            # The float next below a half is no half.
            (0.49999999999999994, 0, 0, 1),
        ],
    )
    def test_each_way(self, value, half_up, down, up):
        ways = (Rounding.HALF_UP, Rounding.DOWN, Rounding.UP)
        assert tuple(quantities.rounded(value, way) for way in ways) == (half_up, down, up)

    @pytest.mark.parametrize("value", [float("nan"), float("inf")])
    def test_what_is_no_number_is_refused(self, value):
        with pytest.raises((ValueError, OverflowError)):
            quantities.rounded(value, Rounding.DOWN)


class TestExact:
    def test_a_decimal_becomes_its_fraction(self):
        assert quantities.exact(Decimal("0.1")) == Fraction(1, 10)
        assert quantities.exact(Decimal("-12.50")) == Fraction(-25, 2)

    @pytest.mark.parametrize(
        "given",
        ["999999999999", "0.000000000001", "0"],
    )
    def test_twelve_places_on_either_side_are_accepted(self, given):
        assert quantities.exact(Decimal(given)) == Fraction(given)

    @pytest.mark.parametrize(
        "given", ["1000000000000", "0.0000000000001", "1E999999", "-1E999999", "NaN", "Infinity"]
    )
    def test_no_measure_is_longer(self, given):
        with pytest.raises(quantities.UnusableNumber, match="at most 12 digits"):
            quantities.exact(Decimal(given))


class TestUnits:
    @pytest.mark.parametrize(
        ("number", "source", "target", "expected"),
        [
            (Fraction(40), "kg", "g", Fraction(40_000)),
            (Fraction(1), "g", "t", Fraction(1, 1_000_000)),
            (Fraction(1), "m3", "L", Fraction(1_000)),
            (Fraction(2), "d", "min", Fraction(2_880)),
            (Fraction(90), "min", "h", Fraction(3, 2)),
        ],
    )
    def test_conversion_is_exact(self, number, source, target, expected):
        assert quantities.converted(number, from_unit=source, to_unit=target) == expected

    def test_another_measure_is_refused(self):
        with pytest.raises(quantities.UnitMismatch, match="'kg' where a unit that converts to 'L'"):
            quantities.converted(Fraction(1), from_unit="kg", to_unit="L")

    def test_an_unknown_code_is_answered_with_the_known_ones(self):
        with pytest.raises(quantities.UnknownUnit, match=r"'lb'; accepted are g, kg, t"):
            quantities.unit("lb")
        with pytest.raises(quantities.UnknownUnit, match="'EURO'"):
            quantities.currency_places("EURO")


class TestParsing:
    def test_an_amount(self):
        assert Amount.parse(" 40.5  kg ") == Amount(number=Fraction(81, 2), unit="kg")
        assert Amount.parse("40 kg").in_base("g") == 40_000

    @pytest.mark.parametrize(
        "text",
        ["40kg", "40", "kg", "-4 kg", "4e3 kg", "1,000 kg", "٤ kg", "4 kg extra", "0.1234567 kg"],
    )
    def test_what_is_no_amount(self, text):
        with pytest.raises(UnreadableQuantity):
            Amount.parse(text)

    @pytest.mark.parametrize(
        ("text", "minor"), [("12.5 EUR", 1_250), ("3 JPY", 3), ("1.234 KWD", 1_234)]
    )
    def test_money_in_its_smallest_coin(self, text, minor):
        assert Money.parse(text).minor == minor

    @pytest.mark.parametrize("text", ["12 eur", "EUR 12", "12", "-1 EUR"])
    def test_what_is_no_money(self, text):
        with pytest.raises(UnreadableQuantity):
            Money.parse(text)

    def test_a_price_of_an_amount_in_base_units(self):
        price = Price.parse("3 EUR/kg")
        assert price.of(1_500, base="g") == 450
        assert price.of(1, base="g") == Fraction(3, 10)
        with pytest.raises(quantities.UnitMismatch):
            price.of(1, base="min")
        with pytest.raises(UnreadableQuantity):
            Price.parse("3 EUR")

    def test_a_percentage(self):
        assert quantities.percent("5 %") == quantities.percent("5%") == Fraction(1, 20)
        assert quantities.percent("33.3333 %") == Fraction(333_333, 1_000_000)
        with pytest.raises(UnreadableQuantity):
            quantities.percent("5")


class TestTexts:
    @pytest.mark.parametrize(
        ("value", "text"),
        [
            (Fraction(1_234_567), "1,234,567"),
            (Fraction(1, 3), "0.333333"),
            (Fraction(2, 3), "0.666667"),
            (Fraction(-5, 2), "-2.5"),
            (Fraction(1, 10_000_000), "0"),
            (Fraction(-1, 10_000_000), "0"),
        ],
    )
    def test_a_decimal(self, value, text):
        assert quantities.decimal_text(value) == text

    @pytest.mark.parametrize(
        ("amount", "text"), [(43_000, "43 kg"), (-1, "-0.001 kg"), (1_500_250, "1,500.25 kg")]
    )
    def test_an_amount(self, amount, text):
        assert quantities.amount_text(amount, base="g", unit_code="kg") == text

    @pytest.mark.parametrize(
        ("minor", "currency", "text"),
        [
            (1_250, "EUR", "12.50 EUR"),
            (-5, "EUR", "-0.05 EUR"),
            (1_234_567, "JPY", "1,234,567 JPY"),
            (1_001, "KWD", "1.001 KWD"),
        ],
    )
    def test_money(self, minor, currency, text):
        assert quantities.money_text(minor, currency=currency) == text

    @given(minor=st.integers(-(10**12), 10**12))
    def test_money_keeps_every_cent(self, minor):
        text = quantities.money_text(minor, currency="EUR").removesuffix(" EUR").replace(",", "")
        assert Fraction(text) * 100 == minor
