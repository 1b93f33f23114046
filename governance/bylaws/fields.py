"""What a single value in a book may be: each field type reads the text as written, or refuses it.

A field refuses with what it accepts and, for a name, the nearest one that it knows. Names are
checked against what the same book declares; where that could not be read, any name passes, so that
one mistake is not reported twice.
"""

import datetime
import enum
import re
import zoneinfo
from collections.abc import Callable, Collection, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Annotated, NoReturn, TypeVar

from pydantic import PlainValidator, ValidationInfo
from pydantic_core import PydanticCustomError

from governance import periods, quantities
from governance.bylaws import clauses, tree
from governance.bylaws.problems import Problems, choice, nearest
from governance.errors import StintbookError

Read = TypeVar("Read")
Named = TypeVar("Named", bound=enum.StrEnum)

_MONTHS = (
    *("January", "February", "March", "April", "May", "June", "July"),
    *("August", "September", "October", "November", "December"),
)
_YEARS = range(1900, 2200)
_LONGEST_LINE = 200
_LONGEST_TEXT = 4_000


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """What the reading of one book knows so far; None where a part could not be made out.

    ``resources`` maps a resource to its base unit, where that is known.
    """

    problems: Problems
    resources: Mapping[str, str | None] | None
    classes: frozenset[str] | None
    ladders: frozenset[str] | None
    money: str | None

    def base_of(self, resource: str | None) -> str | None:
        """Return the base unit of a resource, where both could be made out."""
        return None if self.resources is None else self.resources.get(resource or "")


def reading_of(info: ValidationInfo) -> Reading:
    """Return the reading that a validation belongs to."""
    assert isinstance(info.context, Reading), "every shape is validated within a reading"
    return info.context


def refusal(
    *,
    accepted: str,
    found: str | None = None,
    near: str | None = None,
    at: str | None = None,
) -> PydanticCustomError:
    """Return the error for a value that is not accepted.

    :param found: what was found, where it is not the text of the value itself.
    :param at: the key whose value is refused, where the error is raised for a whole mapping.
    """
    facts = {"accepted": accepted, "found": found, "nearest": near, "at": at}
    return PydanticCustomError("refused", "{accepted} is accepted", facts)


def check_converts(unit: str, base: str) -> None:
    """Refuse a unit that does not convert to a base unit.

    :raises PydanticCustomError: if the two measure different things.
    """
    measured = quantities.unit(base).measures
    if quantities.unit(unit).measures != measured:
        alike = [each.code for each in quantities.UNITS.values() if each.measures == measured]
        raise refusal(accepted=f"a unit that converts to {base!r}, one of {choice(alike)}")


def _refuse(accepted: str, *, near: str | None = None) -> NoReturn:
    raise refusal(accepted=accepted, near=near)


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
        near = nearest(str(error.facts["found"]), known)
        raise refusal(accepted=f"one of {choice(known)}", near=near) from None
    except StintbookError:
        raise refusal(accepted=accepted) from None


def _line(value: object) -> str:
    text = _written(value, "one line of text")
    if not text or "\n" in text or len(text) > _LONGEST_LINE:
        _refuse(f"one line of text, at most {_LONGEST_LINE} characters")
    return text


def _paragraph(value: object) -> str:
    text = _written(value, "a text")
    if not text or len(text) > _LONGEST_TEXT:
        _refuse(f"a text, at most {_LONGEST_TEXT:,} characters")
    return text


def _name(value: object) -> str:
    accepted = "a name in small letters, digits and underscores, such as 'long_spit'"
    text = _written(value, accepted)
    if not re.fullmatch(r"[a-z][a-z0-9_]{0,39}", text, re.ASCII):
        _refuse(accepted)
    return text


def _clause_id(value: object) -> str:
    accepted = "a clause number, such as '3.2'"
    text = _written(value, accepted)
    if not re.fullmatch(r"[0-9]{1,3}(\.[0-9]{1,3}){0,3}[a-z]?", text, re.ASCII):
        _refuse(accepted)
    return text


def _whole(value: object) -> int:
    text = _written(value, "a whole number")
    if not re.fullmatch(r"\d{1,9}", text, re.ASCII):
        _refuse("a whole number")
    return int(text)


def _positive(value: object) -> int:
    number = _whole(value)
    if number == 0:
        _refuse("a whole number from 1")
    return number


