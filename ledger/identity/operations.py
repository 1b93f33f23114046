"""The writers of accounts, seats, cards and tokens."""

import re
from collections.abc import Collection
from datetime import date, timedelta
from typing import ClassVar

from ledger.foundation import transactions
from ledger.foundation.clocks import Chance, Clock
from ledger.foundation.errors import LedgerError
from ledger.identity import models, secrets

CARD_HOLDS = timedelta(days=30)
TOKEN_HOLDS = timedelta(days=365)
DEVICE_SIGNS = 60
READ, RECORD, MOVE_CASES = "read", "record", "move_cases"
SCOPES = (READ, RECORD, MOVE_CASES)


USERNAME = re.compile(r"[a-zA-Z0-9._-]{3,60}")


class UnusableName(LedgerError):
    """An account cannot have this name."""

    code: ClassVar[str] = "identity.unusable_name"
    message: ClassVar[str] = (
        "Found the account name {found!r}; accepted are 3 to 60 letters, digits, points and"
        " hyphens that no other account has."
    )


class UnusableDevice(LedgerError):
    """A device cannot have this name."""

    code: ClassVar[str] = "identity.unusable_device"
    message: ClassVar[str] = "Found the device name {found!r}; accepted are 1 to 60 signs."


class CardDoesNotHold(LedgerError):
    """A card's secret is wrong, or the card was used, replaced, or is too old."""

    code: ClassVar[str] = "identity.card_does_not_hold"
    message: ClassVar[str] = (
        "This card does not hold, or holds no more; accepted is the last card that was given,"
        " once, within {days} days."
    )


class UnknownScope(LedgerError):
    """A token is to permit what no token can."""

    code: ClassVar[str] = "identity.unknown_scope"
    message: ClassVar[str] = "Found the scope {found!r}; accepted are {accepted}."


class NoSeat(LedgerError):
    """The member has no account yet."""

    code: ClassVar[str] = "identity.no_seat"
    message: ClassVar[str] = "Member {member} has no account; accepted is one who holds a card."


class UnknownToken(LedgerError):
    """The account has no such token, or ended it before."""

    code: ClassVar[str] = "identity.unknown_token"
    message: ClassVar[str] = "Found no token {found} of yours that holds."


@transactions.required
def open_account(
    *, username: str, commons_id: int, member: int, clock: Clock, chance: Chance
) -> str:
    """Make sure that a member has an account, and return the secret of a new one-time card for it.

    Earlier cards of the account end. An account that stands keeps its name, and its password and
    second factor too; using the card changes the password alone.

    :raises UnusableName: if a new account cannot have the name.
    """
    seat = models.Seat.objects.filter(commons_id=commons_id, member=member).first()
    if seat is None:
        taken = models.Account.objects.filter(username__iexact=username).exists()
        if taken or not USERNAME.fullmatch(username):
            raise UnusableName(found=username)
        account = models.Account(username=username, made_at=clock())
        account.set_unusable_password()
        account.save()
        seat = models.Seat.objects.create(account=account, commons_id=commons_id, member=member)
    models.Card.objects.filter(account=seat.account_id, used_at__isnull=True).update(
        used_at=clock()
    )
    secret = secrets.new(chance)
    models.Card.objects.create(
        account_id=seat.account_id,
        secret_digest=secrets.digest(secret),
        made_at=clock(),
        expires_at=clock() + CARD_HOLDS,
    )
    return secret


@transactions.required
def redeem_card(*, secret: str, password: str, clock: Clock) -> str:
    """Set the password of a card's account, end the card, and return the account's name.

    A new password ends every session that began with the old one. The second factor stays.

    :param secret: as typed from paper: spaces, hyphens and capitals do not matter.
    :raises CardDoesNotHold: if the card is unknown, used, replaced or too old.
    """
    card = (
        models.Card.objects.select_for_update()
        .filter(
            secret_digest=secrets.digest(secrets.as_typed(secret)),
            used_at__isnull=True,
            expires_at__gt=clock(),
            account__is_active=True,
        )
        .first()
    )
    if card is None:
        raise CardDoesNotHold(days=CARD_HOLDS.days)
    card.used_at = clock()
    card.save()
    card.account.set_password(password)
    card.account.save()
    return card.account.username


@transactions.required
def issue_token(
    *,
    commons_id: int,
    member: int,
    device: str,
    scopes: Collection[str],
    clock: Clock,
    chance: Chance,
) -> str:
    """Issue a token for a member's device, ending an earlier one of the same device.

    Return its secret, which is shown once and kept nowhere.

    :raises NoSeat: if the member has no account.
    :raises UnusableDevice: if the device's name is empty or too long.
    :raises UnknownScope: if there is no scope, or one that is not of ``SCOPES``.
    """
    if not 1 <= len(device.strip()) <= DEVICE_SIGNS or not device.isprintable():
        raise UnusableDevice(found=device)
    if not scopes:
        raise UnknownScope(found="none", accepted=", ".join(SCOPES))
    for scope in scopes:
        if scope not in SCOPES:
            raise UnknownScope(found=scope, accepted=", ".join(SCOPES))
    seat = models.Seat.objects.filter(commons_id=commons_id, member=member).first()
    if seat is None:
        raise NoSeat(member=member)
    now = clock()
    models.Token.objects.filter(seat=seat, device=device, ended_at__isnull=True).update(
        ended_at=now
    )
    secret = secrets.new(chance)
    models.Token.objects.create(
        seat=seat,
        device=device,
        secret_digest=secrets.digest(secret),
        scopes=sorted(scopes),
        made_at=now,
        expires_at=now + TOKEN_HOLDS,
    )
    return secret


@transactions.required
def end_token(*, account_id: int, token_id: int, clock: Clock) -> None:
    """End a token of an account; it opens nothing from now on.

    :raises UnknownToken: if the account has no such token that holds.
    """
    ended = models.Token.objects.filter(
        pk=token_id, seat__account_id=account_id, ended_at__isnull=True
    ).update(ended_at=clock())
    if not ended:
        raise UnknownToken(found=token_id)


@transactions.required
def note_use(*, token_id: int, day: date) -> None:
    """Note the day on which a token was last used, so that one nobody needs can be ended."""
    models.Token.objects.filter(pk=token_id).update(last_used_on=day)
