"""What is known of seasons, allowables and allotments."""

from datetime import date

import pytest

from governance.periods import DateRange
from ledger.foundation.hands import Hand
from ledger.journal import queries as journal
from ledger.journal.leaves import Posting
from ledger.seasons import operations, queries
from tests.ledger import builders, checks

MULLET = "mullet-2026"


def _take(commons_id: int, hand: Hand, name: str, kilograms: str) -> int:
    slip = builders.slip(name, builders.line(kilograms=kilograms))
    (receipt,) = builders.land(commons_id=commons_id, hand=hand, slips=[slip])
    return receipt.number


def _close(commons_id: int, hand: Hand, *lines: tuple[str, int]) -> None:
    operations.record_close(
        commons_id=commons_id,
        season=MULLET,
        postings=tuple(
            Posting(account=account, resource="mullet", unit="g", amount=amount)
            for account, amount in lines
        ),
        hand=hand,
    )


def test_the_names_of_accounts() -> None:
    assert queries.source_account(resource="mullet") == "resource:mullet"
    assert queries.pool_account(season=MULLET) == "pool:mullet-2026"
    assert queries.left_account(season=MULLET, member=7) == "left:mullet-2026:7"
    assert queries.taken_account(season=MULLET, member=7) == "taken:mullet-2026:7"
    assert queries.carried_account(resource="mullet", member=7) == "carried:mullet:7"
    assert queries.off_season(resource="mullet") == "mullet.off-season"
    assert queries.after_close(season=MULLET) == "mullet-2026.after-close"


@pytest.mark.django_db
class TestSeasons:
    """Seasons by code, in order of days."""

    def test_in_order_with_what_is_closed(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand, during=builders.NEXT_SEASON)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        _close(commons_id, hand)
        found = queries.seasons(commons_id=commons_id)
        assert [(code, record.closed) for code, record in found.items()] == [
            ("clams-2026", False),
            (MULLET, True),
            ("clams-2027", False),
            ("mullet-2027", False),
        ]

    def test_unknown(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        with checks.refuses(queries.UnknownSeason, "'x'", "none yet"):
            queries.season(commons_id=commons_id, code="x")
        builders.open_seasons(commons_id=commons_id, hand=hand)
        with checks.refuses(queries.UnknownSeason, "'x'", "clams-2026, mullet-2026"):
            queries.pool(commons_id=commons_id, season="x")

    @pytest.mark.parametrize(
        ("resource", "day", "code"),
        [
            ("mullet", date(2026, 2, 28), None),
            ("mullet", date(2026, 3, 1), MULLET),
            ("clams", date(2026, 3, 1), "clams-2026"),
            ("mullet", date(2026, 6, 28), MULLET),
            ("mullet", date(2026, 6, 29), None),
            ("eels", date(2026, 3, 1), None),
        ],
    )
    def test_the_season_that_holds_a_day(
        self, resource: str, day: date, code: str | None, hand: Hand
    ) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        opened = queries.seasons(commons_id=commons_id)
        found = queries.holding(opened=opened, resource=resource, day=day)
        assert (found.code if found else None) == code

    def test_no_allowable_and_no_close_yet(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        assert queries.allowable(commons_id=commons_id, season=MULLET) is None
        assert queries.close_entry(commons_id=commons_id, season=MULLET) is None
        assert queries.allotments(commons_id=commons_id, season=MULLET) == {}
        assert queries.pool(commons_id=commons_id, season=MULLET) == 0


@pytest.mark.django_db
class TestAsKnownAt:
    """Left, taken and allotments, now and as known at an entry."""

    def test_takes_move_what_is_left_and_not_the_allotment(self, hand: Hand) -> None:
        commons_id = builders.opened(hand=hand)
        before = journal.head(commons_id=commons_id).size
        first = _take(commons_id, hand, "A1", "10.5")
        second = _take(commons_id, hand, "A2", "600")

        def known(up_to: int | None) -> tuple[int, int, int]:
            left = queries.left(commons_id=commons_id, season=MULLET, up_to=up_to)
            taken = queries.taken(commons_id=commons_id, season=MULLET, up_to=up_to)
            allotted = queries.allotments(commons_id=commons_id, season=MULLET, up_to=up_to)
            return left[1], taken.get(1, 0), allotted[1]

        assert known(before) == (588_000, 0, 588_000)
        assert known(first) == (577_500, 10_500, 588_000)
        assert known(second) == known(None) == (-22_500, 610_500, 588_000)

    def test_before_the_allowable_nothing_was_allotted(self, hand: Hand) -> None:
        commons_id = builders.opened(hand=hand)
        adopted = queries.allowable(commons_id=commons_id, season=MULLET)
        assert adopted is not None
        known = [
            queries.allotments(commons_id=commons_id, season=MULLET, up_to=up_to)
            for up_to in (adopted.entry - 1, adopted.entry)
        ]
        assert known == [{}, {1: 588_000, 2: 196_000, 3: 294_000}]

    def test_a_close_leaves_the_allotments_as_they_stood(self, hand: Hand) -> None:
        commons_id = builders.opened(hand=hand)
        _take(commons_id, hand, "A1", "500")
        _close(commons_id, hand, ("left:mullet-2026:1", -88_000), ("pool:mullet-2026", 88_000))
        allotted = {1: 588_000, 2: 196_000, 3: 294_000}
        assert queries.left(commons_id=commons_id, season=MULLET)[1] == 0
        assert queries.taken(commons_id=commons_id, season=MULLET) == {1: 500_000}
        assert queries.pool(commons_id=commons_id, season=MULLET) == 110_000
        assert queries.allotments(commons_id=commons_id, season=MULLET) == allotted
        size = journal.head(commons_id=commons_id).size
        for up_to in (size - 2, size - 1, size):
            found = queries.allotments(commons_id=commons_id, season=MULLET, up_to=up_to)
            assert found == allotted

    def test_a_season_whose_name_begins_another_is_not_mixed_up(self, hand: Hand) -> None:
        commons_id = builders.opened(hand=hand)
        operations.open_season(
            commons_id=commons_id,
            code="mullet-2026-autumn",
            resource="mullet",
            during=DateRange(first=date(2026, 9, 1), until=date(2026, 10, 1)),
            closes_on=date(2026, 10, 1),
            hand=hand,
        )
        operations.adopt_allowable(
            commons_id=commons_id,
            season="mullet-2026-autumn",
            amount=110,
            approved_by=builders.BOARD,
            hand=hand,
        )
        assert queries.left(commons_id=commons_id, season=MULLET)[1] == 588_000
        # 2 % of 110 is 2; the other 108 over 11/2 shares: 58.9, 19.6 and 29.5.
        assert queries.left(commons_id=commons_id, season="mullet-2026-autumn") == {
            1: 59,
            2: 20,
            3: 29,
        }
