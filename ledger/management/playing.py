"""Play a scenario: its slips, checks and acts, day by day, through the book's own operations."""

from collections.abc import Callable, Iterator
from datetime import date, datetime, time, timedelta
from functools import partial
from typing import assert_never
from zoneinfo import ZoneInfo

from django.db import transaction

from governance import periods
from governance.periods import OPEN_END, DateRange
from ledger.advice import queries as advice
from ledger.bylaws import operations as bylaws
from ledger.bylaws import queries as bylaws_queries
from ledger.commons import operations as commons
from ledger.fieldwork import operations as fieldwork
from ledger.foundation.clocks import Chance
from ledger.foundation.hands import Hand
from ledger.management import routine
from ledger.management import scenario_records as records
from ledger.management.stage import Play, SceneClock
from ledger.movements import operations as movements
from ledger.movements import queries as movements_queries
from ledger.seasons import operations as seasons

# The secretary's hour: what came in since the last time is entered then.
DESK = time(20, 0)
# When the next seasons are opened, and how long after the advice the board meets on it.
NEXT_OPENED = (12, 15)
ADOPTED_AFTER_DAYS = 11


def begin(*, scenario: records.Scenario, book: str, slug: str, chance: Chance) -> Play:
    """Found the scenario's commons, admit its members, and adopt its bylaw book."""
    founding = scenario.commons
    zone = ZoneInfo(founding.zone)
    clock = SceneClock(datetime.combine(founding.book_opened, time(10, 0), tzinfo=zone))
    secretary = next(each.member for each in founding.offices if each.role == "secretary")
    hand = Hand(by=secretary, clock=clock, chance=chance)
    with transaction.atomic():
        commons_id = commons.found(
            slug=slug,
            name=founding.name,
            zone=founding.zone,
            money=founding.money,
            resources=[_resource(founding, each) for each in founding.resources],
            is_demo=True,
            hand=hand,
        )
        commons.admit(
            commons_id=commons_id,
            admissions=[_admission(founding, member) for member in founding.members],
            hand=hand,
        )
        for office in founding.offices:
            commons.give_role(
                commons_id=commons_id,
                member=office.member,
                role=office.role,
                during=DateRange(first=founding.book_opened, until=OPEN_END),
                hand=hand,
            )
        bylaws.adopt(commons_id=commons_id, text=book, name="bylaws.yaml", hand=hand)
    play = Play(scenario=scenario, commons_id=commons_id, clock=clock, chance=chance, zone=zone)
    _open_first_seasons(play)
    return play


def play_on(*, play: Play) -> Iterator[date]:
    """Play day after day, from the opening of the book to the board's report, yielding each."""
    adopted_on = _adoption_day(play)
    during = DateRange(
        first=play.scenario.commons.book_opened + timedelta(days=1),
        until=adopted_on + timedelta(days=1),
    )
    for day in during.days():
        play.move_to(periods.start_of_day(day, zone=play.scenario.commons.zone))
        happenings = [*_fixed(play, day), *routine.happenings(play, day)]
        for instant, act in sorted(happenings, key=lambda happening: happening[0]):
            play.move_to(instant)
            with transaction.atomic():
                act()
            play.move_to(instant)
        yield day
    _adopt_next(play)


def _adoption_day(play: Play) -> date:
    """Return the day that the board meets on the advice for the last season of the scenario."""
    season = max(play.scenario.commons.seasons, key=lambda each: each.during.first)
    quota = bylaws_queries.quota(
        commons_id=play.commons_id, resource=season.resource, day=season.during.first
    )
    review = season.during.first - timedelta(days=quota.review_days)
    return review + timedelta(days=ADOPTED_AFTER_DAYS)


