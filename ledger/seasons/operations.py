"""Opening a season, adopting its allowable, and splitting that into allotments."""

from collections.abc import Collection, Iterator, Mapping
from datetime import date, timedelta
from typing import ClassVar

from governance import periods
from governance.allocation import split as splitting
from governance.bylaws import clauses
from governance.periods import DateRange
from ledger.bylaws import queries as bylaws
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.foundation import outbox, transactions
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal.leaves import Posting, Receipt
from ledger.seasons import models, queries


class SeasonsOverlap(LedgerError):
    """A season shares days with another of the same resource."""

    code: ClassVar[str] = "seasons.overlap"
    message: ClassVar[str] = (
        "Found the season {found} on days of {other}; accepted are days before {first} or after"
        " {last}."
    )


class ClosesTooEarly(LedgerError):
    """A season is to close while it still runs."""

    code: ClassVar[str] = "seasons.closes_too_early"
    message: ClassVar[str] = (
        "Found {found} as the day on which {season} closes; accepted are {first} and later."
    )


class AllowableAlreadyAdopted(LedgerError):
    """The season has its allowable."""

    code: ClassVar[str] = "seasons.allowable_already_adopted"
    message: ClassVar[str] = (
        "Found another allowable for {season}; accepted is the one adopted by entry {entry}."
    )


class TooFewApprovals(LedgerError):
    """An allowable lacks the confirmations that the book asks for."""

    code: ClassVar[str] = "seasons.too_few_approvals"
    message: ClassVar[str] = (
        "Found {found} approvals by members who hold the office of the {body} today: {members};"
        " accepted are {needed} or more, by clause {clause}."
    )


class SeasonAlreadyClosed(LedgerError):
    """The season was closed before."""

    code: ClassVar[str] = "seasons.already_closed"
    message: ClassVar[str] = "Found the season {season} closed; accepted is one that is open."


@transactions.required
def open_season(
    *, commons_id: int, code: str, resource: str, during: DateRange, closes_on: date, hand: Hand
) -> Receipt:
    """Open a season of a resource, and put its dated work into the outbox.

    The judge comes on its first day, the close on ``closes_on``, and the advice on the day that
    the quota clause in force on the season's first day names.

    :raises ledger.commons.operations.UnusableCode: if the code holds other signs than a code may.
    :raises ledger.commons.operations.AlreadyKept: if a season has this code.
    :raises ledger.commons.queries.UnknownResource: if the resource is not kept.
    :raises SeasonsOverlap: if it shares days with another season of the resource.
    :raises ClosesTooEarly: if ``closes_on`` is not after its last day.
    :raises ledger.bylaws.queries.NoSuchClause: if no clause sets the resource's allowable.
    """
    journal.hold(commons_id=commons_id)
    commons.check_code(what="season", code=code, most=60)
    commons_queries.resource(commons_id=commons_id, code=resource)
    _check_days(commons_id, code, resource, during)
    if closes_on < during.until:
        raise ClosesTooEarly(found=closes_on, season=code, first=during.until)
    quota = bylaws.quota(commons_id=commons_id, resource=resource, day=during.first)
    receipt = commons.enter(
        commons_id=commons_id,
        kind="season_opened",
        facts={
            "season": code,
            "resource": resource,
            "from": during.first.isoformat(),
            "until": during.until.isoformat(),
        },
        hand=hand,
    )
    models.Season.objects.create(
        commons_id=commons_id,
        code=code,
        resource=resource,
        first_day=during.first,
        until_day=during.until,
        entry_number=receipt.number,
    )
    advised_on = during.first - timedelta(days=quota.review_days)
    _schedule(commons_id, code, during, closes_on=closes_on, advised_on=advised_on, hand=hand)
    return receipt


