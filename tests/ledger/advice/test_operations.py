"""Advice kept with what it knew, its seed and its digest."""

import hashlib
import json
from datetime import UTC, date, datetime
from decimal import Decimal

import numpy as np
import pytest
from django.db import transaction

from governance.advice import making
from governance.advice.request import Request
from governance.periods import DateRange
from ledger.advice import models, operations, queries
from ledger.bylaws import queries as bylaws
from ledger.commons import operations as commons
from ledger.fieldwork import operations as fieldwork
from ledger.fieldwork import queries as observations
from ledger.foundation.clocks import Chance, seeded_chance
from ledger.foundation.hands import Hand
from ledger.journal import queries as journal
from ledger.judgement import operations as judgement
from ledger.seasons import queries as seasons
from tests.conftest import TickingClock
from tests.ledger import builders
from tests.ledger.advice import albacore

pytestmark = pytest.mark.django_db


@pytest.fixture
def writer(ticking_clock: TickingClock, chance: Chance) -> Hand:
    ticking_clock.set(albacore.OPENED_AT)
    return builders.hand(clock=ticking_clock, chance=chance, by=1)


@pytest.fixture
def commons_id(writer: Hand) -> int:
    made = albacore.founded(hand=writer)
    albacore.observe(commons_id=made, observed=albacore.readings(), hand=writer)
    albacore.open_season(commons_id=made, hand=writer)
    return made


def advise(commons_id: int, hand: Hand) -> queries.AdviceRecord:
    with transaction.atomic():
        operations.advise(commons_id=commons_id, season=albacore.CODE, hand=hand)
    made = queries.latest(commons_id=commons_id, season=albacore.CODE)
    assert made is not None
    return made


def test_what_is_kept_reads_back_the_same(commons_id: int, writer: Hand) -> None:
    with transaction.atomic():
        made = operations.advise(commons_id=commons_id, season=albacore.CODE, hand=writer)
    kept = queries.latest(commons_id=commons_id, season=albacore.CODE)
    assert kept is not None
    assert kept.advice == made


def test_the_entry_seals_the_digest_of_all_of_it(commons_id: int, writer: Hand) -> None:
    """SHA-256 of the JSON with sorted keys and no spaces."""
    before = journal.head(commons_id=commons_id).size
    made = advise(commons_id, writer)
    row = models.AdviceMade.objects.get(commons_id=commons_id)
    text = json.dumps(row.result, sort_keys=True, ensure_ascii=False, separators=(",", ":"))
    entry = journal.entry(commons_id=commons_id, number=made.entry)
    assert entry.kind == "advice_made"
    assert entry.facts["digest"] == hashlib.sha256(text.encode()).hexdigest() == made.digest
    assert entry.facts["clause"] == "quota.albacore"
    assert entry.facts["known_up_to"] == made.known_up_to == before


def test_anybody_can_make_it_again_from_seed_and_facts(commons_id: int, writer: Hand) -> None:
    made = advise(commons_id, writer)
    entry = journal.entry(commons_id=commons_id, number=made.entry)
    seed = entry.facts["seed"]
    book = bylaws.in_force(commons_id=commons_id, day=albacore.SEASON.first)
    request = Request(
        clause=bylaws.quota(commons_id=commons_id, resource="albacore", day=albacore.SEASON.first),
        units=book.units_of("albacore"),
        season=albacore.CODE,
        year=1990,
        observations=observations.observations(
            commons_id=commons_id, resource="albacore", up_to=made.known_up_to
        ),
        catches={},
        present=0,
        zones=frozenset({"sea"}),
        seed=seed,
        made_on=made.advice.made_on,
    )
    generator = np.random.Generator(np.random.PCG64(seed))
    assert making.advise(request=request, generator=generator) == made.advice


def test_the_seed_is_the_hands_chance(commons_id: int, writer: Hand) -> None:
    one = advise(commons_id, Hand(by=1, clock=writer.clock, chance=seeded_chance(8)))
    again = advise(commons_id, Hand(by=1, clock=writer.clock, chance=seeded_chance(8)))
    other = advise(commons_id, Hand(by=1, clock=writer.clock, chance=seeded_chance(9)))
    assert one.advice == again.advice
    assert one.advice.seed != other.advice.seed
    assert one.advice.proposed == other.advice.proposed


