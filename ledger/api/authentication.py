"""A device shows its token; nothing else opens the API."""

from typing import Any

from django.db import transaction
from rest_framework.authentication import BaseAuthentication, get_authorization_header
from rest_framework.exceptions import AuthenticationFailed
from rest_framework.request import Request

from ledger.foundation.clocks import system_clock
from ledger.identity import operations
from ledger.identity import queries as identity
from ledger.identity.queries import TokenRecord

TOKEN_SIGNS_MAX = 100


class Caller:
    """Somebody with a token that holds, as the framework wants to see one."""

    is_authenticated = True

    def __init__(self, token: TokenRecord) -> None:
        self.token = token
        self.pk = token.token_id


class TokenAuthentication(BaseAuthentication):
    """``Authorization: Bearer TOKEN``."""

    def authenticate(self, request: Request) -> tuple[Any, Any] | None:
        """Return who calls, or None where no token is shown.

        :raises AuthenticationFailed: if the header is malformed or the token does not hold.
        """
        parts = get_authorization_header(request).split()
        if not parts:
            return None
        if len(parts) != 2 or parts[0].lower() != b"bearer" or len(parts[1]) > TOKEN_SIGNS_MAX:
            raise AuthenticationFailed("Found another header; accepted is: Bearer TOKEN.")
        secret = parts[1].decode("ascii", errors="replace")
        now = system_clock()
        token = identity.token(secret=secret, at=now)
        if token is None:
            raise AuthenticationFailed("This token does not hold, or holds no more.")
        if token.last_used_on != now.date():
            with transaction.atomic():
                operations.note_use(token_id=token.token_id, day=now.date())
        return Caller(token), token

    def authenticate_header(self, request: Request) -> str:
        """Return what an answer without a token asks for."""
        return 'Bearer realm="stintbook"'
