"""Print a token by which a member's device uses the API."""

from typing import Any

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.db import transaction

from ledger.commons import operations as commons_operations
from ledger.commons import queries as commons
from ledger.foundation.clocks import system_chance, system_clock
from ledger.foundation.errors import LedgerError
from ledger.identity import operations as identity
from ledger.identity import queries as accounts
from ledger.management import ready


class Command(BaseCommand):
    """Issue a token for a device, and print it once."""

    help = (
        "Issue a token for a member's device and print it; it is kept nowhere and shown once. An"
        " earlier token of the same device ends. Makes the member's account where there is none."
    )

    def add_arguments(self, parser: CommandParser) -> None:
        """Take the commons, the member, the device and what it may do."""
        parser.add_argument("--commons", required=True, help="the short name of the commons")
        parser.add_argument("--member", required=True, type=int, help="the member's number")
        parser.add_argument("--device", default="desk computer", help="a name for the device")
        parser.add_argument(
            "--scope",
            action="append",
            choices=identity.SCOPES,
            help="what it may do; may be given several times; read and record if silent",
        )

    def handle(self, *args: Any, **options: Any) -> None:
        """Issue, print."""
        ready.check_tables()
        try:
            secret = token(
                slug=options["commons"],
                member=options["member"],
                device=options["device"],
                scopes=options["scope"] or [identity.READ, identity.RECORD],
            )
        except LedgerError as error:
            raise CommandError(str(error)) from error
        self.stdout.write(secret)


def token(*, slug: str, member: int, device: str, scopes: list[str]) -> str:
    """Issue a token for a member's device and return its secret.

    :raises ledger.commons.queries.UnknownCommons: if there is no such commons.
    :raises ledger.commons.operations.UnknownMember: if nobody has the number.
    :raises ledger.identity.operations.UnusableDevice: if the device cannot have the name.
    """
    kept = commons.commons_named(slug=slug)
    with transaction.atomic():
        commons_operations.check_member(commons_id=kept.commons_id, member=member)
        if accounts.seat_of_member(commons_id=kept.commons_id, member=member) is None:
            identity.open_account(
                username=f"{slug}.{member}",
                commons_id=kept.commons_id,
                member=member,
                clock=system_clock,
                chance=system_chance,
            )
        return identity.issue_token(
            commons_id=kept.commons_id,
            member=member,
            device=device,
            scopes=scopes,
            clock=system_clock,
            chance=system_chance,
        )
