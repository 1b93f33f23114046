"""Withdrawals, contributions and dues as recorded."""

from collections.abc import Collection, Mapping
from dataclasses import dataclass
from datetime import date
from typing import ClassVar

from governance import facts
from governance.periods import DateRange
from ledger.commons import queries as commons
from ledger.foundation.errors import LedgerError
from ledger.journal import queries as journal
from ledger.journal.leaves import Row
from ledger.movements import columns
from ledger.seasons import queries as seasons

WITHDRAWAL = "withdrawal"
WORK = "work_given"
MONEY_INSTEAD = "money_given_instead"
ASSESSMENT = "duties_assessed"
DUE_CHARGED = "due_charged"
DUE_PAID = "due_paid"
GIVEN_BACK = "given_back"

# Dues are kept apart by what they are for: a fine is never mixed with what is given back.
FINE = "fine"
DUE_KINDS = (FINE,)


class UnknownSlip(LedgerError):
    """No entry that stands carries this slip number."""

    code: ClassVar[str] = "movements.unknown_slip"
    message: ClassVar[str] = "Found the slip {found!r}; accepted are slips that stand recorded."


@dataclass(frozen=True, slots=True, kw_only=True)
class DutyStanding:
    """What a member was assessed in a duty, gave, paid instead and still owes, in minutes."""

    assessed: int
    worked: int
    paid_instead: int
    owed: int

    def plus(self, other: "DutyStanding") -> "DutyStanding":
        """Return two duties added up."""
        return DutyStanding(
            assessed=self.assessed + other.assessed,
            worked=self.worked + other.worked,
            paid_instead=self.paid_instead + other.paid_instead,
            owed=self.owed + other.owed,
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class DueStanding:
    """What a member was charged, has paid and still owes, in the smallest coin."""

    charged: int
    paid: int
    owed: int


def duty_account(*, clause: str, first: date, member: int) -> str:
    """Name the account of the minutes that a member still owes in the season that begins then."""
    return f"duty:{clause}:{first.isoformat()}:{member}"


def worked_account(*, clause: str, first: date, member: int) -> str:
    """Name the account of the minutes that a member worked."""
    return f"duty_worked:{clause}:{first.isoformat()}:{member}"


def bought_account(*, clause: str, first: date, member: int) -> str:
    """Name the account of the minutes that a member gave money for."""
    return f"duty_bought:{clause}:{first.isoformat()}:{member}"


def due_account(*, kind: str, member: int) -> str:
    """Name the account of the money that a member owes."""
    return f"due:{kind}:{member}"


def paid_account(*, kind: str, member: int) -> str:
    """Name the account of the money that a member has paid."""
    return f"paid:{kind}:{member}"


def rows(
    *,
    commons_id: int,
    kinds: Collection[str],
    during: DateRange,
    up_to: int | None = None,
    members: Collection[int] | None = None,
) -> list[Row]:
    """Return the standing entries of some kinds whose day lies in a range."""
    return journal.rows(
        commons_id=commons_id,
        kinds=kinds,
        up_to=up_to,
        subjects=members,
        first_day=during.first,
        until_day=during.until,
    )


def withdrawals(
    *,
    commons_id: int,
    during: DateRange,
    up_to: int | None = None,
    members: Collection[int] | None = None,
) -> tuple[facts.Withdrawals, ...]:
    """Return the takes of every resource in a range of days, as columns."""
    found = rows(
        commons_id=commons_id, kinds=(WITHDRAWAL,), during=during, up_to=up_to, members=members
    )
    return tuple(
        columns.withdrawals(rows=found, resource=resource.code, base=resource.base)
        for resource in commons.resources(commons_id=commons_id).values()
    )


def work(
    *,
    commons_id: int,
    during: DateRange,
    up_to: int | None = None,
    members: Collection[int] | None = None,
) -> facts.Contributions:
    """Return the work given in a range of days, in minutes."""
    found = rows(commons_id=commons_id, kinds=(WORK,), during=during, up_to=up_to, members=members)
    return columns.contributions(
        rows=found, kind="work", base="min", amount_of=lambda given: int(given["minutes"])
    )


def money_instead(
    *,
    commons_id: int,
    during: DateRange,
    up_to: int | None = None,
    members: Collection[int] | None = None,
) -> facts.Contributions:
    """Return the money given instead of work in a range of days, in the smallest coin."""
    found = rows(
        commons_id=commons_id, kinds=(MONEY_INSTEAD,), during=during, up_to=up_to, members=members
    )
    money = commons.commons(commons_id=commons_id).money
    return columns.contributions(
        rows=found, kind="money", base=money, amount_of=lambda given: int(given["amount"])
    )


def left_on(*, commons_id: int, member: int, resource: str, day: date) -> int | None:
    """Return what a member may still take, in base units, of the season that a day lies in.

    Below zero when overdrawn; None if no open season of the resource holds the day.
    """
    opened = seasons.seasons(commons_id=commons_id)
    season = seasons.holding(opened=opened, resource=resource, day=day)
    if season is None or season.closed:
        return None
    return journal.balance(
        commons_id=commons_id,
        account=seasons.left_account(season=season.code, member=member),
        resource=resource,
        unit=commons.resource(commons_id=commons_id, code=resource).base,
    )


def entry_of_slip(*, commons_id: int, slip: str) -> int:
    """Return the number of the standing entry that a slip was recorded by.

    :raises UnknownSlip: if there is none.
    """
    for row in journal.rows(commons_id=commons_id, kinds=(WITHDRAWAL,)):
        if row.facts["slip"] == slip:
            return row.number
    raise UnknownSlip(found=slip)


def duties(*, commons_id: int, clause: str, first: date) -> Mapping[int, DutyStanding]:
    """Return where each member stands in a duty of the season that begins on a day."""
    window = f"{clause}:{first.isoformat()}"
    parts = {
        name: _by_member(commons_id, f"{name}:{window}:")
        for name in ("duty", "duty_worked", "duty_bought")
    }
    return {
        member: DutyStanding(
            assessed=owed
            + parts["duty_worked"].get(member, 0)
            + parts["duty_bought"].get(member, 0),
            worked=parts["duty_worked"].get(member, 0),
            paid_instead=parts["duty_bought"].get(member, 0),
            owed=owed,
        )
        for member, owed in sorted(parts["duty"].items())
    }


def dues(*, commons_id: int, kind: str) -> Mapping[int, DueStanding]:
    """Return where each member who was ever charged stands in dues of a kind."""
    owed = _by_member(commons_id, f"due:{kind}:")
    paid = _by_member(commons_id, f"paid:{kind}:")
    return {
        member: DueStanding(
            charged=amount + paid.get(member, 0), paid=paid.get(member, 0), owed=amount
        )
        for member, amount in sorted(owed.items())
    }


def duty_season(*, commons_id: int, day: date) -> DateRange | None:
    """Return the season window that work on a day counts for.

    That is the last window begun by then; before the first, the first.
    """
    windows = sorted({each.during for each in seasons.seasons(commons_id=commons_id).values()})
    begun = [window for window in windows if window.first <= day]
    return begun[-1] if begun else next(iter(windows), None)


def _by_member(commons_id: int, prefix: str) -> dict[int, int]:
    found = journal.balances(commons_id=commons_id, prefix=prefix)
    return {int(account.rsplit(":", 1)[1]): amount for (account, _, _), amount in found.items()}
