"""Opening a season, adopting its allowable, splitting it, closing it."""

from collections.abc import Sequence
from datetime import UTC, date, datetime, timedelta
from fractions import Fraction
from typing import Any

import pytest
from django.db import transaction
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from governance.allocation import apportionment
from governance.bylaws import editions
from governance.errors import StintbookError
from governance.periods import OPEN_END, DateRange
from ledger.bylaws import queries as bylaws
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.foundation import outbox, transactions
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal import queries as journal_queries
from ledger.journal.leaves import Posting
from ledger.seasons import operations, queries
from tests.conftest import CommittingDatabase, TickingClock
from tests.ledger import builders, checks, waiting

MULLET = "mullet-2026"


def _days(first: date, last: date) -> DateRange:
    return DateRange(first=first, until=last + timedelta(days=1))


def _open(commons_id: int, hand: Hand, **changes: Any) -> None:
    values: dict[str, Any] = {
        "code": MULLET,
        "resource": "mullet",
        "during": builders.SEASON,
        "closes_on": date(2026, 7, 13),
    }
    operations.open_season(commons_id=commons_id, hand=hand, **(values | changes))


def _adopt(commons_id: int, hand: Hand, **changes: Any) -> None:
    values: dict[str, Any] = {"season": MULLET, "amount": 1_100_000, "approved_by": builders.BOARD}
    operations.adopt_allowable(commons_id=commons_id, hand=hand, **(values | changes))


def _grams(account: str, amount: int, *, resource: str = "mullet") -> Posting:
    return Posting(account=account, resource=resource, unit="g", amount=amount)


@pytest.mark.parametrize(
    "operation",
    [operations.open_season, operations.adopt_allowable, operations.record_close],
)
def test_outside_a_transaction_nothing_is_written(operation: Any) -> None:
    with pytest.raises(transactions.NoTransaction, match=operation.__name__):
        operation()


