"""Figures of use: takes, zones, reporting, inspections, the advice and the next season."""

from collections import Counter
from collections.abc import Iterator, Mapping
from datetime import UTC, datetime
from fractions import Fraction
from statistics import median

import numpy as np

from governance import facts, periods
from governance.advice.records import Advice
from ledger.advice import queries as advice
from ledger.bylaws import queries as bylaws
from ledger.commons import queries as commons
from ledger.fieldwork import queries as fieldwork
from ledger.journal import queries as journal
from ledger.journal.leaves import Posting, Row
from ledger.movements import queries as movements
from ledger.reports import figures
from ledger.reports.details import NextHolding
from ledger.reports.reported import Reported
from ledger.seasons import queries as seasons

# A monitor's scales and the slip are taken to agree within a tenth of the slip.
AGREES_WITHIN = Fraction(1, 10)


def resources(reported: Reported) -> tuple[figures.ResourceFigures, ...]:
    """Return the use of each resource over its season."""
    takes = {
        columns.resource: columns
        for columns in movements.withdrawals(commons_id=reported.commons_id, during=reported.during)
    }
    return tuple(_resource(reported, season, takes[season.resource]) for season in reported.seasons)


def _resource(
    reported: Reported, season: seasons.SeasonRecord, takes: facts.Withdrawals
) -> figures.ResourceFigures:
    commons_id = reported.commons_id
    kept = commons.resource(commons_id=commons_id, code=season.resource)
    adopted = seasons.allowable(commons_id=commons_id, season=season.code)
    amount, reserve = (0, 0) if adopted is None else (adopted.amount, adopted.reserve)
    carried_in = sum(carried_into(commons_id, season).values())
    allotments = seasons.allotments(commons_id=commons_id, season=season.code)
    taken = int(np.sum(takes.amount))
    return figures.ResourceFigures(
        code=kept.code,
        name=kept.name,
        base=kept.base,
        unit=kept.unit,
        opens=season.during.first,
        closes=season.during.last,
        allowable=amount,
        reserve=reserve,
        allotted=amount - reserve,
        carried_in=carried_in,
        taken=taken,
        left=amount + carried_in - taken,
        slips=len(np.unique(takes.entry)),
        members_took=len(np.unique(takes.member)),
        members_entitled=sum(1 for allotted in allotments.values() if allotted > 0),
        daily=_daily(takes),
        allowable_steps=(figures.AllowableStep(from_day=season.during.first, amount=amount),),
        zones=_zones(commons_id, takes),
        settlement=_settlement(commons_id, season, taken=taken),
    )


def _daily(takes: facts.Withdrawals) -> tuple[figures.DayTake, ...]:
    days, places = np.unique(takes.day, return_inverse=True)
    totals = np.zeros(len(days), dtype=np.int64)
    np.add.at(totals, places, takes.amount)
    return tuple(
        figures.DayTake(day=periods.date_of(int(day)), amount=int(total))
        for day, total in zip(days, totals, strict=True)
    )


def _zones(commons_id: int, takes: facts.Withdrawals) -> tuple[figures.ZoneRow, ...]:
    names = commons.zones(commons_id=commons_id)
    rows = []
    for index, zone in enumerate(takes.zones):
        mine = takes.where(takes.zone == index)
        rows.append(
            figures.ZoneRow(
                zone=names[zone].name,
                slips=len(np.unique(mine.entry)),
                taken=int(np.sum(mine.amount)),
            )
        )
    return tuple(sorted(rows, key=lambda row: row.zone))


def carried_into(commons_id: int, season: seasons.SeasonRecord) -> Mapping[int, int]:
    """Return what was carried into a season, by member, in base units; below zero was owed."""
    prefix = seasons.carried_prefix(resource=season.resource)
    moved = _by_member(_adopting(commons_id, season), prefix)
    return {member: -amount for member, amount in moved.items()}


def allotted_in(commons_id: int, season: seasons.SeasonRecord) -> Mapping[int, int]:
    """Return each member's part of the allowable as adopted, without what was carried in."""
    carried = carried_into(commons_id, season)
    moved: Counter[str] = Counter()
    for posting in _adopting(commons_id, season):
        moved[posting.account] += posting.amount
    accounts = {
        member: seasons.left_account(season=season.code, member=member)
        for member in commons.members(commons_id=commons_id)
    }
    return {
        member: moved[account] - carried.get(member, 0)
        for member, account in accounts.items()
        if account in moved
    }


def _adopting(commons_id: int, season: seasons.SeasonRecord) -> tuple[Posting, ...]:
    """Return the postings of the entry that adopted a season's allowable; none before it."""
    adopted = seasons.allowable(commons_id=commons_id, season=season.code)
    if adopted is None:
        return ()
    return journal.entry(commons_id=commons_id, number=adopted.entry).postings


def _settled(commons_id: int, season: seasons.SeasonRecord) -> tuple[Posting, ...]:
    closing = seasons.close_entry(commons_id=commons_id, season=season.code)
    assert closing is not None, "a report is about closed seasons"
    return journal.entry(commons_id=commons_id, number=closing).postings


def moved_on(commons_id: int, season: seasons.SeasonRecord) -> Mapping[int, int]:
    """Return what the close moved on to each member's next season; below zero is owed."""
    prefix = seasons.carried_prefix(resource=season.resource)
    return _by_member(_settled(commons_id, season), prefix)


