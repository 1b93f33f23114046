"""Print a one-time card by which a member gets into the book."""

from typing import Any

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.db import transaction

from ledger.commons import operations as commons_operations
from ledger.commons import queries as commons
from ledger.foundation.clocks import system_chance, system_clock
from ledger.foundation.errors import LedgerError
from ledger.identity import operations as identity
from ledger.identity import queries as accounts
from ledger.identity import secrets
from ledger.management import ready

CARD = """\
+----------------------------------------------------------+
  {commons}
  A card for member {member}. It opens the book once.

  Account   {username}
  Card      {secret}

  Go to the page /card/ of the service, type the card, and
  choose a password. The card holds until {until}.
  Whoever finds it can use it: give it by hand, and keep it
  as you keep a key.
+----------------------------------------------------------+"""


class Command(BaseCommand):
    """Make a member's account where there is none, and print a card for it."""

    help = (
        "Print a one-time card for a member, who chooses a password with it. Makes the account"
        " where there is none; otherwise earlier cards end, and the second factor stays."
    )

    def add_arguments(self, parser: CommandParser) -> None:
        """Take the commons, the member, and a name for a new account."""
        parser.add_argument("--commons", required=True, help="the short name of the commons")
        parser.add_argument("--member", required=True, type=int, help="the member's number")
        parser.add_argument("--name", help="the name of a new account; COMMONS.NUMBER if silent")

    def handle(self, *args: Any, **options: Any) -> None:
        """Make, print."""
        ready.check_tables()
        try:
            self.stdout.write(card(slug=options["commons"], **_who(options)))
        except LedgerError as error:
            raise CommandError(str(error)) from error


def card(*, slug: str, member: int, name: str | None = None) -> str:
    """Make a card for a member, and return it as it is printed.

    :raises ledger.commons.queries.UnknownCommons: if there is no such commons.
    :raises ledger.commons.operations.UnknownMember: if nobody has the number.
    :raises ledger.identity.operations.UnusableName: if a new account cannot have the name.
    """
    kept = commons.commons_named(slug=slug)
    with transaction.atomic():
        commons_operations.check_member(commons_id=kept.commons_id, member=member)
        secret = identity.open_account(
            username=name or f"{slug}.{member}",
            commons_id=kept.commons_id,
            member=member,
            clock=system_clock,
            chance=system_chance,
        )
    seat = accounts.seat_of_member(commons_id=kept.commons_id, member=member)
    assert seat is not None, "the account was made above"
    return CARD.format(
        commons=kept.name,
        member=member,
        username=seat.username,
        secret=secrets.in_groups(secret),
        until=kept.day_of(system_clock() + identity.CARD_HOLDS),
    )


def _who(options: dict[str, Any]) -> dict[str, Any]:
    return {"member": options["member"], "name": options["name"]}
