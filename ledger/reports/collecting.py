"""Fill the season report's record from what the slices keep; nothing is decided here."""

from datetime import date, datetime
from typing import ClassVar

from governance.bylaws import clauses
from governance.periods import DateRange
from ledger.bylaws import queries as bylaws
from ledger.commons import queries as commons
from ledger.fieldwork import queries as fieldwork
from ledger.foundation.errors import LedgerError
from ledger.journal import queries as journal
from ledger.reports import (
    case_figures,
    cautions,
    detail_figures,
    figures,
    giving_figures,
    use_figures,
)
from ledger.reports.figures import SeasonFigures
from ledger.reports.reported import Reported
from ledger.seasons import queries as seasons


class NoSuchSeason(LedgerError):
    """No season begins on the day that a report is asked for."""

    code: ClassVar[str] = "reports.no_such_season"
    message: ClassVar[str] = "No season begins on {found}; seasons begin on {accepted}."


class SeasonStillOpen(LedgerError):
    """A season report is asked for before the season was closed."""

    code: ClassVar[str] = "reports.season_still_open"
    message: ClassVar[str] = "The season {season} is not closed; its report is made after that."


def season_figures(*, commons_id: int, first: date, made_at: datetime) -> SeasonFigures:
    """Return the figures of the seasons that begin on a day, once all of them are closed.

    :raises NoSuchSeason: if none begins on it.
    :raises SeasonStillOpen: if one of them is not closed.
    """
    reported = _reported(commons_id, first)
    record = reported.commons
    return SeasonFigures(
        commons=record.name,
        is_demo=record.is_demo,
        season=str(reported.during.first.year),
        first=reported.during.first,
        made_at=made_at,
        zone=record.zone,
        proof=journal.proof_line(journal.head(commons_id=commons_id)),
        currency=record.money,
        edition=_edition(reported.book),
        resources=use_figures.resources(reported),
        names=detail_figures.names(reported),
        findings=case_figures.findings(reported),
        finding_details=detail_figures.findings(reported),
        cases=case_figures.cases_of(reported),
        case_details=detail_figures.cases_of(reported),
        dues=giving_figures.dues(reported),
        restitution=giving_figures.restitution(reported),
        duties=giving_figures.duties(reported),
        reporting=use_figures.reporting(reported),
        inspections=use_figures.inspections(reported),
        standings=giving_figures.standings(reported),
        orders=_orders(reported),
        observations=_observations(reported),
        advice=use_figures.advice_for_next(reported),
        next_season=use_figures.next_season(reported),
        cautions=cautions.CAUTIONS,
    )


def _reported(commons_id: int, first: date) -> Reported:
    opened = seasons.seasons(commons_id=commons_id).values()
    mine = tuple(season for season in opened if season.during.first == first)
    if not mine:
        begun = ", ".join(sorted({season.during.first.isoformat() for season in opened}))
        raise NoSuchSeason(found=first, accepted=begun or "none yet")
    for season in mine:
        if not season.closed:
            raise SeasonStillOpen(season=season.code)
    return Reported(
        commons=commons.commons(commons_id=commons_id),
        during=mine[0].during,
        seasons=mine,
        book=bylaws.in_force(commons_id=commons_id, day=first),
    )


def _edition(book: clauses.Book) -> figures.EditionFigures:
    return figures.EditionFigures(
        number=book.edition,
        in_force_from=book.in_force.first,
        adopted_by=book.adopted.by,
        adopted_on=book.adopted.on,
        votes_for=book.adopted.votes_for,
        votes_against=book.adopted.votes_against,
        votes_abstained=book.adopted.votes_abstained,
    )


def _orders(reported: Reported) -> tuple[figures.OrderRow, ...]:
    kept = {season.resource for season in reported.seasons}
    names = commons.zones(commons_id=reported.commons_id)
    return tuple(
        figures.OrderRow(
            authority=order.authority,
            resource=order.resource,
            zones=tuple(names[zone].name for zone in order.zones),
            from_day=order.first,
            until=None if order.until == date.max else order.until,
            reason=order.notice,
        )
        for order in commons.order_records(commons_id=reported.commons_id)
        if order.resource in kept
        and DateRange(first=order.first, until=order.until).overlaps(reported.during)
    )


def _observations(reported: Reported) -> tuple[figures.ObservationRow, ...]:
    """Return the readings of the season's year and later; earlier ones stand in the stock table."""
    names = commons.zones(commons_id=reported.commons_id)
    return tuple(
        figures.ObservationRow(
            resource=reading.resource,
            kind=reading.kind,
            zone=names[reading.zone].name if reading.zone else "",
            year=reading.year,
            value=reading.value,
            unit=reading.unit,
        )
        for season in reported.seasons
        for reading in fieldwork.observations(
            commons_id=reported.commons_id, resource=season.resource
        )
        if reading.year >= reported.during.first.year
    )