def _fixed(play: Play, day: date) -> Iterator[tuple[datetime, Callable[[], None]]]:
    """Yield what the scenario's own files say of a day."""
    for status in play.scenario.orders:
        if status.closed and play.day_of(status.received_at) == day:
            yield status.received_at, partial(_record_order, play, status)
    for act in play.scenario.acts:
        if play.day_of(act.at) == day:
            yield act.at, partial(_act, play, act)
    yield play.at(day, DESK), partial(_desk, play, day)
    if (day.month, day.day) == NEXT_OPENED:
        yield play.at(day, time(12, 0)), partial(_open_next_seasons, play)


def _desk(play: Play, day: date) -> None:
    """Enter the day's paper: slips in the order handed in, work, checks and readings."""
    hand, now = play.hand_of("secretary"), play.clock.now
    slips = [
        landing
        for landing in play.scenario.landings
        if landing.slip not in play.entered and landing.handed_in_at <= now
    ]
    if slips:
        movements.record_withdrawals(
            commons_id=play.commons_id, slips=[slip_of(play, each) for each in slips], hand=hand
        )
        play.entered.update(each.slip for each in slips)
    for work in play.scenario.work:
        if work.recorded_on == day:
            _record_work(play, work, hand)
    checks = [
        _inspection(play, each)
        for each in play.scenario.inspections
        if play.day_of(each.seen_at) == day
    ]
    if checks:
        fieldwork.record_inspections(commons_id=play.commons_id, inspections=checks, hand=hand)
    readings = list(_readings(play, day))
    if readings:
        fieldwork.record_observations(commons_id=play.commons_id, readings=readings, hand=hand)


def slip_of(play: Play, landing: records.Landing) -> movements.Slip:
    """Return a landing as the slip that the desk records."""
    unit = {each.code: each.unit for each in play.scenario.commons.resources}
    return movements.Slip(
        slip=str(landing.slip),
        member=landing.member,
        taken_at=landing.landed_at,
        handed_in=landing.handed_in_at,
        draw_point=landing.boat,
        lines=tuple(
            movements.Line(
                resource=take.resource,
                zone=take.ground,
                given=take.amount,
                unit=unit[take.resource],
            )
            for take in landing.takes
        ),
        note=landing.note,
    )


def _act(play: Play, act: records.Act) -> None:
    match act:
        case records.Correction():
            number = movements_queries.entry_of_slip(
                commons_id=play.commons_id, slip=str(act.landing.slip)
            )
            movements.correct_withdrawal(
                commons_id=play.commons_id,
                number=number,
                slip=slip_of(play, act.landing),
                reason=f"{act.why} {act.words}",
                hand=play.hand_of("secretary"),
            )
        case records.Payment():
            routine.pay(play, act.case, amount=play.coins(act.amount))
        case records.Answer() | records.SetAside() | records.Appeal() | records.AppealDecision():
            routine.act(play, act)
        case _:
            assert_never(act)


def _open_first_seasons(play: Play) -> None:
    board = play.holders("board")
    hand = play.hand_of("secretary")
    with transaction.atomic():
        for season in play.scenario.commons.seasons:
            if season.allowable is not None:
                _open(play, season, hand)
                seasons.adopt_allowable(
                    commons_id=play.commons_id,
                    season=season.code,
                    amount=play.base_amount(season.resource, season.allowable),
                    approved_by=board[:2],
                    hand=hand,
                )
        readings = [
            _history_reading(play, each)
            for each in play.scenario.history
            if each.observed_on <= play.scenario.commons.book_opened
        ]
        fieldwork.record_observations(
            commons_id=play.commons_id,
            readings=[reading for pair in readings for reading in pair],
            hand=hand,
        )


def _open_next_seasons(play: Play) -> None:
    for season in play.scenario.commons.seasons:
        if season.allowable is None:
            _open(play, season, play.hand_of("secretary"))


def _open(play: Play, season: records.Season, hand: Hand) -> None:
    seasons.open_season(
        commons_id=play.commons_id,
        code=season.code,
        resource=season.resource,
        during=season.during,
        closes_on=season.closes_on,
        hand=hand,
    )


