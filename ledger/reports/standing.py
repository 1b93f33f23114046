"""Where one member stands now, and why: read from balances, whatever the number of members."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date, datetime
from typing import ClassVar

from ledger.bylaws import queries as bylaws
from ledger.cases import queries as cases
from ledger.commons import queries as commons
from ledger.commons.queries import CommonsRecord, MemberRecord, OrderRecord
from ledger.foundation.errors import LedgerError
from ledger.journal import queries as journal
from ledger.judgement import queries as judgement
from ledger.movements import queries as movements
from ledger.reports import numbers
from ledger.seasons import queries as seasons
from ledger.seasons.queries import SeasonRecord


class NoSuchMember(LedgerError):
    """Nobody has the number."""

    code: ClassVar[str] = "reports.no_such_member"
    message: ClassVar[str] = "Found no member {found}."


@dataclass(frozen=True, slots=True, kw_only=True)
class SeasonStanding:
    """A member's part of a season that is not closed; amounts in base units.

    ``left`` is what may still be taken, below zero where more was taken than allotted. ``current``
    says that today lies in the season, ``ended`` that it lies before today.
    """

    season: str
    resource: str
    base: str
    unit: str
    first: date
    last: date
    current: bool
    ended: bool
    allotted: int
    taken: int
    left: int

    @property
    def sentence(self) -> str:
        """Return what a member wants to know first."""
        left = numbers.amount_with_unit(abs(self.left), base=self.base, unit=self.unit)
        allotted = numbers.amount_with_unit(self.allotted, base=self.base, unit=self.unit)
        window = f"{self.first} to {self.last}"
        if self.left < 0:
            return f"{left} of {self.resource} more was taken than the {allotted} of {window}."
        if self.ended:
            return f"The season of {window} has ended; {left} of {self.resource} was left untaken."
        if not self.current:
            return f"{left} of {self.resource} may be taken in the season of {window}."
        return f"{left} of {self.resource} may still be taken, of {allotted} for {window}."


@dataclass(frozen=True, slots=True, kw_only=True)
class DutyStanding:
    """Work that a clause asks of a member for a season, in minutes."""

    clause: str
    title: str
    first: date
    owed: int
    worked: int
    bought: int


@dataclass(frozen=True, slots=True, kw_only=True)
class DueStanding:
    """Money that a member was charged with, in the smallest coin."""

    kind: str
    owed: int
    paid: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Reason:
    """A finding that stands about a member's household, opened in words, and its open case."""

    finding: int
    clause: str
    entries: tuple[int, ...]
    lines: tuple[str, ...]
    case: int | None
    state: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Standing:
    """A member's position now: what is left, what is owed, what is open, and why."""

    member: MemberRecord
    as_of: date
    suspended_until: date | None
    orders: tuple[OrderRecord, ...]
    seasons: tuple[SeasonStanding, ...]
    duties: tuple[DutyStanding, ...]
    dues: tuple[DueStanding, ...]
    reasons: tuple[Reason, ...]


def standing(*, commons_id: int, member: int, now: datetime) -> Standing:
    """Return where a member stands at an instant.

    :raises NoSuchMember: if nobody has the number.
    """
    kept = commons.commons(commons_id=commons_id)
    found = commons.member(commons_id=commons_id, number=member)
    if found is None:
        raise NoSuchMember(found=member)
    today = kept.day_of(now)
    return Standing(
        member=found,
        as_of=today,
        suspended_until=commons.suspended_until(commons_id=commons_id, member=member, day=today),
        orders=tuple(
            order
            for order in commons.order_records(commons_id=commons_id)
            if order.first <= today < order.until
        ),
        seasons=tuple(_seasons(commons_id, member, today)),
        duties=tuple(_duties(commons_id, member, today)),
        dues=tuple(_dues(kept, member)),
        reasons=tuple(_reasons(commons_id, found)),
    )


def _seasons(commons_id: int, member: int, today: date) -> Iterator[SeasonStanding]:
    for season in seasons.seasons(commons_id=commons_id).values():
        if not season.closed:
            yield _season(commons_id, season, member, today)


def _season(commons_id: int, season: SeasonRecord, member: int, today: date) -> SeasonStanding:
    kept = commons.resource(commons_id=commons_id, code=season.resource)
    left, taken = (
        journal.balance(
            commons_id=commons_id,
            account=account(season=season.code, member=member),
            resource=season.resource,
            unit=kept.base,
        )
        for account in (seasons.left_account, seasons.taken_account)
    )
    return SeasonStanding(
        season=season.code,
        resource=season.resource,
        base=kept.base,
        unit=kept.unit,
        first=season.during.first,
        last=season.during.last,
        current=season.during.holds(today),
        ended=season.during.until <= today,
        allotted=left + taken,
        taken=taken,
        left=left,
    )


def _duties(commons_id: int, member: int, today: date) -> Iterator[DutyStanding]:
    window = movements.duty_season(commons_id=commons_id, day=today)
    if window is None:
        return
    for clause in bylaws.work_duties(commons_id=commons_id, day=window.first):
        owed, worked, bought = (
            journal.balance(
                commons_id=commons_id,
                account=account(clause=clause.head.id, first=window.first, member=member),
                resource="work",
                unit="min",
            )
            for account in (
                movements.duty_account,
                movements.worked_account,
                movements.bought_account,
            )
        )
        if owed or worked or bought:
            yield DutyStanding(
                clause=clause.head.id,
                title=clause.head.title,
                first=window.first,
                owed=owed,
                worked=worked,
                bought=bought,
            )


def _dues(kept: CommonsRecord, member: int) -> Iterator[DueStanding]:
    for kind in movements.DUE_KINDS:
        owed, paid = (
            journal.balance(
                commons_id=kept.commons_id,
                account=account(kind=kind, member=member),
                resource="money",
                unit=kept.money,
            )
            for account in (movements.due_account, movements.paid_account)
        )
        if owed or paid:
            yield DueStanding(kind=kind, owed=owed, paid=paid)


def _reasons(commons_id: int, member: MemberRecord) -> Iterator[Reason]:
    household = commons.household_of(commons_id=commons_id, household=member.household)
    found = judgement.standing_about(commons_id=commons_id, members=household)
    numbers_found = [record.number for record in found]
    open_cases = {
        case.finding.number: case
        for case in cases.cases(commons_id=commons_id, findings=numbers_found, is_open=True)
    }
    for record in found:
        case = open_cases.get(record.number)
        yield Reason(
            finding=record.number,
            clause=record.finding.key.clause,
            entries=record.finding.entries,
            lines=judgement.explained(commons_id=commons_id, number=record.number),
            case=None if case is None else case.number,
            state="" if case is None else str(case.so_far.state).replace("_", " "),
        )
