"""Seasons, allowables and closes, held against the entries that they stand beside."""

from collections.abc import Iterator
from datetime import date

from ledger.journal import comparing
from ledger.journal.comparing import Row
from ledger.journal.leaves import EntryRecord
from ledger.journal.verification import Problem
from ledger.seasons import models

_KINDS = ("season_opened", "allowable_adopted", "season_closed")


def problems(*, commons_id: int) -> tuple[Problem, ...]:
    """Return where seasons, allowables and closes are not as their entries say.

    :raises ledger.journal.queries.JournalNotOpen: if the commons has no journal.
    """
    return comparing.against_entries(
        commons_id=commons_id, kinds=_KINDS, kept=lambda: _kept(commons_id), told=_told
    )


def _kept(commons_id: int) -> Iterator[Row]:
    for season in models.Season.objects.filter(commons_id=commons_id):
        yield _season(
            season.entry_number,
            season=season.code,
            resource=season.resource,
            first=season.first_day,
            until=season.until_day,
        )
    for allowable in models.Allowable.objects.filter(commons_id=commons_id):
        yield _allowable(
            allowable.entry_number,
            season=allowable.season,
            amount=allowable.amount,
            reserve=allowable.reserve,
        )
    for close in models.Close.objects.filter(commons_id=commons_id):
        yield _close(close.entry_number, season=close.season)


def _told(entry: EntryRecord) -> Iterator[Row]:
    facts = entry.facts
    match entry.kind:
        case "season_opened":
            yield _season(
                entry.number,
                season=facts["season"],
                resource=facts["resource"],
                first=date.fromisoformat(facts["from"]),
                until=date.fromisoformat(facts["until"]),
            )
        case "allowable_adopted":
            yield _allowable(
                entry.number,
                season=facts["season"],
                amount=facts["amount"],
                reserve=facts["reserve"],
            )
        case _:
            yield _close(entry.number, season=facts["season"])


def _season(entry: int, *, season: str, resource: str, first: date, until: date) -> Row:
    fields = {"code": season, "resource": resource, "first day": first, "until": until}
    return Row(table="seasons", entry=entry, name="the season", fields=fields)


def _allowable(entry: int, *, season: str, amount: int, reserve: int) -> Row:
    fields = {"season": season, "amount": amount, "reserve": reserve}
    return Row(table="allowables", entry=entry, name="the allowable", fields=fields)


def _close(entry: int, *, season: str) -> Row:
    return Row(table="closes", entry=entry, name="the close", fields={"season": season})
