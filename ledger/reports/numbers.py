"""How figures are written for reading: one way for all renderings."""

from datetime import date, datetime
from decimal import ROUND_HALF_UP, Decimal
from fractions import Fraction
from zoneinfo import ZoneInfo

from governance import quantities

_UNIT_WORDS = {"1": "", "m3": "m³", "1/a": "a year"}
# A number and its unit stay on one line.
_NO_BREAK = "\u00a0"
_HALF_OF_A_TWENTIETH = 0.025
# Nearer to nought or one than this, a tenth of a percent would say a certainty that nobody has.
_LEAST = 0.001


def unit_word(code: str) -> str:
    """Return how a unit's code is written on a page; the plain number has no word."""
    return _UNIT_WORDS.get(code, code)


def reading(amount: int, *, base: str, unit: str) -> Fraction:
    """Return base units in the unit of reading, exactly."""
    return quantities.converted(Fraction(amount), from_unit=base, to_unit=unit)


def amount(value: int, *, base: str, unit: str) -> str:
    """Write base units in the unit of reading, without the unit: 43000 g in kg is ``43``."""
    return quantities.decimal_text(reading(value, base=base, unit=unit))


def amount_with_unit(value: int, *, base: str, unit: str) -> str:
    """Write base units in the unit of reading, with it: 43000 g in kg is ``43 kg``, not broken."""
    return f"{amount(value, base=base, unit=unit)}{_NO_BREAK}{unit_word(unit)}".rstrip()


def whole_amount(value: int, *, base: str, unit: str) -> str:
    """Write an amount for a sentence, rounded to whole units, with the unit; below one, exactly."""
    exact = reading(value, base=base, unit=unit)
    if abs(exact) < 1:
        return amount_with_unit(value, base=base, unit=unit)
    whole = quantities.rounded(exact, quantities.Rounding.HALF_UP)
    return f"{whole:,}{_NO_BREAK}{unit_word(unit)}".rstrip()


def rough_amount(value: int, *, base: str, unit: str) -> str:
    """Write an amount that is only an estimate, to four significant digits, with the unit."""
    number = significant(float(reading(value, base=base, unit=unit)))
    return f"{number}{_NO_BREAK}{unit_word(unit)}".rstrip()


def coins(minor: int, *, currency: str) -> Fraction:
    """Return a sum of the smallest coin in whole currency, exactly."""
    return Fraction(minor, 10 ** quantities.currency_places(currency))


def money(minor: int, *, currency: str) -> str:
    """Write a sum of the smallest coin without the currency: 1250 in EUR is ``12.50``."""
    return quantities.money_text(minor, currency=currency).removesuffix(f" {currency}")


def tenths(value: Fraction | float) -> str:
    """Write a number to one decimal."""
    sign = "-" if value < 0 else ""
    whole, rest = divmod(abs(quantities.rounded(value * 10, quantities.Rounding.HALF_UP)), 10)
    return f"{sign}{whole:,}.{rest}"


def percent(share: Fraction | float) -> str:
    """Write a share to a tenth of a percent: 0.9179 is ``91.8 %``."""
    return f"{tenths(share * 100)}{_NO_BREAK}%"


def chance(probability: float) -> str:
    """Write a chance as people count and as a percentage: 0.146 is ``3 in 20 (14.6 %)``.

    What is counted over runs may be in none or in every one of them.
    """
    if probability in (0, 1):
        words = "in every run" if probability else "in no run"
        return f"{words} ({percent(probability)})".replace(" ", _NO_BREAK)
    return reckoned_chance(probability)


def reckoned_chance(probability: float) -> str:
    """Write a chance that no run was counted for, so that it is never quite nought or one."""
    if probability < _LEAST:
        return f"under {percent(_LEAST)}".replace(" ", _NO_BREAK)
    if probability > 1 - _LEAST:
        return f"over {percent(1 - _LEAST)}".replace(" ", _NO_BREAK)
    if probability < _HALF_OF_A_TWENTIETH:
        words = "under 1 in 40"
    elif probability > 1 - _HALF_OF_A_TWENTIETH:
        words = "over 39 in 40"
    else:
        count = quantities.rounded(probability * 20, quantities.Rounding.HALF_UP)
        words = f"{count} in 20"
    return f"{words} ({percent(probability)})".replace(" ", _NO_BREAK)


def significant(value: float, *, digits: int = 4) -> str:
    """Write an estimate to so many significant digits: 348123.7 is ``348,100``."""
    if value == 0:
        return "0"
    number = Decimal(repr(float(value)))
    last_place = Decimal(1).scaleb(number.adjusted() - digits + 1)
    return f"{number.quantize(last_place, rounding=ROUND_HALF_UP):,f}"


def sentence_case(words: str) -> str:
    """Write words as the beginning of a sentence or title: only the first letter is raised."""
    return words[:1].upper() + words[1:]


def many(count: int, *, one: str, more: str) -> str:
    """Write a count with its noun: ``1 slip``, ``4,512 slips``, ``no slips``."""
    return f"{count:,} {one if count == 1 else more}" if count else f"no {more}"


def was(count: int) -> str:
    """Write a count with its verb: ``1 was``, ``4 were``."""
    return f"{count:,} {'was' if count == 1 else 'were'}"


def day(value: date) -> str:
    """Write a day by ISO 8601."""
    return value.isoformat()


def moment(value: datetime, *, zone: str) -> str:
    """Write an aware moment in a time zone to the minute, with its offset."""
    return value.astimezone(ZoneInfo(zone)).isoformat(sep=" ", timespec="minutes")


def short_digest(hexadecimal: str) -> str:
    """Write the first eight digits of a digest in two groups, as the proof line writes a head."""
    return f"{hexadecimal[:4]} {hexadecimal[4:8]}"
