"""The writers of withdrawals, contributions and dues: the checks of the trade, then one entry."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from datetime import UTC, date, datetime
from decimal import Decimal
from fractions import Fraction
from typing import ClassVar

from governance import quantities
from governance.bylaws import clauses
from governance.periods import DateRange
from ledger.bylaws import queries as bylaws
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.foundation import transactions
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal import queries as journal_queries
from ledger.journal.leaves import Draft, Fact, Posting, Receipt
from ledger.movements import queries
from ledger.seasons import queries as seasons

DESK = "desk"


class NothingTaken(LedgerError):
    """A slip names no amount above zero."""

    code: ClassVar[str] = "movements.nothing_taken"
    message: ClassVar[str] = "Slip {slip}: found {found}; accepted are amounts above zero."


class NotAWithdrawal(LedgerError):
    """An entry that is to be corrected is of another kind."""

    code: ClassVar[str] = "movements.not_a_withdrawal"
    message: ClassVar[str] = "Entry {number} is a {kind}; only a withdrawal is corrected here."


class NothingGiven(LedgerError):
    """A contribution or a payment is not above zero."""

    code: ClassVar[str] = "movements.nothing_given"
    message: ClassVar[str] = "Found {found}; accepted is an amount above zero."


class NotPayable(LedgerError):
    """Money is given for a duty that money cannot stand for."""

    code: ClassVar[str] = "movements.not_payable"
    message: ClassVar[str] = "Clause {clause} on {day} is no duty of work that can be paid off."


class NoSuchSeason(LedgerError):
    """Work is recorded before any season was opened."""

    code: ClassVar[str] = "movements.no_such_season"
    message: ClassVar[str] = "No season has been opened that work on {day} could count for."


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """One resource on a slip: the measure as given, with its UCUM unit."""

    resource: str
    zone: str
    given: Decimal
    unit: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Slip:
    """One landing slip: who took what, where and when, and when the slip was handed in."""

    slip: str
    member: int
    taken_at: datetime
    handed_in: datetime
    draw_point: str
    lines: tuple[Line, ...]
    note: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Kept:
    """What the checks of a batch look up, read once."""

    commons: commons_queries.CommonsRecord
    members: Mapping[int, commons_queries.MemberRecord]
    resources: Mapping[str, commons_queries.ResourceRecord]
    zones: Mapping[str, commons_queries.ZoneRecord]
    seasons: Mapping[str, seasons.SeasonRecord]


@transactions.required
def record_withdrawals(
    *, commons_id: int, slips: Sequence[Slip], hand: Hand
) -> tuple[Receipt, ...]:
    """Record slips in order, one entry each; what breaks a bylaw is recorded all the same.

    The same slip number twice adds nothing and returns the first receipt.

    :raises ledger.commons.operations.UnknownMember: if nobody has a slip's member number.
    :raises ledger.commons.queries.UnknownResource: if a resource is not kept.
    :raises ledger.commons.operations.UnknownZone: if a zone is not a part of its resource.
    :raises governance.quantities.UnitMismatch: if a unit cannot convert to the resource's base.
    :raises NothingTaken: if an amount is not above zero.
    """
    kept = _kept(commons_id)
    drafts = [_draft(kept, slip, key=slip.slip) for slip in slips]
    return _append(commons_id, drafts, hand)


@transactions.required
def correct_withdrawal(
    *, commons_id: int, number: int, slip: Slip, reason: str, hand: Hand
) -> tuple[Receipt, Receipt]:
    """Reverse a recorded slip and record it anew; both entries stay, with the reason.

    :raises NotAWithdrawal: if the entry is of another kind.
    :raises ledger.journal.operations.AlreadyReversed: if it was corrected before.
    """
    kind = journal_queries.entry(commons_id=commons_id, number=number).kind
    if kind != queries.WITHDRAWAL:
        raise NotAWithdrawal(number=number, kind=kind)
    kept = _kept(commons_id)
    now = hand.clock()
    undone = journal.reverse(
        commons_id=commons_id,
        number=number,
        reason=reason,
        by=hand.by,
        occurred_at=now,
        day=kept.commons.day_of(now),
        clock=hand.clock,
        chance=hand.chance,
    )
    (redone,) = _append(commons_id, [_draft(kept, slip, key=None)], hand)
    return undone, redone


@transactions.required
def assess_duties(
    *,
    commons_id: int,
    duties: Iterable[tuple[clauses.WorkDuty, int]],
    during: DateRange,
    hand: Hand,
) -> Receipt | None:
    """Charge the members with the minutes that each duty asks of them in a season.

    :param duties: each duty with the number of a member who owes it.
    """
    postings: list[Posting] = []
    for clause, member in duties:
        owed = quantities.rounded(clause.days * clause.day_minutes, quantities.Rounding.HALF_UP)
        account = queries.duty_account(clause=clause.head.id, first=during.first, member=member)
        source = f"duties:{clause.head.id}:{during.first.isoformat()}"
        postings += _moved(source, account, resource="work", unit="min", amount=owed)
    if not postings:
        return None
    facts = {"from": during.first.isoformat(), "until": during.until.isoformat()}
    return commons.enter(
        commons_id=commons_id,
        kind="duties_assessed",
        facts=facts,
        postings=tuple(postings),
        hand=hand,
    )


@transactions.required
def record_work(
    *, commons_id: int, member: int, clause: str, day: date, minutes: int, task: str, hand: Hand
) -> Receipt:
    """Record work that a member gave towards a duty.

    :raises NothingGiven: if the minutes are not above zero.
    :raises ledger.commons.operations.UnknownMember: if nobody has the number.
    :raises NoSuchSeason: if no season has been opened.
    """
    owed, given = _duty_accounts(commons_id, member, clause, day, "duty_worked")
    postings = _moved(owed, given, resource="work", unit="min", amount=_above_zero(minutes))
    facts: dict[str, Fact] = {"clause": clause, "minutes": minutes}
    return _contribute(commons_id, queries.WORK, member, day, facts, postings, {"task": task}, hand)


@transactions.required
def record_money_instead(
    *, commons_id: int, member: int, clause: str, day: date, amount: int, hand: Hand
) -> Receipt:
    """Record money, in the smallest coin, that a member gave instead of work.

    The clause in force on the day says how much work it stands for.

    :raises NothingGiven: if the amount is not above zero.
    :raises NotPayable: if no duty of this name can be paid off.
    :raises ledger.commons.operations.UnknownMember: if nobody has the number.
    :raises NoSuchSeason: if no season has been opened.
    """
    duties = bylaws.work_duties(commons_id=commons_id, day=day)
    duty = next((each for each in duties if each.head.id == clause), None)
    if duty is None or duty.instead is None:
        raise NotPayable(clause=clause, day=day)
    days = Fraction(_above_zero(amount)) / duty.instead.money.minor
    minutes = quantities.rounded(days * duty.day_minutes, quantities.Rounding.DOWN)
    owed, given = _duty_accounts(commons_id, member, clause, day, "duty_bought")
    money = commons_queries.commons(commons_id=commons_id).money
    paid = f"instead:{clause}:{member}"
    postings = [
        *_moved(owed, given, resource="work", unit="min", amount=minutes),
        *_moved(paid, "cash", resource="money", unit=money, amount=amount),
    ]
    facts: dict[str, Fact] = {"clause": clause, "amount": amount, "minutes": minutes}
    return _contribute(commons_id, queries.MONEY_INSTEAD, member, day, facts, postings, {}, hand)


@transactions.required
def charge_due(
    *, commons_id: int, member: int, kind: str, amount: int, case: int, hand: Hand
) -> Receipt:
    """Charge a member with a due that a decided case makes, in the smallest coin.

    :raises NothingGiven: if the amount is not above zero.
    """
    money = commons_queries.commons(commons_id=commons_id).money
    due = queries.due_account(kind=kind, member=member)
    return commons.enter(
        commons_id=commons_id,
        kind=queries.DUE_CHARGED,
        facts={"due": kind, "amount": amount, "case": case},
        subject=member,
        postings=_moved(
            f"charged:{kind}", due, resource="money", unit=money, amount=_above_zero(amount)
        ),
        hand=hand,
    )


@transactions.required
def pay_due(*, commons_id: int, member: int, kind: str, amount: int, hand: Hand) -> Receipt:
    """Record that a member paid a due, in the smallest coin.

    :raises NothingGiven: if the amount is not above zero.
    """
    money = commons_queries.commons(commons_id=commons_id).money
    due = queries.due_account(kind=kind, member=member)
    paid = f"paid:{kind}:{member}"
    return commons.enter(
        commons_id=commons_id,
        kind="due_paid",
        facts={"due": kind, "amount": amount},
        subject=member,
        postings=(
            *_moved(due, paid, resource="money", unit=money, amount=_above_zero(amount)),
            *_moved(f"received:{kind}", "cash", resource="money", unit=money, amount=amount),
        ),
        hand=hand,
    )


@transactions.required
def give_back(
    *, commons_id: int, member: int, season: str, amount: int, case: int, hand: Hand
) -> Receipt:
    """Move what a member took too much from the member's right back to all.

    Out of what is left of the season, or, once that is closed, out of the next one's allotment.

    :param amount: base units.
    """
    opened = seasons.season(commons_id=commons_id, code=season)
    resource = commons_queries.resource(commons_id=commons_id, code=opened.resource)
    if opened.closed:
        giving = seasons.carried_account(resource=resource.code, member=member)
        receiving = seasons.source_account(resource=resource.code)
    else:
        giving = seasons.left_account(season=season, member=member)
        receiving = seasons.pool_account(season=season)
    return commons.enter(
        commons_id=commons_id,
        kind=queries.GIVEN_BACK,
        facts={"season": season, "amount": amount, "case": case},
        subject=member,
        postings=_moved(
            giving, receiving, resource=resource.code, unit=resource.base, amount=amount
        ),
        hand=hand,
    )


def base_amount(*, given: Decimal, unit: str, base: str) -> int:
    """Return a measure as given in whole base units, rounded half up once.

    :raises governance.quantities.UnitMismatch: if the unit does not convert to the base.
    """
    exact = quantities.converted(Fraction(given), from_unit=unit, to_unit=base)
    return quantities.rounded(exact, quantities.Rounding.HALF_UP)


def _kept(commons_id: int) -> _Kept:
    return _Kept(
        commons=commons_queries.commons(commons_id=commons_id),
        members=commons_queries.members(commons_id=commons_id),
        resources=commons_queries.resources(commons_id=commons_id),
        zones=commons_queries.zones(commons_id=commons_id),
        seasons=seasons.seasons(commons_id=commons_id),
    )


def _draft(kept: _Kept, slip: Slip, *, key: str | None) -> Draft:
    if slip.member not in kept.members:
        raise commons.UnknownMember(found=slip.member)
    if not slip.lines:
        raise NothingTaken(slip=slip.slip, found="no line")
    day = kept.commons.day_of(slip.taken_at)
    lines: list[Fact] = []
    postings: list[Posting] = []
    for line in slip.lines:
        amount = _base_amount(kept, slip, line)
        lines.append(
            {
                "resource": line.resource,
                "zone": line.zone,
                "given": format(line.given, "f"),
                "unit": line.unit,
                "amount": amount,
            }
        )
        season = _season_code(kept, line.resource, day)
        postings += _moved(
            seasons.left_account(season=season, member=slip.member),
            seasons.taken_account(season=season, member=slip.member),
            resource=line.resource,
            unit=kept.resources[line.resource].base,
            amount=amount,
        )
    return Draft(
        kind=queries.WITHDRAWAL,
        occurred_at=slip.taken_at,
        day=day,
        subject=slip.member,
        facts={
            "slip": slip.slip,
            "draw_point": slip.draw_point,
            "handed_in": slip.handed_in.astimezone(UTC).isoformat(),
            "lines": lines,
        },
        postings=tuple(postings),
        texts={"note": slip.note} if slip.note else {},
        device=DESK,
        key=key,
    )


def _base_amount(kept: _Kept, slip: Slip, line: Line) -> int:
    if line.resource not in kept.resources:
        raise commons_queries.UnknownResource(
            found=line.resource, accepted=", ".join(kept.resources)
        )
    zone = kept.zones.get(line.zone)
    if zone is None or zone.resource != line.resource:
        raise commons.UnknownZone(
            found=line.zone,
            resource=line.resource,
            accepted=", ".join(
                each.code for each in kept.zones.values() if each.resource == line.resource
            ),
        )
    base = kept.resources[line.resource].base
    amount = base_amount(given=line.given, unit=line.unit, base=base)
    if amount <= 0:
        raise NothingTaken(slip=slip.slip, found=f"{line.given} {line.unit} of {line.resource}")
    return amount


def _season_code(kept: _Kept, resource: str, day: date) -> str:
    """Return the season, or the place beside the seasons, that a take on a day is posted to.

    What comes in after the close keeps its true day but is posted apart, so that a closed season's
    accounts stay as they were reported.
    """
    season = seasons.holding(opened=kept.seasons, resource=resource, day=day)
    if season is None:
        return f"{resource}-off-season"
    return f"{season.code}-after-close" if season.closed else season.code


def _duty_accounts(
    commons_id: int, member: int, clause: str, day: date, given: str
) -> tuple[str, str]:
    commons.check_member(commons_id=commons_id, member=member)
    window = queries.duty_season(commons_id=commons_id, day=day)
    if window is None:
        raise NoSuchSeason(day=day)
    owed = queries.duty_account(clause=clause, first=window.first, member=member)
    return owed, f"{given}:{clause}:{window.first.isoformat()}:{member}"


def _contribute(
    commons_id: int,
    kind: str,
    member: int,
    day: date,
    facts: Mapping[str, Fact],
    postings: Sequence[Posting],
    texts: Mapping[str, str],
    hand: Hand,
) -> Receipt:
    draft = Draft(
        kind=kind,
        occurred_at=hand.clock(),
        day=day,
        subject=member,
        facts=facts,
        postings=tuple(postings),
        texts=texts,
    )
    (receipt,) = _append(commons_id, [draft], hand)
    return receipt


def _append(commons_id: int, drafts: Sequence[Draft], hand: Hand) -> tuple[Receipt, ...]:
    return journal.append(
        commons_id=commons_id, drafts=drafts, by=hand.by, clock=hand.clock, chance=hand.chance
    )


def _moved(
    source: str, target: str, *, resource: str, unit: str, amount: int
) -> tuple[Posting, Posting]:
    return (
        Posting(account=source, resource=resource, unit=unit, amount=-amount),
        Posting(account=target, resource=resource, unit=unit, amount=amount),
    )


def _above_zero(amount: int) -> int:
    if amount <= 0:
        raise NothingGiven(found=amount)
    return amount
