"""What a password must be: long, not among the commonest, not the account's name.

NIST SP 800-63B, revision 4: fifteen signs where the password is the only factor; nothing is asked
of its composition, and it is never changed by the calendar. Spaces and all scripts are welcome.
"""

from typing import Any

from django.core.exceptions import ValidationError

LEAST, MOST = 15, 256


class LongEnough:
    """Accept 15 to 256 signs, each code point counted as one."""

    def validate(self, password: str, user: Any = None) -> None:
        """Pass if the length is right.

        :raises ValidationError: if it is not.
        """
        if not LEAST <= len(password) <= MOST:
            raise ValidationError(
                f"Found {len(password)} signs; accepted are {LEAST} to {MOST}. A sentence is easier"
                " to keep in mind than a word."
            )

    def get_help_text(self) -> str:
        """Return what to say beside the field."""
        return f"At least {LEAST} signs; a sentence of your own is good. Spaces count."


class NotTheName:
    """Refuse a password that holds the account's name, or is one sign repeated."""

    def validate(self, password: str, user: Any = None) -> None:
        """Pass if the password says something of its own.

        :raises ValidationError: if it does not.
        """
        name = getattr(user, "username", "")
        if name and name.casefold() in password.casefold():
            raise ValidationError("The password holds the account's name; leave that out.")
        if len(set(password)) < 5:
            raise ValidationError("The password has fewer than five different signs.")

    def get_help_text(self) -> str:
        """Return what to say beside the field."""
        return "It does not hold the account's name."
