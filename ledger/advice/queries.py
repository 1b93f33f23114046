"""The advice made for a season, and what it is made from."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from governance.advice.records import Advice
from ledger.advice import columns, models
from ledger.commons import queries as commons
from ledger.movements import queries as movements
from ledger.seasons import queries as seasons


@dataclass(frozen=True, slots=True, kw_only=True)
class AdviceRecord:
    """An advice, the entry that sealed its digest, and the last entry that it knew of."""

    advice: Advice
    digest: str
    known_up_to: int
    entry: int


def latest(*, commons_id: int, season: str) -> AdviceRecord | None:
    """Return the last advice made for a season, if one was."""
    row = (
        models.AdviceMade.objects.filter(commons_id=commons_id, season=season)
        .order_by("-entry_number")
        .first()
    )
    if row is None:
        return None
    return AdviceRecord(
        advice=columns.advice(row.result),
        digest=row.digest,
        known_up_to=row.known_up_to,
        entry=row.entry_number,
    )


def takes_by_year(*, commons_id: int, resource: str, up_to: int) -> Mapping[int, int]:
    """Return what the seasons of a resource took, in base units, by the year of their first day.

    As known up to an entry number. A closed season without a take counts as nought; an open one
    without a take says nothing yet.
    """
    totals: dict[int, int] = {}
    for season in seasons.seasons(commons_id=commons_id).values():
        if season.resource != resource:
            continue
        columns_of = movements.withdrawals(commons_id=commons_id, during=season.during, up_to=up_to)
        taken = next(each for each in columns_of if each.resource == resource)
        if len(taken) or season.closed:
            year = season.during.first.year
            totals[year] = totals.get(year, 0) + int(np.sum(taken.amount))
    return totals


def present_allowable(*, commons_id: int, before: seasons.SeasonRecord) -> int:
    """Return the allowable of the last season before one, in base units; nought if none had any."""
    earlier = [
        season
        for season in seasons.seasons(commons_id=commons_id).values()
        if season.resource == before.resource and season.during.first < before.during.first
    ]
    for season in reversed(earlier):
        adopted = seasons.allowable(commons_id=commons_id, season=season.code)
        if adopted is not None:
            return adopted.amount
    return 0


def open_zones(*, commons_id: int, season: seasons.SeasonRecord, up_to: int) -> frozenset[str]:
    """Return the zones of a season's resource that no order closes on its first day.

    As known up to an entry number.
    """
    mine = {
        zone.code
        for zone in commons.zones(commons_id=commons_id).values()
        if zone.resource == season.resource
    }
    closed = {
        zone
        for order in commons.orders(commons_id=commons_id, up_to=up_to)
        if order.resource == season.resource and order.during.holds(season.during.first)
        for zone in order.zones
    }
    return frozenset(mine - closed)