def _decimal(value: object) -> Fraction:
    accepted = "a number above 0, such as '1' or '1.5'"
    text = _written(value, accepted)
    if not re.fullmatch(r"\d{1,6}(\.\d{1,6})?", text, re.ASCII) or not Fraction(text):
        _refuse(accepted)
    return Fraction(text)


def _percent(value: object) -> Fraction:
    part = _quantity(quantities.percent, value, "a percentage, such as '5 %'")
    if part > 1:
        _refuse("a percentage from 0 to 100")
    return part


def _amount(value: object) -> quantities.Amount:
    amount = _quantity(quantities.Amount.parse, value, "a number and a unit, such as '40 kg'")
    if not amount.number:
        _refuse("an amount above 0")
    return amount


def _ceiling(value: object) -> quantities.Amount | None:
    accepted = "an amount, such as '40 kg', or 'allotment'"
    text = _written(value, accepted)
    if text == "allotment":
        return None
    if not text[:1].isdigit():
        _refuse(accepted, near=nearest(text, ("allotment",)))
    return _amount(value)


def _whole_time(unit: str, accepted: str) -> Callable[[object], int]:
    def read(value: object) -> int:
        amount = _quantity(quantities.Amount.parse, value, accepted)
        if quantities.unit(amount.unit).measures != "time":
            _refuse(accepted)
        number = amount.in_base(unit)
        if number.denominator != 1 or not number:
            _refuse(accepted)
        return int(number)

    return read


def _working_days(value: object) -> Fraction:
    accepted = "a number of days, such as '2 d'"
    amount = _quantity(quantities.Amount.parse, value, accepted)
    if amount.unit != "d" or not amount.number:
        _refuse(accepted)
    return amount.number


def _money(value: object, info: ValidationInfo) -> quantities.Money:
    money = _quantity(quantities.Money.parse, value, "a sum of money, such as '200 EUR'")
    _check_currency(money, info)
    if money.minor.denominator != 1 or not money.minor:
        _refuse("a sum above 0 that coins can pay")
    return money


def _price(value: object, info: ValidationInfo) -> quantities.Price:
    price = _quantity(quantities.Price.parse, value, "a price, such as '3 EUR/kg'")
    _check_currency(price.money, info)
    if not price.money.number:
        _refuse("a price above 0")
    return price


def _check_currency(money: quantities.Money, info: ValidationInfo) -> None:
    expected = reading_of(info).money
    if expected is not None and money.currency != expected:
        _refuse(f"the book's money, {expected}")


def _day(value: object) -> datetime.date:
    accepted = f"a date from {_YEARS[0]} to {_YEARS[-1]}, such as '2026-03-01'"
    text = _written(value, accepted)
    if not re.fullmatch(r"\d{4}-\d{2}-\d{2}", text, re.ASCII):
        _refuse(accepted)
    try:
        day = datetime.date.fromisoformat(text)
    except ValueError:
        raise refusal(accepted=accepted) from None
    if day.year not in _YEARS:
        _refuse(accepted)
    return day


def _day_of_year(value: object) -> tuple[int, int]:
    accepted = "a day of the year, such as '10 April'"
    found = re.fullmatch(r"(\d{1,2})\s+([A-Za-z]+)", _written(value, accepted), re.ASCII)
    if found is None:
        _refuse(accepted)
    if found[2] not in _MONTHS:
        _refuse(accepted, near=nearest(found[2], _MONTHS))
    month = _MONTHS.index(found[2]) + 1
    try:
        datetime.date(2023, month, int(found[1]))  # a year without a 29 February
    except ValueError:
        raise refusal(accepted=accepted + ", that every year has") from None
    return month, int(found[1])


def _reference(*points: str) -> Callable[[object], clauses.Reference]:
    accepted = f"a multiple of {' or '.join(points)}, such as '0.2 {points[0]}'"

    def read(value: object) -> clauses.Reference:
        text = _written(value, accepted)
        found = re.fullmatch(r"(\d{1,3}(?:\.\d{1,6})?)\s+(\S+)", text, re.ASCII)
        if found is None or not Fraction(found[1]):
            _refuse(accepted)
        if found[2] not in points:
            _refuse(accepted, near=nearest(found[2], points))
        return clauses.Reference(multiple=Fraction(found[1]), of=found[2])

    return read


def _one_of(names: type[Named]) -> Callable[[object], Named]:
    accepted = f"one of {choice(names)}"

    def read(value: object) -> Named:
        text = _written(value, accepted)
        if text not in list(names):
            _refuse(accepted, near=nearest(text, names))
        return names(text)

    return read


