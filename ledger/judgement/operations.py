"""The judge at work: findings appended where facts changed, and the close of a season."""

from collections.abc import Iterable, Mapping, Sequence
from datetime import date, timedelta
from typing import ClassVar

from governance import periods
from governance.allocation import settlement
from governance.bylaws import clauses
from governance.compliance import reach
from governance.compliance.findings import Finding, Key
from governance.periods import DateRange
from ledger.bylaws import queries as bylaws
from ledger.commons import queries as commons
from ledger.foundation import outbox, transactions
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal import queries as journal_queries
from ledger.journal.leaves import Posting, Receipt
from ledger.judgement import columns, models, queries
from ledger.movements import operations as movements
from ledger.movements import queries as movements_queries
from ledger.seasons import operations as seasons
from ledger.seasons import queries as seasons_queries
from ledger.seasons.queries import SeasonRecord

# A fact of these kinds can touch any member; a fact about one member touches that household.
TOUCHING_ALL = frozenset(
    {"edition_adopted", "outside_order", "allowable_adopted", "season_opened", "duties_assessed"}
)


# Acts carry a day of their own, which may lie ahead of the judge when they are recorded.
ACTS = (movements_queries.WITHDRAWAL, movements_queries.WORK, movements_queries.MONEY_INSTEAD)


class SeasonNotJudged(LedgerError):
    """A season is to be closed before the judge has read every entry."""

    code: ClassVar[str] = "judgement.season_not_judged"
    message: ClassVar[str] = (
        "The season {season} cannot close: the judge has read up to entry {judged} of {size}."
    )


class SeasonNotOver(LedgerError):
    """A season is to be closed before its last day is over."""

    code: ClassVar[str] = "judgement.season_not_over"
    message: ClassVar[str] = "The season {season} cannot close on {day}: its last day is {last}."


@transactions.required
def judge(*, commons_id: int, as_of: date, hand: Hand) -> int:
    """Judge the open seasons as of a day, append what changed, and return how many findings did.

    Only the members that something new can touch are judged again, unless an entry touches all or
    a season ended since the last time. What was found in a closed season stays as it is. The
    judge never goes back to an earlier day than the last. The cases hear of the changes through
    the outbox.
    """
    cursor, _ = models.Cursor.objects.select_for_update().get_or_create(commons_id=commons_id)
    as_of = max(as_of, cursor.judged_on or as_of)
    size = journal_queries.head(commons_id=commons_id).size
    opened = seasons_queries.seasons(commons_id=commons_id)
    windows = _windows(opened, as_of=as_of)
    members = _touched(cursor=cursor, windows=windows, up_to=size, as_of=as_of)
    changes = _changed(
        commons_id=commons_id,
        windows=windows,
        opened=opened,
        members=members,
        up_to=size,
        as_of=as_of,
    )
    cursor.judged_up_to, cursor.judged_on = size, as_of
    cursor.save()
    if changes:
        outbox.enqueue(
            commons_id=commons_id,
            kind="hear_findings",
            key=f"{changes[0].finding}/{changes[0].version}",
            due_at=hand.clock(),
            payload={"findings": [change.finding for change in changes]},
            clock=hand.clock,
        )
    if windows:
        _call_again(commons_id=commons_id, as_of=as_of, hand=hand)
    return len(changes)


@transactions.required
def assess_duties(*, commons_id: int, during: DateRange, hand: Hand) -> Receipt | None:
    """Charge the members with the duties that the edition in force lays on them for a season."""
    book = bylaws.in_force(commons_id=commons_id, day=during.first)
    roster = commons.roster(commons_id=commons_id)
    owed = (
        (clause, member.number)
        for clause in book.clauses
        if isinstance(clause, clauses.WorkDuty)
        for member in roster.members
        if clause.head.who is None or member.is_in(clause.head.who, during.first)
    )
    return movements.assess_duties(commons_id=commons_id, duties=owed, during=during, hand=hand)


