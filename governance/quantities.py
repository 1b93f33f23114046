"""Whole base units, UCUM codes, exact fractions, and the one rounding function."""

import enum
import functools
import math
import re
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from typing import ClassVar

from governance.errors import StintbookError


class UnknownUnit(StintbookError):
    """A unit code is not in the table."""

    code: ClassVar[str] = "quantities.unknown_unit"
    message: ClassVar[str] = "Found the unit {found!r}; accepted are {accepted}."


class UnitMismatch(StintbookError):
    """Two units measure different things."""

    code: ClassVar[str] = "quantities.unit_mismatch"
    message: ClassVar[str] = "Found {found!r} where a unit that converts to {expected!r} is needed."


class UnreadableQuantity(StintbookError):
    """A text is not a quantity of the expected shape."""

    code: ClassVar[str] = "quantities.unreadable"
    message: ClassVar[str] = "Found {found!r}; accepted is {accepted}."


class UnusableNumber(StintbookError):
    """A number is not finite, or longer than any measure is."""

    code: ClassVar[str] = "quantities.unusable_number"
    message: ClassVar[str] = (
        "Found the number {found}; accepted are at most {digits} digits before the point and"
        " {places} after it."
    )


# How long a number as given may be, before and after the point.
NUMBER_DIGITS, NUMBER_PLACES = 12, 12


def exact(given: Decimal) -> Fraction:
    """Return a number as people give it, exactly.

    :raises UnusableNumber: if it is not finite, or longer than any measure is.
    """
    exponent = given.as_tuple().exponent
    # Looked at before a fraction is made of it: 1E999999 is a short text and a very long number.
    if (
        not isinstance(exponent, int)
        or exponent < -NUMBER_PLACES
        or given.adjusted() >= NUMBER_DIGITS
    ):
        raise UnusableNumber(found=f"{given:.6g}", digits=NUMBER_DIGITS, places=NUMBER_PLACES)
    return Fraction(given)


class Rounding(enum.StrEnum):
    """How a fraction becomes a whole number of base units."""

    HALF_UP = "half_up"
    DOWN = "down"
    UP = "up"


def rounded(value: Fraction | float, how: Rounding) -> int:
    """Return the whole number that a value rounds to; half_up moves a half away from zero.

    :raises ValueError: if a float is not finite.
    """
    exact = Fraction(value)
    match how:
        case Rounding.DOWN:
            return math.floor(exact)
        case Rounding.UP:
            return math.ceil(exact)
        case Rounding.HALF_UP:
            whole = math.floor(abs(exact) + Fraction(1, 2))
            return whole if exact >= 0 else -whole


@dataclass(frozen=True, slots=True, kw_only=True)
class Unit:
    """One UCUM code: what it measures, and its size in the smallest unit of that measure."""

    code: str
    measures: str
    size: Fraction


def _table() -> Mapping[str, Unit]:
    rows = (
        ("g", "mass", Fraction(1)),
        ("kg", "mass", Fraction(1_000)),
        ("t", "mass", Fraction(1_000_000)),
        ("mL", "volume", Fraction(1)),
        ("L", "volume", Fraction(1_000)),
        ("m3", "volume", Fraction(1_000_000)),
        ("min", "time", Fraction(1)),
        ("h", "time", Fraction(60)),
        ("d", "time", Fraction(1_440)),
        ("1", "count", Fraction(1)),
    )
    return {code: Unit(code=code, measures=measures, size=size) for code, measures, size in rows}


# Codes and sizes: UCUM, https://ucum.org. Only what a kept resource or duty is measured in.
UNITS: Mapping[str, Unit] = _table()

# Decimal places of money by ISO 4217 (from memory; every listed code was in force in 2024).
CURRENCY_PLACES: Mapping[str, int] = {
    **dict.fromkeys(("CLP", "ISK", "JPY", "KRW", "PYG", "RWF", "UGX", "VND", "XAF", "XOF"), 0),
    **dict.fromkeys(
        (
            *("AUD", "BDT", "BRL", "CAD", "CHF", "COP", "DKK", "EUR", "GBP", "GHS", "IDR", "INR"),
            *("KES", "LKR", "MAD", "MXN", "NOK", "NPR", "NZD", "PEN", "PHP", "PKR", "PLN", "SEK"),
            *("THB", "TRY", "TZS", "USD", "ZAR"),
        ),
        2,
    ),
    **dict.fromkeys(("BHD", "JOD", "KWD", "OMR", "TND"), 3),
}


def unit(code: str) -> Unit:
    """Return the unit of a code.

    :raises UnknownUnit: if the table does not hold it.
    """
    try:
        return UNITS[code]
    except KeyError:
        raise UnknownUnit(found=code, accepted=", ".join(UNITS)) from None


def currency_places(code: str) -> int:
    """Return how many decimal places a currency has.

    :raises UnknownUnit: if the table does not hold it.
    """
    try:
        return CURRENCY_PLACES[code]
    except KeyError:
        raise UnknownUnit(found=code, accepted=", ".join(sorted(CURRENCY_PLACES))) from None