@transactions.required
def adopt_allowable(
    *, commons_id: int, season: str, amount: int, approved_by: Collection[int], hand: Hand
) -> Receipt:
    """Issue a season's allowable and split it into allotments, with what was carried or is owed.

    :param amount: base units of the resource.
    :param approved_by: the members who confirmed it; who does not hold the office is not counted.
    :raises ledger.seasons.queries.UnknownSeason: if the season was not opened.
    :raises AllowableAlreadyAdopted: if the season has one.
    :raises SeasonAlreadyClosed: if it was closed without one.
    :raises TooFewApprovals: if fewer hold the confirming office today than the book asks for.
    :raises ledger.bylaws.queries.NoSuchClause: if the book does not say how to split it.
    :raises governance.allocation.apportionment.NegativeTotal: if the amount lies below 0.
    :raises governance.allocation.apportionment.NobodyToHold: if nobody has a share.
    """
    journal.hold(commons_id=commons_id)
    opened = queries.season(commons_id=commons_id, code=season)
    before = queries.allowable(commons_id=commons_id, season=season)
    if before is not None:
        raise AllowableAlreadyAdopted(season=season, entry=before.entry)
    if opened.closed:
        raise SeasonAlreadyClosed(season=season)
    first = opened.during.first
    quota = bylaws.quota(commons_id=commons_id, resource=opened.resource, day=first)
    approvals = _approvals(commons_id, quota, approved_by, hand)
    allocation = bylaws.allocation(commons_id=commons_id, resource=opened.resource, day=first)
    split = splitting.split_allowable(
        clause=allocation,
        roster=commons_queries.roster(commons_id=commons_id),
        day=first,
        allowable=amount,
    )
    base = commons_queries.resource(commons_id=commons_id, code=opened.resource).base
    pool = queries.pool_account(season=season)
    lines = [
        (queries.source_account(resource=opened.resource), -amount),
        (pool, split.reserve),
        *(
            (queries.left_account(season=season, member=member), part)
            for member, part in sorted(split.parts.items())
        ),
        *_carried(commons_id, opened),
    ]
    receipt = commons.enter(
        commons_id=commons_id,
        kind="allowable_adopted",
        facts={
            "season": season,
            "quota_clause": quota.head.id,
            "allocation_clause": allocation.head.id,
            "amount": amount,
            "reserve": split.reserve,
            "approved_by": approvals,
        },
        postings=tuple(
            Posting(account=account, resource=opened.resource, unit=base, amount=part)
            for account, part in lines
            if part
        ),
        hand=hand,
    )
    models.Allowable.objects.create(
        commons_id=commons_id,
        season=season,
        amount=amount,
        reserve=split.reserve,
        entry_number=receipt.number,
    )
    return receipt


@transactions.required
def record_close(
    *, commons_id: int, season: str, postings: tuple[Posting, ...], hand: Hand
) -> Receipt:
    """Append the one close of a season with the postings that settle it.

    :raises ledger.seasons.queries.UnknownSeason: if the season was not opened.
    :raises SeasonAlreadyClosed: if it was closed before.
    """
    journal.hold(commons_id=commons_id)
    if queries.season(commons_id=commons_id, code=season).closed:
        raise SeasonAlreadyClosed(season=season)
    receipt = commons.enter(
        commons_id=commons_id,
        kind="season_closed",
        facts={"season": season},
        postings=postings,
        hand=hand,
    )
    models.Close.objects.create(commons_id=commons_id, season=season, entry_number=receipt.number)
    return receipt


def _check_days(commons_id: int, code: str, resource: str, during: DateRange) -> None:
    opened = queries.seasons(commons_id=commons_id)
    if code in opened:
        raise commons.AlreadyKept(what="season's code", found=f"the season {code}")
    for other in opened.values():
        if other.resource == resource and other.during.overlaps(during):
            raise SeasonsOverlap(
                found=code, other=other.code, first=other.during.first, last=other.during.last
            )


def _schedule(
    commons_id: int,
    code: str,
    during: DateRange,
    *,
    closes_on: date,
    advised_on: date,
    hand: Hand,
) -> None:
    zone = commons_queries.commons(commons_id=commons_id).zone
    window = {"first": during.first.isoformat(), "until": during.until.isoformat()}
    season = {"season": code}
    promised: tuple[tuple[str, str, date, Mapping[str, str]], ...] = (
        ("assess_duties", window["first"], during.first, window),
        ("judge", window["first"], during.first + timedelta(days=1), {}),
        ("close_season", code, closes_on, season),
        ("advise", code, advised_on, season),
    )
    for kind, key, day, payload in promised:
        outbox.enqueue(
            commons_id=commons_id,
            kind=kind,
            key=key,
            due_at=periods.start_of_day(day, zone=zone),
            payload=payload,
            clock=hand.clock,
        )


def _approvals(
    commons_id: int, quota: clauses.PoolTotal, approved_by: Collection[int], hand: Hand
) -> list[int]:
    """Return those of the members who hold the confirming office today."""
    today = commons_queries.commons(commons_id=commons_id).day_of(hand.clock())
    office = commons_queries.holders_of(commons_id=commons_id, role=quota.confirm_by, day=today)
    valid = sorted(office & set(approved_by))
    if len(valid) < quota.approvals:
        raise TooFewApprovals(
            clause=quota.head.id,
            needed=quota.approvals,
            body=quota.confirm_by,
            found=len(valid),
            members=", ".join(map(str, valid)) or "none",
        )
    return valid


def _carried(commons_id: int, season: queries.SeasonRecord) -> Iterator[tuple[str, int]]:
    """Yield the account lines that move what waited for this season into its allotments."""
    waiting = queries.carried(commons_id=commons_id, resource=season.resource)
    for member, amount in sorted(waiting.items()):
        account = queries.carried_account(resource=season.resource, member=member)
        yield account, -amount
        yield queries.left_account(season=season.code, member=member), amount