@transactions.required
def close_season(*, commons_id: int, season: str, hand: Hand) -> Receipt:
    """Judge what the judge has not read yet, then settle the season, under one lock on the head.

    :raises SeasonNotOver: if a day of the season is left.
    :raises ledger.seasons.operations.SeasonAlreadyClosed: if it was closed before.
    """
    journal.hold(commons_id=commons_id)
    until = seasons_queries.season(commons_id=commons_id, code=season).during.until
    today = commons.commons(commons_id=commons_id).day_of(hand.clock())
    # Duties of the season are judged as of the day after it, also when it closes on that day.
    as_of = max(today - timedelta(days=1), until) if today >= until else today
    judge(commons_id=commons_id, as_of=as_of, hand=hand)
    return settle_season(commons_id=commons_id, season=season, hand=hand)


@transactions.required
def ring_close(*, commons_id: int, season: str, hand: Hand) -> str:
    """Close a season on its day, if nobody closed it before; say what was done.

    :raises SeasonNotOver: if a day of the season is left.
    """
    journal.hold(commons_id=commons_id)
    if seasons_queries.season(commons_id=commons_id, code=season).closed:
        return "no longer due: the season is closed already"
    receipt = close_season(commons_id=commons_id, season=season, hand=hand)
    return f"closed by entry {receipt.number}"


@transactions.required
def settle_season(*, commons_id: int, season: str, hand: Hand) -> Receipt:
    """Close a season: carry over, note what is owed, return the rest to the pool; all or nothing.

    :raises SeasonNotOver: if a day of the season is left.
    :raises SeasonNotJudged: if the judge has not reached the head.
    :raises ledger.seasons.operations.SeasonAlreadyClosed: if it was closed before.
    """
    journal.hold(commons_id=commons_id)
    opened = seasons_queries.season(commons_id=commons_id, code=season)
    today = commons.commons(commons_id=commons_id).day_of(hand.clock())
    if today < opened.during.until:
        raise SeasonNotOver(season=season, day=today, last=opened.during.last)
    judged = queries.judged_up_to(commons_id=commons_id)
    size = journal_queries.head(commons_id=commons_id).size
    if judged < size:
        raise SeasonNotJudged(season=season, judged=judged, size=size)
    postings = tuple(_settling(commons_id=commons_id, season=opened))
    return seasons.record_close(commons_id=commons_id, season=season, postings=postings, hand=hand)


def _windows(opened: Mapping[str, SeasonRecord], *, as_of: date) -> tuple[DateRange, ...]:
    """Return the windows to judge: those of seasons begun and open, and all that overlap one.

    A closed season's duties are still judged beside an open one, for they are of no resource.
    """
    begun = {each.during for each in opened.values() if each.during.first <= as_of}
    is_open = {each.during for each in opened.values() if not each.closed} & begun
    return tuple(sorted(one for one in begun if any(one.overlaps(other) for other in is_open)))


def _touched(
    *, cursor: models.Cursor, windows: Sequence[DateRange], up_to: int, as_of: date
) -> frozenset[int] | None:
    """Return the members that something new can touch; None is everybody.

    New are the entries that the judge has not read, and acts that it read before their day came.
    """
    before, judged_on = cursor.judged_up_to, cursor.judged_on
    if judged_on is None or any(judged_on < each.until <= as_of for each in windows):
        return None
    pairs = journal_queries.kinds_and_subjects(
        commons_id=cursor.commons_id, after=before, up_to=up_to
    )
    if any(kind in TOUCHING_ALL for kind, _ in pairs):
        return None
    pairs |= journal_queries.kinds_and_subjects(
        commons_id=cursor.commons_id,
        up_to=before,
        kinds=ACTS,
        first_day=judged_on + timedelta(days=1),
        until_day=as_of + timedelta(days=1),
    )
    subjects = frozenset(subject for _, subject in pairs if subject is not None)
    if not subjects:
        return subjects
    return reach.touched(
        roster=commons.roster(commons_id=cursor.commons_id, up_to=up_to), members=subjects
    )