def converted(value: Fraction, *, from_unit: str, to_unit: str) -> Fraction:
    """Return a value in another unit, exactly.

    :raises UnknownUnit: if either code is not in the table.
    :raises UnitMismatch: if the units measure different things.
    """
    source, target = unit(from_unit), unit(to_unit)
    if source.measures != target.measures:
        raise UnitMismatch(found=from_unit, expected=to_unit)
    return value * source.size / target.size


_NUMBER = r"(?P<number>\d{1,12}(?:\.\d{1,6})?)"


@dataclass(frozen=True, slots=True, kw_only=True)
class Amount:
    """A quantity as written: an exact number and a UCUM code."""

    number: Fraction
    unit: str

    @classmethod
    def parse(cls, text: str) -> "Amount":
        """Read a text such as ``40 kg``.

        :raises UnreadableQuantity: if the text has another shape.
        :raises UnknownUnit: if the unit is not in the table.
        """
        found = re.fullmatch(_NUMBER + r"\s+(?P<unit>\S+)", text.strip(), re.ASCII)
        if found is None:
            raise UnreadableQuantity(found=text, accepted="a number and a unit, such as '40 kg'")
        return cls(number=Fraction(found["number"]), unit=unit(found["unit"]).code)

    def in_base(self, base: str) -> Fraction:
        """Return the number in another unit, exactly.

        :raises UnitMismatch: if that unit measures something else.
        """
        return converted(self.number, from_unit=self.unit, to_unit=base)


@dataclass(frozen=True, slots=True, kw_only=True)
class Money:
    """A sum as written: an exact number and an ISO 4217 code."""

    number: Fraction
    currency: str

    @classmethod
    def parse(cls, text: str) -> "Money":
        """Read a text such as ``200 EUR``.

        :raises UnreadableQuantity: if the text has another shape.
        :raises UnknownUnit: if the currency is not in the table.
        """
        found = re.fullmatch(_NUMBER + r"\s+(?P<currency>[A-Z]{3})", text.strip(), re.ASCII)
        if found is None:
            raise UnreadableQuantity(found=text, accepted="a sum of money, such as '200 EUR'")
        currency_places(found["currency"])
        return cls(number=Fraction(found["number"]), currency=found["currency"])

    @property
    def minor(self) -> Fraction:
        """Return the sum in the smallest coin of its currency, unrounded."""
        return self.number * Fraction(10) ** currency_places(self.currency)


@dataclass(frozen=True, slots=True, kw_only=True)
class Price:
    """A sum of money for each unit of something, as written: ``3 EUR/kg``."""

    money: Money
    per: str

    @classmethod
    def parse(cls, text: str) -> "Price":
        """Read a text such as ``3 EUR/kg``.

        :raises UnreadableQuantity: if the text has another shape.
        :raises UnknownUnit: if the currency or the unit is not in the table.
        """
        sum_text, slash, per = text.strip().partition("/")
        if not slash:
            raise UnreadableQuantity(found=text, accepted="a price, such as '3 EUR/kg'")
        return cls(money=Money.parse(sum_text), per=unit(per.strip()).code)

    def of(self, amount: Fraction | int, *, base: str) -> Fraction:
        """Return the price of an amount of base units, in the smallest coin, unrounded.

        :raises UnitMismatch: if the base unit measures something else.
        """
        return self.money.minor * converted(Fraction(amount), from_unit=base, to_unit=self.per)


def percent(text: str) -> Fraction:
    """Read a text such as ``5 %`` as an exact fraction.

    :raises UnreadableQuantity: if the text has another shape.
    """
    found = re.fullmatch(_NUMBER + r"\s*%", text.strip(), re.ASCII)
    if found is None:
        raise UnreadableQuantity(found=text, accepted="a percentage, such as '5 %'")
    return Fraction(found["number"]) / 100


def decimal_text(value: Fraction) -> str:
    """Write a fraction as a decimal, to at most six places, without trailing zeros."""
    return _millionths_text(rounded(value * 1_000_000, Rounding.HALF_UP))


def amount_text(amount: int, *, base: str, unit_code: str) -> str:
    """Write an amount of base units in a unit for reading: 43000 g in kg is ``43 kg``."""
    # In whole numbers: a judgement writes many thousands of these.
    over, under = _millionths_in(base, unit_code)
    millionths = (2 * abs(amount) * over + under) // (2 * under)
    return f"{_millionths_text(millionths if amount >= 0 else -millionths)} {unit_code}"


@functools.cache
def _millionths_in(base: str, unit_code: str) -> tuple[int, int]:
    """Return how many millionths of a unit one base unit is, as a ratio of whole numbers."""
    return converted(Fraction(1_000_000), from_unit=base, to_unit=unit_code).as_integer_ratio()


def _millionths_text(millionths: int) -> str:
    whole, rest = divmod(abs(millionths), 1_000_000)
    sign = "-" if millionths < 0 else ""
    if not rest:
        return f"{sign}{whole:,}"
    return f"{sign}{whole:,}.{rest:06d}".rstrip("0")


def money_text(minor: int, *, currency: str) -> str:
    """Write a sum of the smallest coin for reading: 1250 in EUR is ``12.50 EUR``."""
    places = currency_places(currency)
    sign, whole = ("-", -minor) if minor < 0 else ("", minor)
    if places == 0:
        return f"{sign}{whole:,} {currency}"
    major, coins = divmod(whole, 10**places)
    return f"{sign}{major:,}.{coins:0{places}d} {currency}"