@pytest.mark.django_db
class TestOpenSeason:
    """A window of a resource, and the work that it promises."""

    def test_one_entry(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        with checks.appends(commons_id) as entries:
            _open(commons_id, hand)
        assert entries[0].kind == "season_opened"
        assert entries[0].facts == {
            "season": MULLET,
            "resource": "mullet",
            "from": "2026-03-01",
            "until": "2026-06-29",
        }
        assert queries.season(commons_id=commons_id, code=MULLET) == queries.SeasonRecord(
            code=MULLET, resource="mullet", during=builders.SEASON, closed=False
        )

    def test_its_work_is_promised_for_the_days_of_the_commons(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        _open(commons_id, hand)
        jobs = outbox.due(at=datetime(2030, 1, 1, tzinfo=UTC), commons_id=commons_id, limit=10)
        # 45 days before 1 March is 15 January; Ireland keeps summer time in July.
        assert [(job.kind, job.key, job.due_at) for job in jobs] == [
            ("advise", MULLET, datetime(2026, 1, 15, tzinfo=UTC)),
            ("assess_duties", "2026-03-01", datetime(2026, 3, 1, tzinfo=UTC)),
            ("judge", "2026-03-01", datetime(2026, 3, 2, tzinfo=UTC)),
            ("close_season", MULLET, datetime(2026, 7, 12, 23, tzinfo=UTC)),
        ]
        assert [dict(job.payload) for job in jobs] == [
            {"season": MULLET},
            {"first": "2026-03-01", "until": "2026-06-29"},
            {},
            {"season": MULLET},
        ]

    def test_a_second_resource_adds_only_its_own_work(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        jobs = outbox.due(at=datetime(2030, 1, 1, tzinfo=UTC), commons_id=commons_id, limit=20)
        assert sorted(job.kind for job in jobs) == [
            "advise",
            "advise",
            "assess_duties",
            "close_season",
            "close_season",
            "judge",
        ]

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            (
                {"code": MULLET, "during": builders.NEXT_SEASON},
                commons.AlreadyKept,
                (f"season {MULLET}", "once"),
            ),
            (
                {"code": MULLET, "resource": "clams", "during": builders.NEXT_SEASON},
                commons.AlreadyKept,
                (f"season {MULLET}", "once"),
            ),
            # left:a:b:7 would be an account of the season a as much as of the season a:b.
            ({"code": "mullet:2027"}, commons.UnusableCode, ("'mullet:2027'", "1 to 60")),
            ({"code": "mullet.off-season"}, commons.UnusableCode, ("'mullet.off", "1 to 60")),
            ({"code": ""}, commons.UnusableCode, ("''", "1 to 60")),
            ({"code": "s" * 61}, commons.UnusableCode, ("sss", "1 to 60")),
            (
                {"code": "eels-2027", "resource": "eels"},
                commons_queries.UnknownResource,
                ("'eels'", "clams, mullet"),
            ),
            (
                {"code": "more", "during": _days(date(2026, 6, 28), date(2026, 7, 20))},
                operations.SeasonsOverlap,
                ("more", MULLET, "before 2026-03-01", "after 2026-06-28"),
            ),
            (
                {"code": "within", "during": _days(date(2026, 4, 1), date(2026, 4, 1))},
                operations.SeasonsOverlap,
                ("within", MULLET, "before 2026-03-01", "after 2026-06-28"),
            ),
            (
                {
                    "code": "next",
                    "during": builders.NEXT_SEASON,
                    "closes_on": date(2027, 6, 28),
                },
                operations.ClosesTooEarly,
                ("2027-06-28", "next", "2027-06-29 and later"),
            ),
            (
                {"code": "last", "during": _days(date(2025, 3, 1), date(2025, 6, 28))},
                editions.NoEditionInForce,
                ("2025-03-01",),
            ),
        ],
    )
    def test_refused(
        self,
        changes: dict[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        hand: Hand,
    ) -> None:
        commons_id = builders.governed(hand=hand)
        _open(commons_id, hand)
        with checks.refuses(error, *words):
            _open(commons_id, hand, **({"closes_on": date(2027, 7, 13)} | changes))

    def test_a_resource_that_the_book_sets_no_allowable_for(self, hand: Hand) -> None:
        eels = commons.NewResource(code="eels", name="Eels", unit="kg", base="g", zones=())
        commons_id = builders.found(hand=hand, resources=(*builders.RESOURCES, eels))
        builders.adopt_book(commons_id=commons_id, hand=hand)
        with checks.refuses(bylaws.NoSuchClause, "pool_total", "eels"):
            _open(commons_id, hand, code="eels-2026", resource="eels")

    def test_the_next_may_begin_on_the_day_after_the_last(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        _open(commons_id, hand)
        after = _days(date(2026, 6, 29), date(2026, 6, 29))
        with checks.appends(commons_id):
            _open(commons_id, hand, code="one-day", during=after)


@pytest.mark.django_db
class TestAdoptAllowable:
    """The allowable is issued to the pool and allotted; the parts sum to it."""

    def test_one_entry_issues_and_allots(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        with checks.appends(commons_id) as entries:
            _adopt(commons_id, hand)
        (entry,) = entries
        assert entry.kind == "allowable_adopted"
        assert entry.facts == {
            "season": MULLET,
            "quota_clause": "quota.mullet",
            "allocation_clause": "2.1",
            "amount": 1_100_000,
            "reserve": 22_000,
            "approved_by": [1, 3],
        }
        # 2 % of 1,100 kg is 22; the other 1,078 over 3 + 1 + 3/2 shares is 196 for a share.
        assert checks.lines(entry) == [
            ("resource:mullet", "mullet", "g", -1_100_000),
            ("pool:mullet-2026", "mullet", "g", 22_000),
            ("left:mullet-2026:1", "mullet", "g", 588_000),
            ("left:mullet-2026:2", "mullet", "g", 196_000),
            ("left:mullet-2026:3", "mullet", "g", 294_000),
        ]
        assert queries.allowable(commons_id=commons_id, season=MULLET) == queries.AllowableRecord(
            season=MULLET, amount=1_100_000, reserve=22_000, entry=entry.number
        )

    def test_the_largest_remainder_gets_the_last_gram(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        _adopt(commons_id, hand, amount=101)
        # 2 % of 101 is 2, rounded down. 99 over 11/2 shares: 54, 18 and 27 exactly.
        assert queries.left(commons_id=commons_id, season=MULLET) == {1: 54, 2: 18, 3: 27}
        _adopt(commons_id, hand, season="clams-2026", amount=402)
        # 100.5, 100.5 and 201: of two equal halves the lower number gets the gram.
        assert queries.left(commons_id=commons_id, season="clams-2026") == {
            1: 101,
            2: 100,
            3: 201,
        }

    def test_nothing_may_be_allowed(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        with checks.appends(commons_id) as entries:
            _adopt(commons_id, hand, amount=0)
        assert entries[0].postings == ()
        adopted = queries.allowable(commons_id=commons_id, season=MULLET)
        assert adopted is not None
        assert (adopted.amount, adopted.reserve) == (0, 0)

    def test_who_is_admitted_after_the_first_day_gets_no_part(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        late = builders.admission(9, mullet=100, admitted_on=date(2026, 3, 2))
        commons.admit(commons_id=commons_id, admissions=[late], hand=hand)
        _adopt(commons_id, hand)
        assert 9 not in queries.left(commons_id=commons_id, season=MULLET)

    def test_the_retired_get_no_part(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        old = builders.admission(9, mullet=100, membership_class="retired")
        commons.admit(commons_id=commons_id, admissions=[old], hand=hand)
        _adopt(commons_id, hand)
        assert queries.left(commons_id=commons_id, season=MULLET) == {
            1: 588_000,
            2: 196_000,
            3: 294_000,
        }

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            ({"season": "mullet-2031"}, queries.UnknownSeason, ("mullet-2031", "clams-2026, mul")),
            (
                {"season": "clams-2026"},
                operations.AllowableAlreadyAdopted,
                ("clams-2026", "entry 13"),
            ),
            ({"amount": -1}, apportionment.NegativeTotal, ("-1", "0 or more")),
            ({"amount": 2**63}, StintbookError, ("64 bits",)),
        ],
    )
    def test_refused(
        self,
        changes: dict[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        hand: Hand,
    ) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        # Ten entries make the governed commons and two open the seasons: this is the thirteenth.
        _adopt(commons_id, hand, season="clams-2026", amount=400_000)
        with checks.refuses(error, *words):
            _adopt(commons_id, hand, **changes)

    def test_after_the_close_it_is_too_late(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        operations.record_close(commons_id=commons_id, season=MULLET, postings=(), hand=hand)
        with checks.refuses(operations.SeasonAlreadyClosed, MULLET, "open"):
            _adopt(commons_id, hand)

    def test_where_nobody_has_a_share_it_cannot_be_split(self, hand: Hand) -> None:
        commons_id = builders.found(hand=hand)
        commons.admit(commons_id=commons_id, admissions=[builders.admission(1, clams=1)], hand=hand)
        builders.adopt_book(commons_id=commons_id, hand=hand, approvals=1)
        commons.give_role(
            commons_id=commons_id, member=1, role="board", during=builders.SEASON, hand=hand
        )
        builders.open_seasons(commons_id=commons_id, hand=hand)
        with checks.refuses(apportionment.NobodyToHold, "1078000"):
            _adopt(commons_id, hand, approved_by=[1])


@pytest.mark.django_db
class TestApprovals:
    """An allowable takes two who sit on the board today."""

    @pytest.mark.parametrize(
        ("approved_by", "counted"),
        [
            ([], "0 approvals by members who hold the office of the board today: none"),
            ([1], "1 approvals by members who hold the office of the board today: 1;"),
            ([1, 1, 1], "1 approvals by members who hold the office of the board today: 1;"),
            ([1, 2, 4], "1 approvals by members who hold the office of the board today: 1;"),
            ([2, 4, 77], "0 approvals by members who hold the office of the board today: none"),
        ],
    )
    def test_too_few(self, approved_by: Sequence[int], counted: str, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        with checks.refuses(
            operations.TooFewApprovals, counted, "2 or more", "clause quota.mullet"
        ):
            _adopt(commons_id, hand, approved_by=approved_by)

    def test_who_holds_no_seat_is_not_written_down(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        with checks.appends(commons_id) as entries:
            _adopt(commons_id, hand, approved_by=[4, 3, 77, 1, 3])
        assert entries[0].facts["approved_by"] == [1, 3]

    def test_a_seat_counts_on_its_days_alone(self, hand: Hand, ticking_clock: TickingClock) -> None:
        commons_id = builders.governed(hand=hand)
        builders.open_seasons(commons_id=commons_id, hand=hand)
        april = _days(date(2026, 4, 1), date(2026, 4, 30))
        commons.give_role(commons_id=commons_id, member=2, role="board", during=april, hand=hand)
        # The last Irish hour of March, and the first moment after April.
        for at in ("2026-03-31T22:59:59+00:00", "2026-04-30T23:00:00+00:00"):
            ticking_clock.set(datetime.fromisoformat(at))
            with checks.refuses(operations.TooFewApprovals, "1 approvals"):
                _adopt(commons_id, hand, approved_by=[1, 2])
            ticking_clock.set(datetime(2026, 3, 1, 9, tzinfo=UTC))
        ticking_clock.set(datetime(2026, 4, 30, 22, 59, tzinfo=UTC))
        with checks.appends(commons_id):
            _adopt(commons_id, hand, approved_by=[1, 2])


@pytest.mark.django_db
class TestCarried:
    """What waited for a season enters its allotments, over and above the allowable."""

    def test_carried_and_owed_amounts_enter_the_next_allotments(self, hand: Hand) -> None:
        commons_id = builders.opened(hand=hand)
        # Member 1 took nothing: a tenth of 588 kg waits, the rest falls to the pool. Member 2 took
        # 201 kg of 196 and owes 5.
        builders.land(
            commons_id=commons_id,
            hand=hand,
            slips=[builders.slip("A1", builders.line(kilograms="201"), member=2)],
        )
        operations.record_close(
            commons_id=commons_id,
            season=MULLET,
            postings=(
                _grams("left:mullet-2026:1", -588_000),
                _grams("carried:mullet:1", 58_800),
                _grams("pool:mullet-2026", 529_200),
                _grams("left:mullet-2026:2", 5_000),
                _grams("carried:mullet:2", -5_000),
                _grams("left:mullet-2026:3", -294_000),
                _grams("pool:mullet-2026", 294_000),
            ),
            hand=hand,
        )
        assert queries.carried(commons_id=commons_id, resource="mullet") == {1: 58_800, 2: -5_000}
        builders.open_seasons(commons_id=commons_id, hand=hand, during=builders.NEXT_SEASON)
        with checks.appends(commons_id) as entries:
            _adopt(commons_id, hand, season="mullet-2027")
        assert checks.lines(entries[0]) == [
            ("resource:mullet", "mullet", "g", -1_100_000),
            ("pool:mullet-2027", "mullet", "g", 22_000),
            ("left:mullet-2027:1", "mullet", "g", 588_000),
            ("left:mullet-2027:2", "mullet", "g", 196_000),
            ("left:mullet-2027:3", "mullet", "g", 294_000),
            ("carried:mullet:1", "mullet", "g", -58_800),
            ("left:mullet-2027:1", "mullet", "g", 58_800),
            ("carried:mullet:2", "mullet", "g", 5_000),
            ("left:mullet-2027:2", "mullet", "g", -5_000),
        ]
        assert queries.allotments(commons_id=commons_id, season="mullet-2027") == {
            1: 646_800,
            2: 191_000,
            3: 294_000,
        }
        assert queries.carried(commons_id=commons_id, resource="mullet") == {1: 0, 2: 0}
        # Clams had nothing waiting.
        _adopt(commons_id, hand, season="clams-2027", amount=400_000)
        assert queries.allotments(commons_id=commons_id, season="clams-2027") == {
            1: 100_000,
            2: 100_000,
            3: 200_000,
        }


@pytest.mark.django_db
class TestRecordClose:
    """One close for a season, for ever."""

    def test_one_entry(self, hand: Hand) -> None:
        commons_id = builders.opened(hand=hand)
        postings = (_grams("left:mullet-2026:3", -294_000), _grams("pool:mullet-2026", 294_000))
        with checks.appends(commons_id) as entries:
            operations.record_close(
                commons_id=commons_id, season=MULLET, postings=postings, hand=hand
            )
        assert entries[0].kind == "season_closed"
        assert entries[0].facts == {"season": MULLET}
        assert entries[0].postings == postings
        assert queries.close_entry(commons_id=commons_id, season=MULLET) == entries[0].number
        assert queries.season(commons_id=commons_id, code=MULLET).closed
        assert not queries.season(commons_id=commons_id, code="clams-2026").closed

    def test_refused(self, hand: Hand) -> None:
        commons_id = builders.opened(hand=hand)
        with checks.refuses(queries.UnknownSeason, "mullet-2031", MULLET):
            operations.record_close(
                commons_id=commons_id, season="mullet-2031", postings=(), hand=hand
            )
        with checks.refuses(journal.UnbalancedEntry, "5 g of mullet"):
            operations.record_close(
                commons_id=commons_id, season=MULLET, postings=(_grams("a", 5),), hand=hand
            )
        operations.record_close(commons_id=commons_id, season=MULLET, postings=(), hand=hand)
        with checks.refuses(operations.SeasonAlreadyClosed, MULLET, "open"):
            operations.record_close(commons_id=commons_id, season=MULLET, postings=(), hand=hand)


def test_of_two_seasons_opened_at_once_one_is_refused(
    committing_db: CommittingDatabase, hand: Hand
) -> None:
    commons_id = builders.governed(hand=hand)
    with pytest.raises(operations.SeasonsOverlap, match=MULLET):
        waiting.one_after_the_other(
            first=lambda: _open(commons_id, hand),
            second=lambda: _open(commons_id, hand, code="another"),
        )
    assert list(queries.seasons(commons_id=commons_id)) == [MULLET]


def test_an_allowable_waits_for_what_a_close_carries(
    committing_db: CommittingDatabase, hand: Hand
) -> None:
    commons_id = builders.opened(hand=hand)
    builders.open_seasons(commons_id=commons_id, hand=hand, during=builders.NEXT_SEASON)
    waiting.one_after_the_other(
        first=lambda: operations.record_close(
            commons_id=commons_id,
            season=MULLET,
            postings=(_grams("left:mullet-2026:2", 5_000), _grams("carried:mullet:2", -5_000)),
            hand=hand,
        ),
        second=lambda: _adopt(commons_id, hand, season="mullet-2027"),
    )
    assert queries.carried(commons_id=commons_id, resource="mullet") == {2: 0}
    assert queries.allotments(commons_id=commons_id, season="mullet-2027")[2] == 191_000


shares = st.lists(
    st.fractions(min_value=Fraction(1, 97), max_value=1_000, max_denominator=97),
    min_size=1,
    max_size=7,
)


@pytest.mark.django_db
@settings(max_examples=30, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(held=shares, allowable=st.integers(0, 10**12))
def test_allotments_and_reserve_sum_to_the_allowable(
    held: list[Fraction], allowable: int, hand: Hand
) -> None:
    with transaction.atomic():
        commons_id = builders.found(hand=hand)
        admissions = [builders.admission(at, mullet=one) for at, one in enumerate(held, start=1)]
        commons.admit(commons_id=commons_id, admissions=admissions, hand=hand)
        during = DateRange(first=builders.SEASON.first, until=OPEN_END)
        commons.give_role(commons_id=commons_id, member=1, role="board", during=during, hand=hand)
        builders.adopt_book(commons_id=commons_id, hand=hand, approvals=1)
        _open(commons_id, hand)
        _adopt(commons_id, hand, amount=allowable, approved_by=[1])
        left = queries.left(commons_id=commons_id, season=MULLET)
        pool = queries.pool(commons_id=commons_id, season=MULLET)
        issued = journal_queries.balance(
            commons_id=commons_id, account="resource:mullet", resource="mullet", unit="g"
        )
        transaction.set_rollback(True)
    assert sum(left.values()) + pool == allowable == -issued
    assert pool == allowable * 2 // 100
    for number, share in enumerate(held, start=1):
        exact = (allowable - pool) * share / sum(held)
        assert abs(left.get(number, 0) - exact) < 1