def _changed(
    *,
    commons_id: int,
    windows: Sequence[DateRange],
    opened: Mapping[str, SeasonRecord],
    members: frozenset[int] | None,
    up_to: int,
    as_of: date,
) -> list[models.FindingVersion]:
    """Append the versions of findings that are new, differ or are gone, and return them."""
    if not windows or members == frozenset():
        return []
    known = queries.latest(commons_id=commons_id, during=windows)
    found: dict[Key, Finding] = {}
    for window in windows:
        for each in queries.judged(
            commons_id=commons_id, during=window, as_of=as_of, up_to=up_to, members=members
        ):
            if _is_open(each.key, opened):
                found.setdefault(each.key, each)
    # A household is named after its first member, so that one look tells for both kinds.
    before = {
        key: record
        for key, record in known.items()
        if record.standing and (members is None or key.subject in members) and _is_open(key, opened)
    }
    changes = _changes(before=before, found=found)
    _number(changes, commons_id=commons_id, known=known, up_to=up_to, as_of=as_of)
    models.FindingVersion.objects.bulk_create(changes)
    return changes


def _is_open(key: Key, opened: Mapping[str, SeasonRecord]) -> bool:
    """Return whether a finding may still change: what it is about lies in no closed season."""
    if not key.resource:
        return True
    season = seasons_queries.holding(opened=opened, resource=key.resource, day=key.window.first)
    return season is not None and not season.closed


def _changes(
    *, before: Mapping[Key, queries.FindingRecord], found: Mapping[Key, Finding]
) -> list[models.FindingVersion]:
    """Return the new versions: findings that are new or differ, and those that are gone."""
    changed = [
        models.FindingVersion(standing=True, **columns.fields(finding))
        for key, finding in sorted(found.items())
        if key not in before or before[key].finding.inputs != finding.inputs
    ]
    gone = [
        models.FindingVersion(standing=False, **columns.fields(record.finding))
        for key, record in sorted(before.items())
        if key not in found
    ]
    return changed + gone


def _number(
    changes: Iterable[models.FindingVersion],
    *,
    commons_id: int,
    known: Mapping[Key, queries.FindingRecord],
    up_to: int,
    as_of: date,
) -> None:
    """Give each version its finding's number, its own, and what it was judged on."""
    last = queries.last_number(commons_id=commons_id)
    for change in changes:
        before = known.get(columns.finding(change).key)
        if before is None:
            last += 1
        change.commons_id = commons_id
        change.finding = last if before is None else before.number
        change.version = 1 if before is None else before.version + 1
        change.judged_up_to = up_to
        change.judged_on = as_of


def _call_again(*, commons_id: int, as_of: date, hand: Hand) -> None:
    """Promise the next day's judging."""
    tomorrow = as_of + timedelta(days=1)
    zone = commons.commons(commons_id=commons_id).zone
    outbox.enqueue(
        commons_id=commons_id,
        kind="judge",
        key=tomorrow.isoformat(),
        due_at=periods.start_of_day(tomorrow + timedelta(days=1), zone=zone),
        payload={},
        clock=hand.clock,
    )


def _settling(*, commons_id: int, season: SeasonRecord) -> Iterable[Posting]:
    """Yield the postings that bring every member's account of a season to zero."""
    base = commons.resource(commons_id=commons_id, code=season.resource).base
    book = bylaws.in_force(commons_id=commons_id, day=season.during.last)
    of_resource = [
        clause
        for clause in book.clauses
        if isinstance(clause, clauses.CarryOver | clauses.Payback)
        and clause.resource == season.resource
    ]
    carry_over = next((each for each in of_resource if isinstance(each, clauses.CarryOver)), None)
    payback = next((each for each in of_resource if isinstance(each, clauses.Payback)), None)
    taken = seasons_queries.taken(commons_id=commons_id, season=season.code)
    for member, left in seasons_queries.left(commons_id=commons_id, season=season.code).items():
        settled = settlement.settle(
            carry_over=carry_over,
            payback=payback,
            allotted=left + taken.get(member, 0),
            taken=taken.get(member, 0),
        )
        carried = settled.carried - settled.owed
        lines = (
            (seasons_queries.left_account(season=season.code, member=member), -left),
            (seasons_queries.carried_account(resource=season.resource, member=member), carried),
            (seasons_queries.pool_account(season=season.code), left - carried),
        )
        for account, amount in lines:
            if amount:
                yield Posting(account=account, resource=season.resource, unit=base, amount=amount)
