"""The writers of accounts, seats, cards and tokens."""

from collections.abc import Collection
from datetime import timedelta
from typing import ClassVar

from ledger.foundation import transactions
from ledger.foundation.clocks import Chance, Clock
from ledger.foundation.errors import LedgerError
from ledger.identity import models, secrets

CARD_HOLDS = timedelta(days=30)
TOKEN_HOLDS = timedelta(days=365)
READ, RECORD, MOVE_CASES = "read", "record", "move_cases"
SCOPES = (READ, RECORD, MOVE_CASES)


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

    Earlier cards of the account end. An account that stands keeps its name, its password and its
    second factor until the card is used.
    """
    seat = models.Seat.objects.filter(commons_id=commons_id, member=member).first()
    if seat is None:
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
    :raises UnknownScope: if a scope is not one of ``SCOPES``.
    """
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
