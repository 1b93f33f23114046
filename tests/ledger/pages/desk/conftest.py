"""Reed Bank with people at its pages, each signed in."""

from collections.abc import Callable
from datetime import UTC, datetime

import pytest
from allauth.mfa.models import Authenticator
from django.db import transaction
from django.test import Client

from ledger.foundation.clocks import Chance
from ledger.identity import operations as identity
from ledger.identity.models import Account, Seat
from tests.conftest import TickingClock
from tests.ledger import builders

NOW = datetime(2026, 3, 10, 12, 0, tzinfo=UTC)
SignIn = Callable[[int], Client]


@pytest.fixture
def reed_bank(db: None, chance: Chance, monkeypatch: pytest.MonkeyPatch) -> int:
    """A commons whose season is open; at its pages it is noon of 10 March 2026."""
    clock = TickingClock(datetime(2026, 3, 1, 9, 0, tzinfo=UTC))
    commons_id = builders.opened(hand=builders.hand(clock=clock, chance=chance))
    for module in ("ledger.pages.visiting", "ledger.pages.desk.recording"):
        monkeypatch.setattr(f"{module}.system_clock", lambda: NOW)
    monkeypatch.setattr("ledger.pages.desk.correcting.system_clock", lambda: NOW)
    return commons_id


@pytest.fixture
def signed_in(reed_bank: int, chance: Chance) -> SignIn:
    """Give a browser in which a member is signed in."""

    def sign_in(member: int) -> Client:
        with transaction.atomic():
            identity.open_account(
                username=f"member{member}",
                commons_id=reed_bank,
                member=member,
                clock=lambda: NOW,
                chance=chance,
            )
        seat = Seat.objects.get(commons_id=reed_bank, member=member)
        # Without a second factor no office is open.
        Authenticator.objects.create(
            user_id=seat.account_id,
            type=Authenticator.Type.TOTP,
            data={"secret": "JBSWY3DPEHPK3PXP"},
        )
        client = Client()
        client.force_login(Account.objects.get(pk=seat.account_id))
        return client

    return sign_in