def _adopt_next(play: Play) -> None:
    """Let the board adopt what was advised, with the approvals that the book asks for."""
    board = play.holders("board")
    for season in play.scenario.commons.seasons:
        made = advice.latest(commons_id=play.commons_id, season=season.code)
        if made is not None:
            with transaction.atomic():
                seasons.adopt_allowable(
                    commons_id=play.commons_id,
                    season=season.code,
                    amount=made.advice.proposed,
                    approved_by=board[:2],
                    hand=play.hand_of("board"),
                )


def _resource(founding: records.Commons, resource: records.Resource) -> commons.NewResource:
    return commons.NewResource(
        code=resource.code,
        name=resource.name,
        unit=resource.unit,
        base=resource.base,
        zones=tuple(
            (zone.code, zone.name) for zone in founding.zones if zone.resource == resource.code
        ),
    )


def _admission(founding: records.Commons, member: records.Member) -> commons.Admission:
    return commons.Admission(
        number=member.number,
        name=member.name,
        household=member.household,
        membership_class=member.membership_class,
        shares=tuple((share.resource, share.measure) for share in member.shares),
        draw_point=member.boat or "",
        admitted_on=founding.book_opened,
    )


def _record_order(play: Play, status: records.WaterStatus) -> None:
    commons.record_order(
        commons_id=play.commons_id,
        authority=status.authority,
        resource=status.resource,
        zones=status.grounds,
        during=DateRange(first=status.first, until=status.until or OPEN_END),
        notice=status.notice,
        hand=play.hand_of("secretary"),
    )


def _record_work(play: Play, work: records.Work, hand: Hand) -> None:
    duties = bylaws_queries.work_duties(commons_id=play.commons_id, day=work.recorded_on)
    clause = duties[0].head.id
    if work.minutes is not None:
        movements.record_work(
            commons_id=play.commons_id,
            member=work.member,
            clause=clause,
            day=work.done_on,
            minutes=work.minutes,
            task=work.task,
            hand=hand,
        )
    if work.paid is not None:
        movements.record_money_instead(
            commons_id=play.commons_id,
            member=work.member,
            clause=clause,
            day=work.done_on,
            amount=play.coins(work.paid),
            hand=hand,
        )


def _inspection(play: Play, check: records.Inspection) -> fieldwork.Inspection:
    unit = {each.code: each.unit for each in play.scenario.commons.resources}
    return fieldwork.Inspection(
        member=check.member,
        monitor=check.monitor,
        seen_at=check.seen_at,
        zone=check.ground,
        seen=tuple((each.resource, each.amount, unit[each.resource]) for each in check.seen),
        slip=str(check.slip),
        remark=check.remark,
    )


def _readings(play: Play, day: date) -> Iterator[fieldwork.Reading]:
    for year in play.scenario.history:
        if year.observed_on == day:
            yield from _history_reading(play, year)
    for ground in play.scenario.survey:
        if ground.surveyed_on == day:
            yield fieldwork.Reading(
                resource=ground.resource,
                kind="survey",
                year=day.year,
                value=ground.biomass_kg,
                unit="kg",
                observed_at=play.at(day, time(12, 0)),
                zone=ground.ground,
                error=ground.cv,
            )


def _history_reading(play: Play, year: records.HistoryYear) -> list[fieldwork.Reading]:
    observed_at = play.at(year.observed_on, time(12, 0))
    index = fieldwork.Reading(
        resource=year.resource,
        kind="index",
        year=year.year,
        value=year.index,
        unit="1",
        observed_at=observed_at,
    )
    if year.catch_t is None:
        return [index]
    catch = fieldwork.Reading(
        resource=year.resource,
        kind="catch",
        year=year.year,
        value=year.catch_t,
        unit="t",
        observed_at=observed_at,
    )
    return [catch, index]
