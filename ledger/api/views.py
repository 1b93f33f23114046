"""What every address of the API has in common: who calls, in which commons, with which reach."""

from collections.abc import Mapping
from typing import Any, ClassVar

from rest_framework.permissions import IsAuthenticated
from rest_framework.request import Request
from rest_framework.views import APIView

from ledger.api.authentication import TokenAuthentication
from ledger.api.parsing import StrictJSONParser
from ledger.foundation.clocks import system_chance, system_clock
from ledger.foundation.hands import Hand
from ledger.identity import operations as identity
from ledger.identity.queries import TokenRecord
from ledger.web import visitors
from ledger.web.visitors import Visitor


class CommonsView(APIView):
    """An address under a commons' short name, for whoever shows a token of it.

    ``scopes`` says what a token must permit for each method; reading needs ``read``.
    """

    authentication_classes = (TokenAuthentication,)
    permission_classes = (IsAuthenticated,)
    parser_classes = (StrictJSONParser,)
    scopes: ClassVar[Mapping[str, str]] = {}
    visitor: Visitor

    def initial(self, request: Request, *args: Any, **kwargs: Any) -> None:
        """Find out who calls before the method runs.

        :raises ledger.web.visitors.NotHere: if the token is for another commons.
        :raises ledger.web.visitors.OutOfScope: if the token does not reach so far.
        """
        super().initial(request, *args, **kwargs)
        token: TokenRecord = request.auth  # type: ignore[assignment]  # Our one way of signing in.
        self.visitor = visitors.visitor_by_token(
            token=token, slug=kwargs["slug"], now=system_clock()
        )
        self.visitor.reaches(self.scopes.get(request.method or "", identity.READ))

    @property
    def commons_id(self) -> int:
        """Return the id of the commons that is asked about."""
        return self.visitor.commons.commons_id

    @property
    def hand(self) -> Hand:
        """Return the hand of whoever calls."""
        return Hand(by=self.visitor.member, clock=system_clock, chance=system_chance)
