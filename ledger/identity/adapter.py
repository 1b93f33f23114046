"""How the sign-in library behaves here: nobody signs up by themself; accounts come by card."""

from typing import Any

from allauth.account.adapter import DefaultAccountAdapter
from django.http import HttpRequest


class AccountAdapter(DefaultAccountAdapter):  # type: ignore[misc]  # The library has no types.
    """Close the sign-up, which no address leads to anyway."""

    def is_open_for_signup(self, request: HttpRequest) -> bool:
        """Return that it is closed."""
        return False

    def send_mail(self, template_prefix: str, email: str, context: Any) -> None:
        """Send nothing: accounts have no address."""
