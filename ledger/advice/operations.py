"""The making of an advice, kept with its inputs, seed and digest."""

import numpy as np

from governance.advice import making
from governance.advice.records import Advice
from governance.advice.request import Request
from ledger.advice import columns, models, queries
from ledger.bylaws import queries as bylaws
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.fieldwork import queries as fieldwork
from ledger.foundation import transactions
from ledger.foundation.hands import Hand
from ledger.journal import queries as journal
from ledger.seasons import queries as seasons


@transactions.required
def ring(*, commons_id: int, season: str, hand: Hand) -> str:
    """Make the advice for a season, if its allowable is not adopted yet; say what was done."""
    adopted = seasons.allowable(commons_id=commons_id, season=season)
    if adopted is not None:
        return f"no longer due: an allowable was adopted by entry {adopted.entry}"
    made = advise(commons_id=commons_id, season=season, hand=hand)
    return f"proposed {made.proposed} base units of {made.resource}"


@transactions.required
def advise(*, commons_id: int, season: str, hand: Hand) -> Advice:
    """Make the advice for a season from what is recorded, and seal its digest in an entry.

    The seed comes from the hand's chance and is recorded, so that anybody can make it again.

    :raises ledger.seasons.queries.UnknownSeason: if the season was not opened.
    :raises governance.errors.StintbookError: if the observations do not bear an advice.
    """
    opened = seasons.season(commons_id=commons_id, code=season)
    first = opened.during.first
    clause = bylaws.quota(commons_id=commons_id, resource=opened.resource, day=first)
    book = bylaws.in_force(commons_id=commons_id, day=first)
    seed = int.from_bytes(hand.chance(6), "big")
    size = journal.head(commons_id=commons_id).size
    request = Request(
        clause=clause,
        units=book.units_of(opened.resource),
        season=season,
        year=first.year,
        observations=fieldwork.observations(
            commons_id=commons_id, resource=opened.resource, up_to=size
        ),
        catches=queries.takes_by_year(commons_id=commons_id, resource=opened.resource, up_to=size),
        present=queries.present_allowable(commons_id=commons_id, before=opened),
        zones=queries.open_zones(commons_id=commons_id, season=opened, up_to=size),
        seed=seed,
        made_on=commons_queries.commons(commons_id=commons_id).day_of(hand.clock()),
    )
    advice = making.advise(request=request, generator=np.random.Generator(np.random.PCG64(seed)))
    kept = columns.plain(advice)
    digest = columns.digest(kept)
    receipt = commons.enter(
        commons_id=commons_id,
        kind="advice_made",
        facts={
            "season": season,
            "resource": opened.resource,
            "clause": clause.head.id,
            "edition": book.edition,
            "proposed": advice.proposed,
            "seed": seed,
            "known_up_to": size,
            "digest": digest,
        },
        hand=hand,
    )
    models.AdviceMade.objects.create(
        commons_id=commons_id,
        season=season,
        resource=opened.resource,
        seed=seed,
        known_up_to=size,
        result=kept,
        digest=digest,
        entry_number=receipt.number,
    )
    return advice
