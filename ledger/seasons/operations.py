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
from ledger.journal.leaves import Posting, Receipt
from ledger.seasons import models, queries


class SeasonsOverlap(LedgerError):
    """A season shares days, or its name, with another of the same resource."""

    code: ClassVar[str] = "seasons.overlap"
    message: ClassVar[str] = "The season {found} overlaps {other}, which runs {first} to {last}."


class AllowableAlreadyAdopted(LedgerError):
    """The season has its allowable."""

    code: ClassVar[str] = "seasons.allowable_already_adopted"
    message: ClassVar[str] = "The season {season} has an allowable already, by entry {entry}."


class TooFewApprovals(LedgerError):
    """An allowable lacks the confirmations that the book asks for."""

    code: ClassVar[str] = "seasons.too_few_approvals"
    message: ClassVar[str] = (
        "Clause {clause} asks for {needed} approvals by the {body}; found {found} from members"
        " {members} who hold that office."
    )


class SeasonAlreadyClosed(LedgerError):
    """The season was closed before."""

    code: ClassVar[str] = "seasons.already_closed"
    message: ClassVar[str] = "The season {season} is closed already."


@transactions.required
def open_season(
    *, commons_id: int, code: str, resource: str, during: DateRange, closes_on: date, hand: Hand
) -> Receipt:
    """Open a season of a resource, and put its dated work into the outbox.

    The judge comes on its first day, the close on ``closes_on``, and the advice on the day that
    the quota clause in force on the season's first day names.

    :raises SeasonsOverlap: if it shares days or its code with another season of the resource.
    """
    opened = queries.seasons(commons_id=commons_id)
    for other in opened.values():
        clash = other.resource == resource and other.during.overlaps(during)
        if clash or other.code == code:
            raise SeasonsOverlap(
                found=code, other=other.code, first=other.during.first, last=other.during.last
            )
    commons_queries.resource(commons_id=commons_id, code=resource)
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
    season = queries.season(commons_id=commons_id, code=code)
    _schedule(commons_id=commons_id, season=season, closes_on=closes_on, hand=hand)
    return receipt


@transactions.required
def adopt_allowable(
    *, commons_id: int, season: str, amount: int, approved_by: Collection[int], hand: Hand
) -> Receipt:
    """Issue a season's allowable and split it into allotments, with what was carried or is owed.

    :param amount: base units of the resource.
    :param approved_by: the members who confirmed it.
    :raises AllowableAlreadyAdopted: if the season has one.
    :raises TooFewApprovals: if fewer hold the confirming office than the book asks for.
    """
    opened = queries.season(commons_id=commons_id, code=season)
    before = queries.allowable(commons_id=commons_id, season=season)
    if before is not None:
        raise AllowableAlreadyAdopted(season=season, entry=before.entry)
    first = opened.during.first
    quota = bylaws.quota(commons_id=commons_id, resource=opened.resource, day=first)
    _check_approvals(commons_id, quota, approved_by, hand)
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
            "approved_by": sorted(approved_by),
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

    :raises SeasonAlreadyClosed: if it was closed before.
    """
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


def _schedule(
    *, commons_id: int, season: queries.SeasonRecord, closes_on: date, hand: Hand
) -> None:
    during = season.during
    zone = commons_queries.commons(commons_id=commons_id).zone
    quota = bylaws.quota(commons_id=commons_id, resource=season.resource, day=during.first)
    window = {"first": during.first.isoformat(), "until": during.until.isoformat()}
    code = {"season": season.code}
    promised: tuple[tuple[str, str, date, Mapping[str, str]], ...] = (
        ("assess_duties", window["first"], during.first, window),
        ("judge", window["first"], during.first + timedelta(days=1), {}),
        ("close_season", season.code, closes_on, code),
        ("advise", season.code, during.first - timedelta(days=quota.review_days), code),
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


def _check_approvals(
    commons_id: int, quota: clauses.PoolTotal, approved_by: Collection[int], hand: Hand
) -> None:
    today = commons_queries.commons(commons_id=commons_id).day_of(hand.clock())
    office = commons_queries.holders_of(commons_id=commons_id, role=quota.confirm_by, day=today)
    valid = office & set(approved_by)
    if len(valid) < quota.approvals:
        raise TooFewApprovals(
            clause=quota.head.id,
            needed=quota.approvals,
            body=quota.confirm_by,
            found=len(valid),
            members=sorted(valid),
        )


def _carried(commons_id: int, season: queries.SeasonRecord) -> Iterator[tuple[str, int]]:
    """Yield the account lines that move what waited for this season into its allotments."""
    waiting = queries.carried(commons_id=commons_id, resource=season.resource)
    for member, amount in sorted(waiting.items()):
        account = queries.carried_account(resource=season.resource, member=member)
        yield account, -amount
        yield queries.left_account(season=season.code, member=member), amount
