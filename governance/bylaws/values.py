"""Reads one written value: each function returns what a text stands for, or refuses it.

A refusal says what is accepted and, for a name, the nearest one that is known. The functions take
the value by position, as pydantic's validators give it.
"""

import datetime
import enum
import functools
import re
import zoneinfo
from collections.abc import Callable, Collection
from fractions import Fraction
from typing import NoReturn, TypeVar

from pydantic import ValidationInfo

from governance import quantities
from governance.bylaws import clauses, context, spelling, tree, words
from governance.errors import StintbookError

Read = TypeVar("Read")
Named = TypeVar("Named", bound=enum.StrEnum)

_YEARS = range(1900, 2200)
_LONGEST_LINE = 200
_LONGEST_TEXT = 4_000


def _refuse(accepted: str, *, near: str | None = None) -> NoReturn:
    raise context.refusal(accepted=accepted, near=near)


def _written(value: object, accepted: str) -> str:
    if not isinstance(value, tree.Scalar) or value.null:
        _refuse(accepted)
    return str(value).strip()


def _quantity(parse: Callable[[str], Read], value: object, accepted: str) -> Read:
    """Read a text by a parser of the kernel, whose error says what it accepts."""
    text = _written(value, accepted)
    try:
        return parse(text)
    except quantities.UnknownUnit as error:
        known = str(error.facts["accepted"]).split(", ")
        near = spelling.nearest(str(error.facts["found"]), known)
        raise context.refusal(accepted=f"one of {spelling.choice(known)}", near=near) from None
    except StintbookError:
        raise context.refusal(accepted=accepted) from None


def line(value: object) -> str:
    """Read one line of text."""
    text = _written(value, "one line of text")
    if not text or "\n" in text or len(text) > _LONGEST_LINE:
        _refuse(f"one line of text, at most {_LONGEST_LINE} characters")
    return text


def paragraph(value: object) -> str:
    """Read a text of any number of lines."""
    text = _written(value, "a text")
    if not text or len(text) > _LONGEST_TEXT:
        _refuse(f"a text, at most {_LONGEST_TEXT:,} characters")
    return text


def name(value: object) -> str:
    """Read a code name, such as ``long_spit``."""
    accepted = "a name in small letters, digits and underscores, such as 'long_spit'"
    text = _written(value, accepted)
    if not re.fullmatch(r"[a-z][a-z0-9_]{0,39}", text, re.ASCII):
        _refuse(accepted)
    return text


def clause_id(value: object) -> str:
    """Read the number of a clause; it is a text, so that 3.10 is not 3.1."""
    accepted = "a clause number, such as '3.2'"
    text = _written(value, accepted)
    if not re.fullmatch(r"[0-9]{1,3}(\.[0-9]{1,3}){0,3}[a-z]?", text, re.ASCII):
        _refuse(accepted)
    return text


def whole(value: object) -> int:
    """Read a whole number, in tens whatever it begins with."""
    text = _written(value, "a whole number")
    if not re.fullmatch(r"\d{1,9}", text, re.ASCII):
        _refuse("a whole number")
    return int(text)


def positive(value: object) -> int:
    """Read a whole number from 1."""
    number = whole(value)
    if number == 0:
        _refuse("a whole number from 1")
    return number


def decimal(value: object) -> Fraction:
    """Read a number above 0, exactly."""
    accepted = "a number above 0, such as '1' or '1.5'"
    text = _written(value, accepted)
    if not re.fullmatch(r"\d{1,6}(\.\d{1,6})?", text, re.ASCII) or not Fraction(text):
        _refuse(accepted)
    return Fraction(text)


def percent(value: object) -> Fraction:
    """Read a percentage as a part of 1."""
    part = _quantity(quantities.percent, value, "a percentage, such as '5 %'")
    if part > 1:
        _refuse("a percentage from 0 to 100")
    return part


def amount(value: object) -> quantities.Amount:
    """Read a number and a unit."""
    amount = _quantity(quantities.Amount.parse, value, "a number and a unit, such as '40 kg'")
    if not amount.number:
        _refuse("an amount above 0")
    return amount


def ceiling(value: object) -> quantities.Amount | None:
    """Read an amount, or None for the word that means a holder's allotment."""
    accepted = "an amount, such as '40 kg', or 'allotment'"
    text = _written(value, accepted)
    if text == "allotment":
        return None
    if not text[:1].isdigit():
        _refuse(accepted, near=spelling.nearest(text, ("allotment",)))
    return amount(value)


def whole_time(unit: str, accepted: str) -> Callable[[object], int]:
    """Return a reader of times that come to a whole number of a unit."""

    def read(value: object) -> int:
        amount = _quantity(quantities.Amount.parse, value, accepted)
        if quantities.unit(amount.unit).measures != "time":
            _refuse(accepted)
        number = amount.in_base(unit)
        if number.denominator != 1 or not number:
            _refuse(accepted)
        return int(number)

    return read


