"""Parts of addresses that are numbers or days; anything else in their place is no address."""

from datetime import date

# As many as the whole numbers have that JSON carries without loss everywhere, below 2^53.
_DIGITS_MAX = 16


class NumberConverter:
    """A number of an entry, a case or the like."""

    regex = f"[0-9]{{1,{_DIGITS_MAX}}}"

    def to_python(self, value: str) -> int:
        """Return the number."""
        return int(value)

    def to_url(self, value: int) -> str:
        """Return the number as it stands in an address."""
        return str(value)


class DayConverter:
    """A day, as ISO 8601 writes it."""

    regex = "[0-9]{4}-[0-9]{2}-[0-9]{2}"

    def to_python(self, value: str) -> date:
        """Return the day.

        :raises ValueError: if the calendar has no such day; the address is then not found.
        """
        return date.fromisoformat(value)

    def to_url(self, value: date) -> str:
        """Return the day as it stands in an address."""
        return value.isoformat()
