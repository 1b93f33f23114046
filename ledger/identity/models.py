"""Accounts, the seats that they have in commons, one-time cards, and tokens of devices.

A commons and a member are opaque numbers here. Which offices a member holds is a dated fact of the
commons, looked up at every request and never kept beside an account.
"""

from typing import ClassVar

from django.contrib.auth.base_user import AbstractBaseUser, BaseUserManager
from django.db import models


class AccountManager(BaseUserManager["Account"]):
    """Finds accounts; they are made by the operations alone."""


class Account(AbstractBaseUser):
    """Somebody who can sign in, by a name that no other account has."""

    username = models.CharField(max_length=60, unique=True)
    is_active = models.BooleanField(default=True)
    made_at = models.DateTimeField()

    USERNAME_FIELD = "username"
    REQUIRED_FIELDS: ClassVar[list[str]] = []

    objects = AccountManager()


class Seat(models.Model):
    """An account's place in a commons: the member that it speaks for."""

    account = models.ForeignKey(Account, on_delete=models.PROTECT, related_name="seats")
    commons_id = models.BigIntegerField()
    member = models.PositiveIntegerField()

    class Meta:
        constraints = (
            models.UniqueConstraint(fields=("account", "commons_id"), name="seat_once_a_commons"),
            models.UniqueConstraint(fields=("commons_id", "member"), name="seat_once_a_member"),
        )


class Card(models.Model):
    """A printed card with a secret that lets its holder choose a password, once."""

    account = models.ForeignKey(Account, on_delete=models.PROTECT, related_name="cards")
    secret_digest = models.BinaryField(max_length=32, unique=True)
    made_at = models.DateTimeField()
    expires_at = models.DateTimeField()
    used_at = models.DateTimeField(null=True)


class Token(models.Model):
    """A device's secret for the API: what it may do for its seat, and until when."""

    seat = models.ForeignKey(Seat, on_delete=models.PROTECT, related_name="tokens")
    device = models.CharField(max_length=60)
    secret_digest = models.BinaryField(max_length=32, unique=True)
    scopes = models.JSONField()
    made_at = models.DateTimeField()
    expires_at = models.DateTimeField()
    ended_at = models.DateTimeField(null=True)
    last_used_on = models.DateField(null=True)

    class Meta:
        constraints = (
            # A device that gets a new token keeps its name, so that its entries keep their keys.
            models.UniqueConstraint(
                fields=("seat", "device"),
                condition=models.Q(ended_at__isnull=True),
                name="token_once_a_device",
            ),
        )
