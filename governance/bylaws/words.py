"""Figures, units, names and levels in words, as the sentences of a book use them."""

from collections.abc import Sequence
from fractions import Fraction

from governance import quantities
from governance.bylaws import clauses
from governance.periods import Per

_UNITS = {
    "g": ("gram", "grams"),
    "kg": ("kilogram", "kilograms"),
    "t": ("tonne", "tonnes"),
    "mL": ("millilitre", "millilitres"),
    "L": ("litre", "litres"),
    "m3": ("cubic metre", "cubic metres"),
    "min": ("minute", "minutes"),
    "h": ("hour", "hours"),
    "d": ("day", "days"),
    "1": ("piece", "pieces"),
}
MONTHS = (
    *("January", "February", "March", "April", "May", "June", "July"),
    *("August", "September", "October", "November", "December"),
)
_SPANS = {
    Per.DAY: "in a day",
    Per.ISO_WEEK: "in a week",
    Per.MONTH: "in a month",
    Per.SEASON: "in a season",
}
_POINTS = {
    "K": "the unfished stock",
    "Bmsy": "the stock that yields most",
    "Fmsy": "the fraction that yields most",
}


def number(value: Fraction) -> str:
    """Write a bare number: ``1.5``."""
    return quantities.decimal_text(value)


def count(how_many: Fraction | int, unit: str) -> str:
    """Write a number of units: ``1 day``, ``2.5 kilograms``."""
    one, many = _UNITS[unit]
    return f"{number(Fraction(how_many))} {one if how_many == 1 else many}"


def each(unit: str) -> str:
    """Write one unit that a price is for: ``each kilogram``."""
    return f"each {_UNITS[unit][0]}"


def amount(value: quantities.Amount) -> str:
    """Write an amount: ``40 kilograms``."""
    return count(value.number, value.unit)


def money(value: quantities.Money) -> str:
    """Write a sum of money: ``60 EUR``, ``12.50 EUR``."""
    if value.number.denominator == 1 or value.minor.denominator != 1:
        return f"{quantities.decimal_text(value.number)} {value.currency}"
    return quantities.money_text(int(value.minor), currency=value.currency)


def percent(part: Fraction) -> str:
    """Write a part as a percentage: ``5 percent``."""
    return f"{quantities.decimal_text(part * 100)} percent"


def hours(minutes: int) -> str:
    """Write minutes as hours and minutes: ``6 hours and 30 minutes``."""
    whole, rest = divmod(minutes, 60)
    parts = [count(part, unit) for part, unit in ((whole, "h"), (rest, "min")) if part]
    return " and ".join(parts)


def level(reference: clauses.Reference) -> str:
    """Write a multiple of a reference point: ``20 percent of the unfished stock``."""
    return f"{percent(reference.multiple)} of {_POINTS[reference.of]}"


def span(per: Per) -> str:
    """Write a span of time: ``in a day``."""
    return _SPANS[per]


def day_of_year(day: tuple[int, int]) -> str:
    """Write a month and day: ``10 April``."""
    month, number = day
    return f"{number} {MONTHS[month - 1]}"


def name(code: str) -> str:
    """Write a code as words: ``heron channel``."""
    return code.replace("_", " ")


def listed(parts: Sequence[str], *, joined_by: str) -> str:
    """Write parts as a list: ``a, b or c``."""
    if len(parts) < 2:
        return "".join(parts)
    return f"{', '.join(parts[:-1])} {joined_by} {parts[-1]}"