def _settlement(
    commons_id: int, season: seasons.SeasonRecord, *, taken: int
) -> figures.SettlementFigures:
    moved = moved_on(commons_id, season).values()
    allotments = seasons.allotments(commons_id=commons_id, season=season.code)
    had = sum(allotted_in(commons_id, season).values()) + sum(
        carried_into(commons_id, season).values()
    )
    at_close = sum(seasons.taken(commons_id=commons_id, season=season.code).values())
    return figures.SettlementFigures(
        given_back=had - sum(allotments.values()),
        carried=sum(amount for amount in moved if amount > 0),
        unclaimed=_sum_on(_settled(commons_id, season), seasons.pool_account(season=season.code)),
        owed=-sum(amount for amount in moved if amount < 0),
        after_close=taken - at_close,
    )


def _by_member(postings: tuple[Posting, ...], prefix: str) -> dict[int, int]:
    found: Counter[int] = Counter()
    for posting in postings:
        if posting.account.startswith(prefix):
            found[int(posting.account.removeprefix(prefix))] += posting.amount
    return dict(found)


def _sum_on(postings: tuple[Posting, ...], account: str) -> int:
    return sum(posting.amount for posting in postings if posting.account == account)


def _slips(reported: Reported) -> list[Row]:
    return movements.rows(
        commons_id=reported.commons_id, kinds=(movements.WITHDRAWAL,), during=reported.during
    )


def reporting(reported: Reported) -> figures.ReportingFigures:
    """Return how long after the landing the slips were handed in."""
    hours = [_hours_waited(row) for row in _slips(reported)]
    return figures.ReportingFigures(
        slips=len(hours),
        within_24=sum(1 for each in hours if each <= 24),
        within_48=sum(1 for each in hours if 24 < each <= 48),
        later=sum(1 for each in hours if each > 48),
        median_hours=median(hours) if hours else None,
    )


def _hours_waited(row: Row) -> Fraction:
    handed_in = datetime.fromisoformat(row.facts["handed_in"]).astimezone(UTC)
    waited = handed_in - row.occurred_at.astimezone(UTC)
    return Fraction(waited.days * 86_400 + waited.seconds, 3_600)


def inspections(reported: Reported) -> tuple[figures.InspectionRow, ...]:
    """Return how many slips the monitors checked, by class of member."""
    roster = commons.roster(commons_id=reported.commons_id)
    class_of = {
        member.number: held.value
        for member in roster.members
        for held in member.classes
        if held.during.holds(reported.during.first)
    }
    slips = {row.facts["slip"]: row for row in _slips(reported)}
    checks = fieldwork.inspections(commons_id=reported.commons_id, during=reported.during)
    checked = {check.slip for check in checks if check.slip in slips}
    differing = {
        check.slip for check in checks if check.slip in slips and _differs(check, slips[check.slip])
    }
    counts = {name: Counter[str]() for name in sorted(set(class_of.values()))}
    for slip, row in slips.items():
        assert row.subject is not None, "a slip is about a member"
        of_class = counts[class_of[row.subject]]
        of_class["slips"] += 1
        of_class["checked"] += slip in checked
        of_class["differences"] += slip in differing
    return tuple(
        figures.InspectionRow(
            member_class=name,
            slips=count["slips"],
            checked=count["checked"],
            differences=count["differences"],
        )
        for name, count in counts.items()
        if count["slips"]
    )


def _differs(check: fieldwork.InspectionRecord, slip: Row) -> bool:
    written = Counter[str]()
    for line in slip.facts["lines"]:
        written[line["resource"]] += line["amount"]
    return any(
        abs(amount - written[resource]) > AGREES_WITHIN * written[resource]
        for resource, amount in check.seen
    )


def advice_for_next(reported: Reported) -> tuple[Advice, ...]:
    """Return the advice made for the season after, for each resource that has one."""
    made = (
        advice.latest(commons_id=reported.commons_id, season=after.code)
        for _, after in next_seasons(reported)
    )
    return tuple(record.advice for record in made if record is not None)


def next_season(reported: Reported) -> tuple[figures.NextSeasonRow, ...]:
    """Return the season after of each resource, where its allowable is adopted."""
    commons_id = reported.commons_id
    rows = []
    for mine, after in next_seasons(reported):
        adopted = seasons.allowable(commons_id=commons_id, season=after.code)
        if adopted is None:
            continue
        quota = bylaws.quota(commons_id=commons_id, resource=after.resource, day=after.during.first)
        rows.append(
            figures.NextSeasonRow(
                resource=after.resource,
                opens=after.during.first,
                closes=after.during.last,
                adopted_by=quota.confirm_by,
                adopted_on=journal.entry(commons_id=commons_id, number=adopted.entry).day,
                allowable=adopted.amount,
                reserve=adopted.reserve,
                allotted=adopted.amount - adopted.reserve,
                holdings=_next_holdings(commons_id, mine, after),
            )
        )
    return tuple(rows)


def _next_holdings(
    commons_id: int, mine: seasons.SeasonRecord, after: seasons.SeasonRecord
) -> tuple[NextHolding, ...]:
    parts, brought = allotted_in(commons_id, after), carried_into(commons_id, after)
    moved = moved_on(commons_id, mine)
    members = commons.members(commons_id=commons_id)
    return tuple(
        NextHolding(
            member=number,
            household=members[number].household,
            allotment=parts.get(number, 0),
            carried_in=max(moved.get(number, 0), 0),
            owed=max(-moved.get(number, 0), 0),
            given_back=moved.get(number, 0) - brought.get(number, 0),
        )
        for number in sorted({*parts, *brought})
    )


def next_seasons(
    reported: Reported,
) -> Iterator[tuple[seasons.SeasonRecord, seasons.SeasonRecord]]:
    """Yield each season of the report that has one after it, with that."""
    opened = seasons.seasons(commons_id=reported.commons_id).values()
    for mine in reported.seasons:
        later = [
            season
            for season in opened
            if season.resource == mine.resource and season.during.first > mine.during.first
        ]
        if later:
            yield mine, min(later, key=lambda season: season.during.first)
