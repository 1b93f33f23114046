"""Cards and tokens: shown once, kept as a digest, and ended for good."""

from datetime import timedelta

import pytest
from django.db import IntegrityError, transaction

from ledger.foundation.clocks import Chance, seeded_chance
from ledger.identity import models, operations, queries, secrets
from tests.conftest import TickingClock

PASSWORD = "a heron stands in the reeds"

pytestmark = pytest.mark.django_db


def _card(clock: TickingClock, chance: Chance, *, member: int = 7, name: str = "ada.7") -> str:
    return operations.open_account(
        username=name, commons_id=1, member=member, clock=clock, chance=chance
    )


def _token(clock: TickingClock, chance: Chance, **changes: object) -> str:
    asked = {"commons_id": 1, "member": 7, "device": "phone", "scopes": ["read"]} | changes
    return operations.issue_token(clock=clock, chance=chance, **asked)  # type: ignore[arg-type]


def test_a_card_sets_the_password_once(ticking_clock: TickingClock, chance: Chance) -> None:
    """As typed from paper, in groups and capitals; a second time it opens nothing."""
    secret = _card(ticking_clock, chance)
    typed = secrets.in_groups(secret).upper().replace(" ", "-")
    name = operations.redeem_card(secret=typed, password=PASSWORD, clock=ticking_clock)
    assert models.Account.objects.get(username=name).check_password(PASSWORD)
    with pytest.raises(operations.CardDoesNotHold):
        operations.redeem_card(secret=secret, password=PASSWORD, clock=ticking_clock)


def test_a_card_holds_thirty_days(ticking_clock: TickingClock, chance: Chance) -> None:
    """One second before it ends it opens; at its end it does not."""
    first = _card(ticking_clock, chance, member=7, name="ada.7")
    second = _card(ticking_clock, chance, member=8, name="ben.8")
    ticking_clock.advance(timedelta(days=30, seconds=-1))
    operations.redeem_card(secret=first, password=PASSWORD, clock=ticking_clock)
    ticking_clock.advance(seconds=1)
    with pytest.raises(operations.CardDoesNotHold):
        operations.redeem_card(secret=second, password=PASSWORD, clock=ticking_clock)


def test_a_new_card_ends_the_one_before(ticking_clock: TickingClock, chance: Chance) -> None:
    """The account stands; its earlier card is paper."""
    old, new = _card(ticking_clock, chance), _card(ticking_clock, chance)
    assert models.Account.objects.count() == 1
    with pytest.raises(operations.CardDoesNotHold):
        operations.redeem_card(secret=old, password=PASSWORD, clock=ticking_clock)
    operations.redeem_card(secret=new, password=PASSWORD, clock=ticking_clock)


def test_nothing_kept_gives_a_secret_away(ticking_clock: TickingClock, chance: Chance) -> None:
    """The tables hold digests."""
    kept = {_card(ticking_clock, chance), _token(ticking_clock, chance)}
    for table in (models.Card, models.Token):
        for row in table.objects.values():
            assert not kept & {str(value) for value in row.values()}


@pytest.mark.parametrize("name", ["", "ab", "a" * 61, "a b", "Ada.7", "ä.7", "a/b"])
def test_an_account_name_is_plain_and_its_own(
    ticking_clock: TickingClock, chance: Chance, name: str
) -> None:
    """Names that look alike to a reader are refused too."""
    _card(ticking_clock, chance)
    with pytest.raises(operations.UnusableName):
        _card(ticking_clock, chance, member=9, name=name)


def test_a_device_has_one_token_at_a_time(ticking_clock: TickingClock, chance: Chance) -> None:
    """The new one holds, the old one ends, and the name stays."""
    _card(ticking_clock, chance)
    old, new = _token(ticking_clock, chance), _token(ticking_clock, chance)
    assert queries.token(secret=old, at=ticking_clock.now) is None
    found = queries.token(secret=new, at=ticking_clock.now)
    assert found is not None
    assert (found.member, found.device, found.scopes) == (7, "phone", frozenset({"read"}))
    assert queries.token(secret=new, at=ticking_clock.now + timedelta(days=365)) is None


def test_a_closed_account_opens_nothing(ticking_clock: TickingClock, chance: Chance) -> None:
    """Neither its token nor its card."""
    card = _card(ticking_clock, chance)
    token = _token(ticking_clock, chance)
    models.Account.objects.update(is_active=False)
    assert queries.token(secret=token, at=ticking_clock.now) is None
    with pytest.raises(operations.CardDoesNotHold):
        operations.redeem_card(secret=card, password=PASSWORD, clock=ticking_clock)


@pytest.mark.parametrize(
    ("change", "error"),
    [
        ({"scopes": ["write"]}, operations.UnknownScope),
        ({"scopes": []}, operations.UnknownScope),
        ({"device": " "}, operations.UnusableDevice),
        ({"device": "x" * 61}, operations.UnusableDevice),
        ({"device": "a\nb"}, operations.UnusableDevice),
        ({"member": 8}, operations.NoSeat),
    ],
)
def test_a_token_that_cannot_be_is_refused(
    ticking_clock: TickingClock, chance: Chance, change: dict[str, object], error: type[Exception]
) -> None:
    """Each refusal has its own type."""
    _card(ticking_clock, chance)
    with pytest.raises(error):
        _token(ticking_clock, chance, **change)


@pytest.mark.parametrize(
    "constraint", ["seat_once_a_commons", "seat_once_a_member", "token_once_a_device"]
)
def test_the_tables_hold_their_constraints(
    ticking_clock: TickingClock, chance: Chance, constraint: str
) -> None:
    """Each is tried by a row that breaks it."""
    _card(ticking_clock, chance)
    _token(ticking_clock, chance)
    seat = models.Seat.objects.get()
    other = models.Account.objects.create(username="else", made_at=ticking_clock.now)
    token = models.Token.objects.get()
    token.pk, token.secret_digest = None, b"other"
    broken = {
        "seat_once_a_commons": models.Seat(account=seat.account, commons_id=1, member=9),
        "seat_once_a_member": models.Seat(account=other, commons_id=1, member=7),
        "token_once_a_device": token,
    }
    with pytest.raises(IntegrityError), transaction.atomic():
        broken[constraint].save()


def test_secrets_are_long_and_of_letters_and_digits() -> None:
    """160 bits in base 32 are 32 signs."""
    found = secrets.new(seeded_chance(1))
    assert len(found) == 32
    assert found.isalnum()
    assert secrets.as_typed(secrets.in_groups(found)) == found
