"""From a published series to allotments: recorded, advised on the book's day, adopted, split.

South Atlantic albacore, 1967-1989, of Polacheck, Hilborn & Punt 1993 (CJFAS 50:2597-2607); their
estimates from memory, the optimum of the same likelihood computed.
"""

from datetime import UTC, datetime, timedelta

import pytest
from django.db import transaction

from ledger.advice import queries as advice
from ledger.fieldwork import operations as fieldwork
from ledger.foundation.clocks import Chance
from ledger.foundation.models import Job
from ledger.journal import queries as journal
from ledger.seasons import operations as seasons
from ledger.seasons import queries as seasons_queries
from ledger.tasks import draining
from tests.conftest import TickingClock
from tests.ledger import builders
from tests.ledger.advice import albacore

pytestmark = pytest.mark.django_db

THE_DAY = datetime(1990, 1, 15, tzinfo=UTC)


def test_from_the_series_to_allotments(ticking_clock: TickingClock, chance: Chance) -> None:
    ticking_clock.set(albacore.OPENED_AT)
    hand = builders.hand(clock=ticking_clock, chance=chance, by=1)
    commons_id = albacore.founded(hand=hand)
    albacore.observe(commons_id=commons_id, observed=albacore.readings(), hand=hand)
    albacore.open_season(commons_id=commons_id, hand=hand)

    ticking_clock.set(THE_DAY - timedelta(seconds=1))
    assert list(draining.drain(clock=ticking_clock, chance=chance)) == []
    ticking_clock.set(THE_DAY)
    (done,) = draining.drain(clock=ticking_clock, chance=chance)
    assert (done.job.kind, done.failed) == ("advise", False)

    made = advice.latest(commons_id=commons_id, season=albacore.CODE)
    assert made is not None
    estimates = {
        row.name: row.value for row in (*made.advice.estimates, *made.advice.reference_points)
    }
    assert estimates["r"] == pytest.approx(0.328, rel=0.05)
    assert estimates["K"] == pytest.approx(239_600, rel=0.03)
    assert estimates["MSY"] == pytest.approx(19_650, rel=0.02)
    assert estimates["B1990"] == pytest.approx(66_310, rel=1e-3)
    # 0.8 × 0.15986 × (66.310 - 48.673)/73.010 × 66.310 thousand tonnes, by hand at the optimum.
    assert made.advice.proposed == pytest.approx(2_048_600, rel=0.01)
    assert made.advice.risk is not None
    assert len(made.advice.risk.rows) == 30
    assert made.advice.made_on == albacore.ADVISED_ON
    sealed = journal.entry(commons_id=commons_id, number=made.entry)
    assert sealed.facts["digest"] == made.digest
    assert sealed.facts["proposed"] == made.advice.proposed

    with transaction.atomic():
        seasons.adopt_allowable(
            commons_id=commons_id,
            season=albacore.CODE,
            amount=made.advice.proposed,
            approved_by=albacore.BOARD,
            hand=hand,
        )
    allotted = seasons_queries.allotments(commons_id=commons_id, season=albacore.CODE)
    reserve = seasons_queries.pool(commons_id=commons_id, season=albacore.CODE)
    assert sum(allotted.values()) + reserve == made.advice.proposed
    # Two parts in a hundred stay in the pool; the rest is split 3 : 1 : 2, to the kilo.
    assert abs(reserve - 0.02 * made.advice.proposed) <= 1
    split = made.advice.proposed - reserve
    for member, parts in ((1, 3), (2, 1), (3, 2)):
        assert abs(allotted[member] - split * parts / 6) < 1


def test_with_one_approval_the_board_has_not_decided(
    ticking_clock: TickingClock, chance: Chance
) -> None:
    ticking_clock.set(albacore.OPENED_AT)
    hand = builders.hand(clock=ticking_clock, chance=chance, by=1)
    commons_id = albacore.founded(hand=hand)
    albacore.open_season(commons_id=commons_id, hand=hand)
    with pytest.raises(seasons.TooFewApprovals), transaction.atomic():
        seasons.adopt_allowable(
            commons_id=commons_id, season=albacore.CODE, amount=1, approved_by=[1], hand=hand
        )
    assert seasons_queries.allowable(commons_id=commons_id, season=albacore.CODE) is None


@pytest.mark.parametrize(
    ("observed", "words"),
    [
        (albacore.readings()[:8], "Found 4 years with an index; at least 5 are needed"),
        (albacore.readings(index=[40.0] * 23), "The index never moves"),
        (
            [each for each in albacore.readings() if each.kind == "catch"],
            "Found 0 years with an index",
        ),
        (
            [each for each in albacore.readings() if (each.kind, each.year) != ("catch", 1980)],
            "Found no catch for 1980",
        ),
    ],
    ids=["four years", "no contrast", "no index", "a catch missing"],
)
def test_what_bears_no_advice_fails_where_it_is_seen(
    observed: list[fieldwork.Reading],
    words: str,
    ticking_clock: TickingClock,
    chance: Chance,
) -> None:
    """And once the secretary has mended the series, the same job makes the advice."""
    ticking_clock.set(albacore.OPENED_AT)
    hand = builders.hand(clock=ticking_clock, chance=chance, by=1)
    commons_id = albacore.founded(hand=hand)
    albacore.observe(commons_id=commons_id, observed=observed, hand=hand)
    albacore.open_season(commons_id=commons_id, hand=hand)
    size = journal.head(commons_id=commons_id).size
    ticking_clock.set(THE_DAY)
    (done,) = draining.drain(clock=ticking_clock, chance=chance)
    assert done.failed
    job = Job.objects.get(commons_id=commons_id, kind="advise")
    assert words in job.last_error
    assert (job.attempts, job.done_at) == (1, None)
    assert advice.latest(commons_id=commons_id, season=albacore.CODE) is None
    assert journal.head(commons_id=commons_id).size == size

    albacore.observe(commons_id=commons_id, observed=albacore.readings(), hand=hand)
    ticking_clock.advance(hours=1)
    (done,) = draining.drain(clock=ticking_clock, chance=chance)
    assert not done.failed
    assert advice.latest(commons_id=commons_id, season=albacore.CODE) is not None