def _declared(
    what: str, known: Callable[[Reading], Collection[str] | None]
) -> Callable[[object, ValidationInfo], str]:
    def read(value: object, info: ValidationInfo) -> str:
        text = _written(value, f"the name of {what}")
        names = known(reading_of(info))
        if names is not None and text not in names:
            listed = choice(sorted(names), none="none, for the book declares none")
            _refuse(f"{what} of this book: {listed}", near=nearest(text, names))
        return text

    return read


def _listed(table: Collection[str], what: str) -> Callable[[object], str]:
    def read(value: object) -> str:
        text = _written(value, what)
        if text not in table:
            _refuse(what, near=nearest(text, table))
        return text

    return read


def _zone(value: object) -> str:
    return _listed(zoneinfo.available_timezones(), "a time zone, such as 'Europe/Dublin'")(value)


class OnlySeason(enum.StrEnum):
    """The one span that work is owed for."""

    SEASON = "season"


class Restore(enum.StrEnum):
    """What a ladder's first step already gives back."""

    EXCESS = "excess"
    NOTHING = "nothing"


class Observed(enum.StrEnum):
    """What the quota of a resource is advised from."""

    SURVEY = "survey"
    CATCH = "catch"


Line = Annotated[str, PlainValidator(_line)]
Paragraph = Annotated[str, PlainValidator(_paragraph)]
Name = Annotated[str, PlainValidator(_name)]
ClauseId = Annotated[str, PlainValidator(_clause_id)]
Zone = Annotated[str, PlainValidator(_zone)]
Currency = Annotated[
    str,
    PlainValidator(_listed(quantities.CURRENCY_PLACES, "an ISO 4217 code, such as 'EUR'")),
]
Unit = Annotated[str, PlainValidator(_listed(quantities.UNITS, "a UCUM code, such as 'kg'"))]
Resource = Annotated[str, PlainValidator(_declared("a resource", lambda known: known.resources))]
Class = Annotated[str, PlainValidator(_declared("a class", lambda known: known.classes))]
Ladder = Annotated[str, PlainValidator(_declared("a ladder", lambda known: known.ladders))]
Whole = Annotated[int, PlainValidator(_whole)]
Positive = Annotated[int, PlainValidator(_positive)]
Decimal = Annotated[Fraction, PlainValidator(_decimal)]
Percent = Annotated[Fraction, PlainValidator(_percent)]
Amount = Annotated[quantities.Amount, PlainValidator(_amount)]
Days = Annotated[int, PlainValidator(_whole_time("d", "whole days, such as '14 d'"))]
Hours = Annotated[int, PlainValidator(_whole_time("h", "whole hours, such as '48 h'"))]
Minutes = Annotated[int, PlainValidator(_whole_time("min", "hours and minutes, such as '6 h'"))]
Ceiling = Annotated[quantities.Amount | None, PlainValidator(_ceiling)]
WorkingDays = Annotated[Fraction, PlainValidator(_working_days)]
Money = Annotated[quantities.Money, PlainValidator(_money)]
Price = Annotated[quantities.Price, PlainValidator(_price)]
Day = Annotated[datetime.date, PlainValidator(_day)]
DayOfYear = Annotated[tuple[int, int], PlainValidator(_day_of_year)]
Stock = Annotated[clauses.Reference, PlainValidator(_reference("K", "Bmsy"))]
HarvestFraction = Annotated[clauses.Reference, PlainValidator(_reference("Fmsy"))]
Per = Annotated[periods.Per, PlainValidator(_one_of(periods.Per))]
PerSeason = Annotated[OnlySeason, PlainValidator(_one_of(OnlySeason))]
Restored = Annotated[Restore, PlainValidator(_one_of(Restore))]
Observation = Annotated[Observed, PlainValidator(_one_of(Observed))]
CountedBy = Annotated[clauses.CountedBy, PlainValidator(_one_of(clauses.CountedBy))]
Basis = Annotated[clauses.Basis, PlainValidator(_one_of(clauses.Basis))]
Rounding = Annotated[clauses.Apportionment, PlainValidator(_one_of(clauses.Apportionment))]
Growth = Annotated[clauses.Growth, PlainValidator(_one_of(clauses.Growth))]
Order = Annotated[clauses.Sequence, PlainValidator(_one_of(clauses.Sequence))]
Reading4010 = Annotated[clauses.FortyTenReading, PlainValidator(_one_of(clauses.FortyTenReading))]
