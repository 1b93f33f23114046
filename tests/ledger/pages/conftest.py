"""People at the pages of a scene, each signed in, with a second factor set up."""

from collections.abc import Callable

import pytest
from allauth.mfa.models import Authenticator
from django.db import transaction
from django.test import Client

from ledger.foundation.clocks import Chance, system_clock
from ledger.identity import operations as identity
from ledger.identity.models import Account, Seat
from tests.conftest import TickingClock
from tests.ledger import scene

At = Callable[[int], Client]


@pytest.fixture
def bay(db: None, ticking_clock: TickingClock, chance: Chance) -> scene.Scene:
    """The small commons with its season open, and ordinary members beside the officers."""
    return scene.opened(clock=ticking_clock, chance=chance)


@pytest.fixture
def at(bay: scene.Scene, chance: Chance) -> At:
    """Give a browser at which a member of the scene is signed in."""

    def sign_in(member: int) -> Client:
        with transaction.atomic():
            identity.open_account(
                username=f"person.{member}",
                commons_id=bay.commons_id,
                member=member,
                clock=system_clock,
                chance=chance,
            )
        seat = Seat.objects.get(commons_id=bay.commons_id, member=member)
        Authenticator.objects.get_or_create(
            user_id=seat.account_id,
            type=Authenticator.Type.TOTP,
            defaults={"data": {"secret": "JBSWY3DPEHPK3PXP"}},
        )
        client = Client()
        client.force_login(Account.objects.get(pk=seat.account_id))
        return client

    return sign_in