def test_the_last_advice_stands(commons_id: int, writer: Hand) -> None:
    first = advise(commons_id, writer)
    second = advise(commons_id, writer)
    assert second.entry > first.entry
    assert queries.latest(commons_id=commons_id, season="albacore-1991") is None


def test_a_season_that_was_not_opened_has_none(commons_id: int, writer: Hand) -> None:
    with pytest.raises(seasons.UnknownSeason), transaction.atomic():
        operations.advise(commons_id=commons_id, season="albacore-1991", hand=writer)


class TestFacts:
    """What the journal itself says of takes, allowables and open zones."""

    @pytest.fixture
    def bay(self, hand: Hand) -> int:
        return builders.opened(hand=hand)

    def test_takes_by_year_as_known(self, bay: int, hand: Hand) -> None:
        slips = [
            builders.slip("1", builders.line("clams", "10"), builders.line("mullet", "7")),
            builders.slip("2", builders.line("clams", "2.5"), member=3),
        ]
        first, second = builders.land(commons_id=bay, hand=hand, slips=slips)

        def takes(up_to: int) -> dict[int, int]:
            return dict(queries.takes_by_year(commons_id=bay, resource="clams", up_to=up_to))

        assert takes(second.number) == {2026: 12_500}
        assert takes(first.number) == {2026: 10_000}
        assert takes(first.number - 1) == {}

    def test_a_closed_season_without_a_take_took_nought(
        self, bay: int, hand: Hand, ticking_clock: TickingClock
    ) -> None:
        ticking_clock.set(datetime(2026, 7, 1, 12, tzinfo=UTC))
        with transaction.atomic():
            judgement.close_season(commons_id=bay, season="clams-2026", hand=hand)
        size = journal.head(commons_id=bay).size
        assert queries.takes_by_year(commons_id=bay, resource="clams", up_to=size) == {2026: 0}
        assert queries.takes_by_year(commons_id=bay, resource="mullet", up_to=size) == {}

    def test_the_present_allowable_is_the_last_one_adopted(self, bay: int, hand: Hand) -> None:
        builders.open_seasons(commons_id=bay, hand=hand, during=builders.NEXT_SEASON)
        opened = seasons.seasons(commons_id=bay)
        for code, amount in (
            ("mullet-2027", builders.MULLET_ALLOWABLE),
            ("clams-2027", builders.CLAMS_ALLOWABLE),
            ("mullet-2026", 0),
        ):
            assert queries.present_allowable(commons_id=bay, before=opened[code]) == amount

    def test_a_zone_that_an_order_closes_on_the_first_day_is_not_open(
        self, bay: int, hand: Hand
    ) -> None:
        before = journal.head(commons_id=bay).size
        for zone, until in (("mill_reach", date(2026, 3, 2)), ("pier_sand", date(2026, 3, 1))):
            with transaction.atomic():
                commons.record_order(
                    commons_id=bay,
                    authority="The water authority",
                    resource="clams",
                    zones=[zone],
                    during=DateRange(first=date(2026, 2, 1), until=until),
                    notice="",
                    hand=hand,
                )
        season = seasons.season(commons_id=bay, code="clams-2026")
        size = journal.head(commons_id=bay).size
        assert queries.open_zones(commons_id=bay, season=season, up_to=size) == {"pier_sand"}
        both = {"mill_reach", "pier_sand"}
        assert queries.open_zones(commons_id=bay, season=season, up_to=before) == both

    def test_clams_are_advised_by_their_survey(
        self, bay: int, hand: Hand, ticking_clock: TickingClock
    ) -> None:
        """15 % of 1,000 and 500 kg, on what 400 kg were allowed of before."""
        builders.open_seasons(commons_id=bay, hand=hand, during=builders.NEXT_SEASON)
        found = [
            fieldwork.Reading(
                resource="clams",
                kind="survey",
                year=2026,
                value=Decimal(kilograms),
                unit="kg",
                observed_at=ticking_clock.now,
                zone=zone,
            )
            for zone, kilograms in (("mill_reach", "1000"), ("pier_sand", "500"))
        ]
        albacore.observe(commons_id=bay, observed=found, hand=hand)
        with transaction.atomic():
            made = operations.advise(commons_id=bay, season="clams-2027", hand=hand)
        assert (made.proposed, made.present) == (225_000, 400_000)
