"""Who an account or a token is."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date, datetime

from ledger.identity import models, secrets


@dataclass(frozen=True, slots=True, kw_only=True)
class SeatRecord:
    """An account's place in a commons."""

    account_id: int
    username: str
    commons_id: int
    member: int


@dataclass(frozen=True, slots=True, kw_only=True)
class TokenRecord:
    """A token as its owner may see it; the secret itself is kept nowhere."""

    token_id: int
    account_id: int
    commons_id: int
    member: int
    device: str
    scopes: frozenset[str]
    made_at: datetime
    expires_at: datetime
    last_used_on: date | None


def seats(*, account_id: int) -> Mapping[int, SeatRecord]:
    """Return an account's seats by commons."""
    rows = models.Seat.objects.filter(account_id=account_id).select_related("account")
    return {row.commons_id: _seat(row) for row in rows.order_by("commons_id")}


def seat(*, account_id: int, commons_id: int) -> SeatRecord | None:
    """Return an account's seat in a commons, if it has one."""
    rows = models.Seat.objects.filter(account_id=account_id, commons_id=commons_id)
    row = rows.select_related("account").first()
    return None if row is None else _seat(row)


def seat_of_member(*, commons_id: int, member: int) -> SeatRecord | None:
    """Return the seat of a member, if the member has an account."""
    rows = models.Seat.objects.filter(commons_id=commons_id, member=member)
    row = rows.select_related("account").first()
    return None if row is None else _seat(row)


def token(*, secret: str, at: datetime) -> TokenRecord | None:
    """Return the token of a secret, if it is one that holds at an instant."""
    row = (
        models.Token.objects.filter(
            secret_digest=secrets.digest(secret),
            ended_at__isnull=True,
            expires_at__gt=at,
            seat__account__is_active=True,
        )
        .select_related("seat")
        .first()
    )
    return None if row is None else _token(row)


def tokens(*, account_id: int, commons_id: int) -> tuple[TokenRecord, ...]:
    """Return an account's tokens in a commons that were not ended, by device."""
    rows = models.Token.objects.filter(
        seat__account_id=account_id, seat__commons_id=commons_id, ended_at__isnull=True
    )
    return tuple(_token(row) for row in rows.select_related("seat").order_by("device"))


def _seat(row: models.Seat) -> SeatRecord:
    return SeatRecord(
        account_id=row.account_id,
        username=row.account.username,
        commons_id=row.commons_id,
        member=row.member,
    )


def _token(row: models.Token) -> TokenRecord:
    return TokenRecord(
        token_id=row.pk,
        account_id=row.seat.account_id,
        commons_id=row.seat.commons_id,
        member=row.seat.member,
        device=row.device,
        scopes=frozenset(row.scopes),
        made_at=row.made_at,
        expires_at=row.expires_at,
        last_used_on=row.last_used_on,
    )
