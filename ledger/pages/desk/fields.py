"""Fields that read what people write, and say what is accepted where they cannot."""

import re
from datetime import date, datetime, time
from decimal import Decimal
from typing import Any
from zoneinfo import ZoneInfo

from django import forms

from ledger.web import amounts

_DAY = re.compile(r"(\d{4})[-/. ]?(\d{1,2})[-/. ]?(\d{1,2})")
_TIME = re.compile(r"(\d{1,2})[:. h]?(\d{2})")
NUMBER_DIGITS_MAX = 9


class NumberField(forms.CharField):
    """A member's number, in digits of any script."""

    def to_python(self, value: Any) -> Any:
        """Return the number, or None where nothing was written."""
        text = super().to_python(value)
        if not text:
            return None
        if not text.isdecimal() or len(text) > NUMBER_DIGITS_MAX or int(text) == 0:
            raise forms.ValidationError("A member's number in digits is accepted, such as 7.")
        return int(text)


class DayField(forms.CharField):
    """A calendar day: year, month, day."""

    def to_python(self, value: Any) -> Any:
        """Return the day, or None where nothing was written."""
        text = super().to_python(value)
        if not text:
            return None
        found = _DAY.fullmatch(text)
        try:
            return date(*map(int, found.groups())) if found else self._refuse()
        except ValueError:
            return self._refuse()

    def _refuse(self) -> date:
        raise forms.ValidationError(
            "A day of the calendar as year, month, day is accepted, such as 2026-03-02."
        )


class TimeField(forms.CharField):
    """A time of day, to the minute, by the clock of the commons."""

    def to_python(self, value: Any) -> Any:
        """Return the time, or None where nothing was written."""
        text = super().to_python(value)
        if not text:
            return None
        found = _TIME.fullmatch(text)
        try:
            return time(int(found[1]), int(found[2])) if found else self._refuse()
        except ValueError:
            return self._refuse()

    def _refuse(self) -> time:
        raise forms.ValidationError("Hours and minutes are accepted, such as 06:30.")


class AmountField(forms.CharField):
    """An amount above nought, with a decimal point or a decimal comma."""

    def to_python(self, value: Any) -> Any:
        """Return the amount, or None where nothing was written."""
        text = super().to_python(value)
        if not text:
            return None
        try:
            amount = amounts.parse_amount(text)
        except amounts.NotAnAmount as error:
            raise forms.ValidationError(
                "Digits with one decimal point or comma are accepted, such as 12.5 or 12,5."
            ) from error
        if amount == Decimal(0):
            raise forms.ValidationError("An amount above nought is accepted, such as 12.5.")
        return amount


def instant(day: date, at: time, *, zone: str) -> datetime | None:
    """Return the instant of a time by the clock of a zone; None where the clocks skipped it.

    Where the clocks ran through a time twice, the first is meant.
    """
    local = datetime.combine(day, at, tzinfo=ZoneInfo(zone))
    try:
        there_and_back = datetime.fromtimestamp(local.timestamp(), tz=ZoneInfo(zone))
    except (OverflowError, ValueError):
        return None
    same = there_and_back.replace(tzinfo=None) == local.replace(tzinfo=None)
    return local if same else None
