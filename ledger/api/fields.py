"""Fields that are bounded on every side, so that nothing reaches the book that it cannot keep."""

import re
import unicodedata
from collections.abc import Mapping
from datetime import datetime
from decimal import Decimal
from typing import Any

from drf_spectacular.utils import extend_schema_field
from rest_framework import serializers

NUMBER_MAX = 2**31 - 1
ENTRY_MAX = 2**53 - 1
AMOUNT_PATTERN = r"^[0-9]{1,18}(\.[0-9]{1,9})?$"
# Signs that turn the direction of what stands around them, and can make a name read as another.
_TURNING = re.compile("[\u202a-\u202e\u2066-\u2069\x00]")


class StrictSerializer(serializers.Serializer[Any]):
    """Accepts the fields it names and no other."""

    def to_internal_value(self, data: Any) -> Any:
        """Return the checked values.

        :raises rest_framework.serializers.ValidationError: if a field is unknown or wrong.
        """
        if isinstance(data, Mapping):
            unknown = sorted(str(name)[:60] for name in set(data) - set(self.fields))
            if unknown:
                accepted = ", ".join(self.fields)
                raise serializers.ValidationError(
                    {name: [f"Unknown field; accepted are {accepted}."] for name in unknown[:20]}
                )
        return super().to_internal_value(data)


@extend_schema_field(
    {
        "type": "string",
        "pattern": AMOUNT_PATTERN,
        "maxLength": 28,
        "example": "12.5",
    }
)
class Amount(serializers.Field[Decimal, Any, str, Any]):
    """An amount as a text of decimal digits with a point; a number would be rounded on the way."""

    def to_internal_value(self, data: Any) -> Decimal:
        """Return the amount.

        :raises rest_framework.serializers.ValidationError: if it is no such text.
        """
        if not isinstance(data, str) or not re.fullmatch(AMOUNT_PATTERN[1:-1], data, re.ASCII):
            raise serializers.ValidationError(
                f'Found {str(data)[:30]!r}; accepted are texts of digits such as "12.5".'
            )
        return Decimal(data)

    def to_representation(self, value: Decimal) -> str:
        """Return the amount as a text."""
        return f"{value:f}"


@extend_schema_field(
    {
        "type": "string",
        "format": "date-time",
        "maxLength": 40,
        "example": "2026-03-02T07:30:00+00:00",
    }
)
class Instant(serializers.Field[datetime, Any, str, Any]):
    """An instant with its offset from UTC, as RFC 3339 writes it."""

    def to_internal_value(self, data: Any) -> datetime:
        """Return the instant.

        :raises rest_framework.serializers.ValidationError: if it is none, or has no offset.
        """
        try:
            found = datetime.fromisoformat(data) if isinstance(data, str) and "T" in data else None
        except ValueError:
            found = None
        if found is None or found.utcoffset() is None or not 1900 <= found.year <= 2200:
            raise serializers.ValidationError(
                f"Found {str(data)[:40]!r}; accepted are instants with their offset, such as"
                " 2026-03-02T07:30:00+00:00."
            )
        return found

    def to_representation(self, value: datetime) -> str:
        """Return the instant as a text."""
        return value.isoformat()


class Text(serializers.CharField):
    """A text of people: bounded, with no sign that hides or turns what stands around it."""

    def to_internal_value(self, data: Any) -> str:
        """Return the text.

        :raises rest_framework.serializers.ValidationError: if it cannot be kept or read.
        """
        if not isinstance(data, str):
            raise serializers.ValidationError("Found no text; accepted is a text.")
        text: str = super().to_internal_value(data)
        if _TURNING.search(text):
            raise serializers.ValidationError(
                "Found a sign that turns the direction of writing; accepted are texts without."
            )
        if text and all(unicodedata.category(sign) in ("Cf", "Zs", "Cc") for sign in text):
            raise serializers.ValidationError("Found only signs that cannot be seen.")
        return text


def whole(**kwargs: Any) -> serializers.IntegerField:
    """Return a field for a whole number of 1 or more that the book can keep."""
    return serializers.IntegerField(**{"min_value": 1, "max_value": NUMBER_MAX, **kwargs})