def working_days(value: object) -> Fraction:
    """Read a number of working days, which no clock measures."""
    accepted = "a number of days, such as '2 d'"
    amount = _quantity(quantities.Amount.parse, value, accepted)
    if amount.unit != "d" or not amount.number:
        _refuse(accepted)
    return amount.number


def money(value: object, info: ValidationInfo) -> quantities.Money:
    """Read a sum of the book's money that coins can pay."""
    money = _quantity(quantities.Money.parse, value, "a sum of money, such as '200 EUR'")
    _check_currency(money, info)
    if money.minor.denominator != 1 or not money.minor:
        _refuse("a sum above 0 that coins can pay")
    return money


def price(value: object, info: ValidationInfo) -> quantities.Price:
    """Read a price in the book's money."""
    price = _quantity(quantities.Price.parse, value, "a price, such as '3 EUR/kg'")
    _check_currency(price.money, info)
    if not price.money.number:
        _refuse("a price above 0")
    return price


def _check_currency(money: quantities.Money, info: ValidationInfo) -> None:
    expected = context.reading_of(info).money
    if expected is not None and money.currency != expected:
        _refuse(f"the book's money, {expected}")


def day(value: object) -> datetime.date:
    """Read a date."""
    accepted = f"a date from {_YEARS[0]} to {_YEARS[-1]}, such as '2026-03-01'"
    text = _written(value, accepted)
    if not re.fullmatch(r"\d{4}-\d{2}-\d{2}", text, re.ASCII):
        _refuse(accepted)
    try:
        day = datetime.date.fromisoformat(text)
    except ValueError:
        raise context.refusal(accepted=accepted) from None
    if day.year not in _YEARS:
        _refuse(accepted)
    return day


def day_of_year(value: object) -> tuple[int, int]:
    """Read a day that every year has, as (month, day)."""
    accepted = "a day of the year, such as '10 April'"
    found = re.fullmatch(r"(\d{1,2})\s+([A-Za-z]+)", _written(value, accepted), re.ASCII)
    if found is None:
        _refuse(accepted)
    if found[2] not in words.MONTHS:
        _refuse(accepted, near=spelling.nearest(found[2], words.MONTHS))
    month = words.MONTHS.index(found[2]) + 1
    try:
        datetime.date(2023, month, int(found[1]))  # a year without a 29 February
    except ValueError:
        raise context.refusal(accepted=accepted + ", that every year has") from None
    return month, int(found[1])


def reference(*points: str) -> Callable[[object], clauses.Reference]:
    """Return a reader of multiples of these reference points."""
    accepted = f"a multiple of {' or '.join(points)}, such as '0.2 {points[0]}'"

    def read(value: object) -> clauses.Reference:
        text = _written(value, accepted)
        found = re.fullmatch(r"(\d{1,3}(?:\.\d{1,6})?)\s+(\S+)", text, re.ASCII)
        if found is None or not Fraction(found[1]):
            _refuse(accepted)
        if found[2] not in points:
            _refuse(accepted, near=spelling.nearest(found[2], points))
        return clauses.Reference(multiple=Fraction(found[1]), of=found[2])

    return read


def one_of(names: type[Named]) -> Callable[[object], Named]:
    """Return a reader of the values of an enumeration."""
    accepted = f"one of {spelling.choice(names)}"

    def read(value: object) -> Named:
        text = _written(value, accepted)
        if text not in list(names):
            _refuse(accepted, near=spelling.nearest(text, names))
        return names(text)

    return read


def declared(
    what: str, known: Callable[[context.Reading], Collection[str] | None]
) -> Callable[[object, ValidationInfo], str]:
    """Return a reader of names that the same book declares."""

    def read(value: object, info: ValidationInfo) -> str:
        text = _written(value, f"the name of {what}")
        names = known(context.reading_of(info))
        if names is not None and text not in names:
            listed = spelling.choice(sorted(names), none="none, for the book declares none")
            _refuse(f"{what} of this book: {listed}", near=spelling.nearest(text, names))
        return text

    return read


def listed(table: Collection[str], what: str) -> Callable[[object], str]:
    """Return a reader of codes that a table holds."""

    def read(value: object) -> str:
        text = _written(value, what)
        if text not in table:
            _refuse(what, near=spelling.nearest(text, table))
        return text

    return read


def zone(value: object) -> str:
    """Read a time zone that this machine knows."""
    return listed(_zones(), "a time zone, such as 'Europe/Dublin'")(value)


@functools.cache
def _zones() -> frozenset[str]:
    # Listing them walks a folder, and a book is read often.
    return frozenset(zoneinfo.available_timezones())
