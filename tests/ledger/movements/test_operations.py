"""Withdrawals, corrections, duties, dues and what is given back: one balanced entry each."""

from collections.abc import Mapping
from dataclasses import replace
from datetime import UTC, date, datetime, timedelta
from decimal import Decimal
from typing import Any

import pytest

from governance import quantities
from governance.bylaws import editions
from governance.errors import StintbookError
from ledger.bylaws import queries as bylaws
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.foundation import transactions
from ledger.foundation.hands import Hand
from ledger.journal import leaves
from ledger.journal import operations as journal
from ledger.journal import queries as journal_queries
from ledger.journal.leaves import Posting, Receipt
from ledger.movements import operations, queries, writing
from ledger.seasons import operations as seasons
from ledger.seasons import queries as seasons_queries
from tests.conftest import CommittingDatabase
from tests.ledger import builders, checks, waiting

MULLET, CLAMS = "mullet-2026", "clams-2026"


@pytest.fixture
def commons_id(hand: Hand) -> int:
    """The small commons, its season open and split."""
    return builders.opened(hand=hand)


def _balances(commons_id: int, prefix: str) -> dict[str, int]:
    found = journal_queries.balances(commons_id=commons_id, prefix=prefix)
    return {account: amount for (account, _, _), amount in found.items()}


def _close(commons_id: int, hand: Hand, *lines: tuple[str, int], season: str = MULLET) -> None:
    seasons.record_close(
        commons_id=commons_id,
        season=season,
        postings=tuple(
            Posting(account=account, resource="mullet", unit="g", amount=amount)
            for account, amount in lines
        ),
        hand=hand,
    )


def _land(commons_id: int, hand: Hand, *slips: operations.Slip) -> tuple[Receipt, ...]:
    return builders.land(commons_id=commons_id, hand=hand, slips=slips)


def _correct(
    commons_id: int, hand: Hand, number: int, slip: operations.Slip
) -> tuple[Receipt, Receipt]:
    return operations.correct_withdrawal(
        commons_id=commons_id, number=number, slip=slip, reason="read 100 for 10", hand=hand
    )


@pytest.mark.parametrize(
    "operation",
    [
        operations.record_withdrawals,
        operations.correct_withdrawal,
        operations.assess_duties,
        operations.record_work,
        operations.record_money_instead,
        operations.charge_due,
        operations.pay_due,
        operations.give_back,
    ],
)
def test_outside_a_transaction_nothing_is_written(operation: Any) -> None:
    with pytest.raises(transactions.NoTransaction, match=operation.__name__):
        operation()


@pytest.mark.django_db
class TestRecordWithdrawals:
    """A slip is one entry, whatever stands on it."""

    def test_a_slip_with_both_species_is_one_entry(self, commons_id: int, hand: Hand) -> None:
        slip = builders.slip(
            "A1",
            builders.line("mullet", "12.5"),
            builders.line("clams", "3", zone="mill_reach"),
            builders.line("mullet", "0.1", zone="inner_flats"),
            member=2,
            day=date(2026, 4, 12),
            hours_later=3,
            note="half of it for the festival",
        )
        with checks.appends(commons_id) as entries:
            (receipt,) = _land(commons_id, hand, slip)
        (entry,) = entries
        assert (receipt.number, receipt.replayed) == (entry.number, False)
        assert (entry.kind, entry.subject, entry.device, entry.key) == (
            "withdrawal",
            2,
            "desk",
            "A1",
        )
        assert (entry.day, entry.occurred_at) == (
            date(2026, 4, 12),
            datetime(2026, 4, 12, 12, tzinfo=UTC),
        )
        assert entry.facts == {
            "slip": "A1",
            "draw_point": "Boat 2",
            "handed_in": "2026-04-12T15:00:00+00:00",
            "lines": [
                {
                    "resource": "mullet",
                    "zone": "outer_bay",
                    "given": "12.5",
                    "unit": "kg",
                    "amount": 12_500,
                },
                {
                    "resource": "clams",
                    "zone": "mill_reach",
                    "given": "3",
                    "unit": "kg",
                    "amount": 3_000,
                },
                {
                    "resource": "mullet",
                    "zone": "inner_flats",
                    "given": "0.1",
                    "unit": "kg",
                    "amount": 100,
                },
            ],
        }
        assert checks.lines(entry) == [
            ("left:mullet-2026:2", "mullet", "g", -12_500),
            ("taken:mullet-2026:2", "mullet", "g", 12_500),
            ("left:clams-2026:2", "clams", "g", -3_000),
            ("taken:clams-2026:2", "clams", "g", 3_000),
            ("left:mullet-2026:2", "mullet", "g", -100),
            ("taken:mullet-2026:2", "mullet", "g", 100),
        ]
        assert entry.texts == {"note": "half of it for the festival"}
        assert seasons_queries.left(commons_id=commons_id, season=MULLET)[2] == 183_400
        assert seasons_queries.left(commons_id=commons_id, season=CLAMS)[2] == 97_000

    def test_an_empty_note_is_no_text(self, commons_id: int, hand: Hand) -> None:
        with checks.appends(commons_id) as entries:
            _land(commons_id, hand, builders.slip("A1"))
        assert entries[0].texts == {}

    def test_a_batch_stands_in_the_order_given(self, commons_id: int, hand: Hand) -> None:
        slips = [builders.slip(name, member=member) for name, member in (("B", 3), ("A", 1))]
        with checks.appends(commons_id, count=2) as entries:
            receipts = _land(commons_id, hand, *slips)
        assert [entry.facts["slip"] for entry in entries] == ["B", "A"]
        assert [receipt.number for receipt in receipts] == [entry.number for entry in entries]

    def test_no_slips_are_no_entries(self, commons_id: int, hand: Hand) -> None:
        before = journal_queries.head(commons_id=commons_id)
        assert _land(commons_id, hand) == ()
        assert journal_queries.head(commons_id=commons_id) == before

    @pytest.mark.parametrize("together", [True, False])
    def test_the_same_slip_twice_adds_nothing(
        self, together: bool, commons_id: int, hand: Hand
    ) -> None:
        slip = builders.slip("A1", note="wet")
        with checks.appends(commons_id):
            if together:
                first, second = _land(commons_id, hand, slip, slip)
            else:
                (first,) = _land(commons_id, hand, slip)
                (second,) = _land(commons_id, hand, slip)
        assert (first.replayed, second.replayed) == (False, True)
        assert (first.number, first.leaf_hash) == (second.number, second.leaf_hash)
        assert seasons_queries.taken(commons_id=commons_id, season=MULLET) == {1: 10_000}

    @pytest.mark.parametrize(
        "changes",
        [
            {"member": 2},
            {"lines": (builders.line(kilograms="11"),)},
            {"note": "dry"},
            {"taken_at": datetime(2026, 3, 2, 11, tzinfo=UTC)},
        ],
    )
    def test_a_slip_number_stands_for_one_content(
        self, changes: Mapping[str, Any], commons_id: int, hand: Hand
    ) -> None:
        slip = builders.slip("A1")
        (receipt,) = _land(commons_id, hand, slip)
        with checks.refuses(journal.KeyReused, "A1", receipt.number):
            _land(commons_id, hand, replace(slip, **changes))

    def test_what_breaks_a_bylaw_is_recorded_all_the_same(
        self, commons_id: int, hand: Hand
    ) -> None:
        slips = [
            # Beyond the allotment of 588 kg; on a closed ground; by a retired member; too late.
            builders.slip("A1", builders.line(kilograms="900")),
            builders.slip("A2", builders.line(zone="inner_flats"), day=date(2026, 4, 15)),
            builders.slip("A3", member=4),
            builders.slip("A4", hours_later=400),
        ]
        with checks.appends(commons_id, count=4):
            _land(commons_id, hand, *slips)
        left = seasons_queries.left(commons_id=commons_id, season=MULLET)
        assert (left[1], left[4]) == (588_000 - 900_000 - 10_000 - 10_000, -10_000)

    def test_the_largest_amount_that_is_taken(self, commons_id: int, hand: Hand) -> None:
        # A million of these are just short of 2^63.
        with checks.appends(commons_id) as entries:
            _land(commons_id, hand, builders.slip("A1", builders.line(kilograms="9223372036.854")))
        assert entries[0].facts["lines"][0]["amount"] == 9_223_372_036_854

    def test_the_day_is_the_day_of_the_commons(self, commons_id: int, hand: Hand) -> None:
        slip = replace(
            builders.slip("A1"),
            # Half past midnight in Ireland, and still the day before in UTC.
            taken_at=datetime.fromisoformat("2026-06-02T00:30:00+01:00"),
            handed_in=datetime.fromisoformat("2026-06-02T09:00:00+01:00"),
        )
        with checks.appends(commons_id) as entries:
            _land(commons_id, hand, slip)
        assert entries[0].day == date(2026, 6, 2)
        assert entries[0].facts["handed_in"] == "2026-06-02T08:00:00+00:00"


def _bad(**changes: Any) -> operations.Slip:
    return replace(builders.slip("BAD"), **changes)


def _bad_line(**changes: Any) -> operations.Slip:
    return _bad(lines=(builders.line("clams", "1"), replace(builders.line(), **changes)))


REFUSED: list[tuple[operations.Slip, type[StintbookError], tuple[str, ...]]] = [
    (_bad(member=77), commons.UnknownMember, ("number 77", "admitted")),
    (_bad(member=0), commons.UnknownMember, ("number 0", "admitted")),
    (_bad(lines=()), writing.NothingTaken, ("no line on slip BAD", "one base unit")),
    (_bad(slip=""), leaves.MalformedDraft, ("key", "1 to 255")),
    (_bad(slip="s" * 256), leaves.MalformedDraft, ("key", "1 to 255")),
    (
        _bad(taken_at=datetime(2026, 3, 2, 12)),  # noqa: DTZ001 (the mistake itself)
        commons_queries.InstantWithoutOffset,
        ("2026-03-02T12:00:00;", "with their offset"),
    ),
    (
        _bad(handed_in=datetime(2026, 3, 2, 14)),  # noqa: DTZ001 (the mistake itself)
        commons_queries.InstantWithoutOffset,
        ("2026-03-02T14:00:00;", "with their offset"),
    ),
    (
        _bad(handed_in=builders.at(date(2026, 3, 2)) - timedelta(minutes=1)),
        writing.HandedInBeforeTaken,
        ("BAD handed in at 2026-03-02T11:59", "2026-03-02T12:00:00+00:00, or later"),
    ),
    (_bad_line(resource="eels"), commons_queries.UnknownResource, ("'eels'", "clams, mullet")),
    (
        _bad_line(zone="mill_reach"),
        commons.UnknownZone,
        ("'mill_reach' of mullet", "inner_flats, outer_bay"),
    ),
    (_bad_line(zone=""), commons.UnknownZone, ("'' of mullet", "inner_flats, outer_bay")),
    (_bad_line(unit="L"), quantities.UnitMismatch, ("'L'", "'g'")),
    (_bad_line(unit="bucket"), quantities.UnknownUnit, ("'bucket'", "kg")),
    (_bad_line(given=Decimal(0)), writing.NothingTaken, ("0 kg of mullet", "one base unit")),
    (_bad_line(given=Decimal("-0.0")), writing.NothingTaken, ("-0.0 kg", "one base unit")),
    (_bad_line(given=Decimal(-5)), writing.NothingTaken, ("-5 kg of mullet", "one base unit")),
    (_bad_line(given=Decimal("0.0004")), writing.NothingTaken, ("0.0004 kg", "one base unit")),
    (_bad_line(given=Decimal("NaN")), quantities.UnusableNumber, ("NaN", "12 digits")),
    (_bad_line(given=Decimal("sNaN")), quantities.UnusableNumber, ("NaN", "12 digits")),
    (_bad_line(given=Decimal("Infinity")), quantities.UnusableNumber, ("Infinity", "12 digits")),
    (_bad_line(given=Decimal("-Infinity")), quantities.UnusableNumber, ("-Infinity", "12 digits")),
    (_bad_line(given=Decimal("1E+999999")), quantities.UnusableNumber, ("1e+999999", "12 digits")),
    (_bad_line(given=Decimal("1E-999999")), quantities.UnusableNumber, ("1e-999999", "12 after")),
    (_bad_line(given=Decimal("1E+12")), quantities.UnusableNumber, ("1e+12", "12 digits")),
    (
        _bad_line(given=Decimal("9223372037")),
        writing.TakenTooMuch,
        ("9223372037 kg of mullet on slip BAD", "9,223,372,036,854 g"),
    ),
    (_bad(note="a\x00b"), leaves.MalformedDraft, ("note", "cannot be stored")),
]


@pytest.mark.django_db
@pytest.mark.parametrize(("slip", "error", "words"), REFUSED)
def test_one_bad_slip_keeps_the_whole_batch_out(
    slip: operations.Slip,
    error: type[StintbookError],
    words: tuple[str, ...],
    commons_id: int,
    hand: Hand,
) -> None:
    with checks.refuses(error, *words):
        _land(commons_id, hand, builders.slip("GOOD"), slip, builders.slip("GOOD TOO"))


@pytest.mark.django_db
# A correction carries no key, so that its slip number may be of any length.
@pytest.mark.parametrize(
    ("slip", "error", "words"), [row for row in REFUSED if row[0].slip == "BAD"]
)
def test_a_correction_is_refused_for_the_same(
    slip: operations.Slip,
    error: type[StintbookError],
    words: tuple[str, ...],
    commons_id: int,
    hand: Hand,
) -> None:
    (receipt,) = _land(commons_id, hand, builders.slip("A1"))
    with checks.refuses(error, *words):
        _correct(commons_id, hand, receipt.number, slip)


@pytest.mark.django_db
class TestOutsideTheSeason:
    """A take that no open season holds is recorded apart, on its true day."""

    @pytest.mark.parametrize("day", [date(2026, 2, 28), date(2026, 6, 29)])
    def test_off_season(self, day: date, commons_id: int, hand: Hand) -> None:
        both = (builders.line("mullet"), builders.line("clams", "2"))
        with checks.appends(commons_id) as entries:
            _land(commons_id, hand, builders.slip("A1", *both, day=day))
        assert entries[0].day == day
        assert checks.lines(entries[0]) == [
            ("left:mullet.off-season:1", "mullet", "g", -10_000),
            ("taken:mullet.off-season:1", "mullet", "g", 10_000),
            ("left:clams.off-season:1", "clams", "g", -2_000),
            ("taken:clams.off-season:1", "clams", "g", 2_000),
        ]
        assert seasons_queries.taken(commons_id=commons_id, season=MULLET) == {}

    @pytest.mark.parametrize("day", [date(2026, 3, 1), date(2026, 6, 28)])
    def test_both_ends_belong_to_the_season(self, day: date, commons_id: int, hand: Hand) -> None:
        _land(commons_id, hand, builders.slip("A1", day=day))
        assert seasons_queries.taken(commons_id=commons_id, season=MULLET) == {1: 10_000}

    def test_after_the_close(self, commons_id: int, hand: Hand) -> None:
        _close(commons_id, hand)
        both = (builders.line("mullet"), builders.line("clams", "2"))
        with checks.appends(commons_id) as entries:
            _land(commons_id, hand, builders.slip("A1", *both, day=date(2026, 6, 1)))
        assert entries[0].day == date(2026, 6, 1)
        # The season of clams is still open.
        assert checks.lines(entries[0]) == [
            ("left:mullet-2026.after-close:1", "mullet", "g", -10_000),
            ("taken:mullet-2026.after-close:1", "mullet", "g", 10_000),
            ("left:clams-2026:1", "clams", "g", -2_000),
            ("taken:clams-2026:1", "clams", "g", 2_000),
        ]
        assert seasons_queries.left(commons_id=commons_id, season=MULLET)[1] == 588_000


def test_a_slip_that_waits_for_the_close_is_recorded_after_it(
    committing_db: CommittingDatabase, hand: Hand
) -> None:
    commons_id = builders.opened(hand=hand)
    waiting.one_after_the_other(
        first=lambda: _close(commons_id, hand),
        second=lambda: operations.record_withdrawals(
            commons_id=commons_id, slips=[builders.slip("A1")], hand=hand
        ),
    )
    assert _balances(commons_id, "taken:") == {"taken:mullet-2026.after-close:1": 10_000}


def test_what_is_given_back_waits_for_the_close(
    committing_db: CommittingDatabase, hand: Hand
) -> None:
    commons_id = builders.opened(hand=hand)
    waiting.one_after_the_other(
        first=lambda: _close(commons_id, hand),
        second=lambda: operations.give_back(
            commons_id=commons_id, member=2, season=MULLET, amount=3_000, case=7, hand=hand
        ),
    )
    assert seasons_queries.carried(commons_id=commons_id, resource="mullet") == {2: -3_000}


@pytest.mark.django_db
class TestCorrectWithdrawal:
    """A correction reverses and records anew; what was written stays."""

    def test_both_entries_stay_with_the_reason(self, commons_id: int, hand: Hand) -> None:
        (wrong,) = _land(commons_id, hand, builders.slip("A1", builders.line(kilograms="100")))
        with checks.appends(commons_id, count=2) as entries:
            undone, redone = _correct(commons_id, hand, wrong.number, builders.slip("A1"))
        reversal, right = entries
        assert (undone.number, redone.number) == (reversal.number, right.number)
        assert (reversal.kind, reversal.reverses, reversal.subject) == (
            "reversal",
            wrong.number,
            1,
        )
        assert reversal.texts == {"reason": "read 100 for 10"}
        assert checks.lines(reversal) == [
            ("left:mullet-2026:1", "mullet", "g", 100_000),
            ("taken:mullet-2026:1", "mullet", "g", -100_000),
        ]
        assert (right.kind, right.key, right.day) == ("withdrawal", None, date(2026, 3, 2))
        original = journal_queries.entry(commons_id=commons_id, number=wrong.number)
        assert original.reversed_by == reversal.number
        assert original.facts["lines"][0]["given"] == "100"
        assert seasons_queries.taken(commons_id=commons_id, season=MULLET) == {1: 10_000}
        assert seasons_queries.left(commons_id=commons_id, season=MULLET)[1] == 578_000

    def test_the_first_slip_sent_again_adds_nothing(self, commons_id: int, hand: Hand) -> None:
        first = builders.slip("A1", builders.line(kilograms="100"))
        (wrong,) = _land(commons_id, hand, first)
        _correct(commons_id, hand, wrong.number, builders.slip("A1"))
        (again,) = _land(commons_id, hand, first)
        assert (again.number, again.replayed) == (wrong.number, True)
        assert seasons_queries.taken(commons_id=commons_id, season=MULLET) == {1: 10_000}

    def test_it_may_go_to_another_member_resource_and_day(
        self, commons_id: int, hand: Hand
    ) -> None:
        (wrong,) = _land(commons_id, hand, builders.slip("A1"))
        right = builders.slip("A1", builders.line("clams", "4"), member=3, day=date(2026, 3, 9))
        with checks.appends(commons_id, count=2) as entries:
            _correct(commons_id, hand, wrong.number, right)
        assert [(entry.subject, entry.day) for entry in entries] == [
            (1, date(2026, 3, 1)),
            (3, date(2026, 3, 9)),
        ]
        assert seasons_queries.taken(commons_id=commons_id, season=MULLET) == {1: 0}
        assert seasons_queries.taken(commons_id=commons_id, season=CLAMS) == {3: 4_000}

    def test_a_correction_is_corrected_in_turn(self, commons_id: int, hand: Hand) -> None:
        (wrong,) = _land(commons_id, hand, builders.slip("A1", builders.line(kilograms="100")))
        _, redone = _correct(commons_id, hand, wrong.number, builders.slip("A1"))
        right = builders.slip("A1", builders.line(kilograms="11"))
        _correct(commons_id, hand, redone.number, right)
        assert seasons_queries.taken(commons_id=commons_id, season=MULLET) == {1: 11_000}
        with checks.refuses(journal.AlreadyReversed, wrong.number):
            _correct(commons_id, hand, wrong.number, right)

    def test_only_a_withdrawal_is_corrected(self, commons_id: int, hand: Hand) -> None:
        (wrong,) = _land(commons_id, hand, builders.slip("A1"))
        undone, _ = _correct(commons_id, hand, wrong.number, builders.slip("A1"))
        for number, kind in ((1, "commons_founded"), (undone.number, "reversal")):
            with checks.refuses(
                operations.NotAWithdrawal, f"entry {number} to be a {kind}", "a withdrawal"
            ):
                _correct(commons_id, hand, number, builders.slip("A1"))
        with checks.refuses(journal_queries.EntryNotFound, "999"):
            _correct(commons_id, hand, 999, builders.slip("A1"))


@pytest.mark.django_db
class TestCorrectionAfterTheClose:
    """A closed season's accounts stay as reported; the difference is told apart."""

    def test_the_difference_stands_beside_the_season(self, commons_id: int, hand: Hand) -> None:
        (wrong,) = _land(commons_id, hand, builders.slip("A1", builders.line(kilograms="100")))
        _close(commons_id, hand, ("left:mullet-2026:1", -488_000), ("pool:mullet-2026", 488_000))
        reported = _balances(commons_id, "left:mullet-2026:") | _balances(
            commons_id, "taken:mullet-2026:"
        )
        assert reported["taken:mullet-2026:1"] == 100_000
        assert reported["left:mullet-2026:1"] == 0
        with checks.appends(commons_id, count=2) as entries:
            _, redone = _correct(commons_id, hand, wrong.number, builders.slip("A1"))
        assert checks.lines(entries[1]) == [
            ("left:mullet-2026.after-close:1", "mullet", "g", -10_000),
            ("taken:mullet-2026.after-close:1", "mullet", "g", 10_000),
            ("left:mullet-2026:1", "mullet", "g", -100_000),
            ("left:mullet-2026.after-close:1", "mullet", "g", 100_000),
            ("taken:mullet-2026:1", "mullet", "g", 100_000),
            ("taken:mullet-2026.after-close:1", "mullet", "g", -100_000),
        ]

        def beside() -> tuple[int, int]:
            now = _balances(commons_id, "left:mullet-2026:") | _balances(
                commons_id, "taken:mullet-2026:"
            )
            assert now == reported
            left = _balances(commons_id, "left:mullet-2026.after-close:")
            taken = _balances(commons_id, "taken:mullet-2026.after-close:")
            return left["left:mullet-2026.after-close:1"], taken["taken:mullet-2026.after-close:1"]

        # 100 kg were reported and 10 taken: 90 less. Then it turns out to be 40: 60 less.
        assert beside() == (90_000, -90_000)
        right = builders.slip("A1", builders.line(kilograms="40"))
        _, redone = _correct(commons_id, hand, redone.number, right)
        assert beside() == (60_000, -60_000)
        _, redone = _correct(
            commons_id, hand, redone.number, builders.slip("A1", builders.line(kilograms="130"))
        )
        assert beside() == (-30_000, 30_000)

    def test_a_slip_that_came_after_the_close_is_corrected_beside_it(
        self, commons_id: int, hand: Hand
    ) -> None:
        _close(commons_id, hand)
        (wrong,) = _land(commons_id, hand, builders.slip("A1", builders.line(kilograms="100")))
        _correct(commons_id, hand, wrong.number, builders.slip("A1"))
        assert _balances(commons_id, "taken:mullet-2026.after-close:") == {
            "taken:mullet-2026.after-close:1": 10_000
        }
        assert _balances(commons_id, "taken:mullet-2026:") == {}


def _assess(commons_id: int, hand: Hand, *members: int) -> Receipt | None:
    (duty,) = bylaws.work_duties(commons_id=commons_id, day=builders.SEASON.first)
    return operations.assess_duties(
        commons_id=commons_id,
        duties=[(duty, member) for member in members],
        during=builders.SEASON,
        hand=hand,
    )


def _work(commons_id: int, hand: Hand, **changes: Any) -> Receipt:
    values: dict[str, Any] = {
        "member": 1,
        "clause": "6.1",
        "day": date(2026, 4, 4),
        "minutes": 200,
        "task": "cleared the slipway",
    }
    return operations.record_work(commons_id=commons_id, hand=hand, **(values | changes))


def _pay_instead(commons_id: int, hand: Hand, **changes: Any) -> Receipt:
    values: dict[str, Any] = {
        "member": 1,
        "clause": "6.1",
        "day": date(2026, 5, 5),
        "amount": 6_000,
    }
    return operations.record_money_instead(commons_id=commons_id, hand=hand, **(values | changes))


def _standing(commons_id: int, member: int = 1) -> tuple[int, int, int, int]:
    duty = queries.duties(commons_id=commons_id, clause="6.1", first=builders.SEASON.first)[member]
    return duty.assessed, duty.worked, duty.paid_instead, duty.owed


@pytest.mark.django_db
class TestDuties:
    """Two days of six hours are assessed, worked, or paid for at 60 EUR a day."""

    def test_assessed_by_one_entry(self, commons_id: int, hand: Hand) -> None:
        with checks.appends(commons_id) as entries:
            _assess(commons_id, hand, 1, 3)
        assert entries[0].kind == "duties_assessed"
        assert entries[0].facts == {"from": "2026-03-01", "until": "2026-06-29"}
        assert checks.lines(entries[0]) == [
            ("duties:6.1:2026-03-01", "work", "min", -720),
            ("duty:6.1:2026-03-01:1", "work", "min", 720),
            ("duties:6.1:2026-03-01", "work", "min", -720),
            ("duty:6.1:2026-03-01:3", "work", "min", 720),
        ]
        assert _standing(commons_id) == (720, 0, 0, 720)

    def test_where_nobody_owes_there_is_no_entry(self, commons_id: int, hand: Hand) -> None:
        before = journal_queries.head(commons_id=commons_id)
        assert _assess(commons_id, hand) is None
        assert journal_queries.head(commons_id=commons_id) == before

    def test_charged_once_for_a_season(self, commons_id: int, hand: Hand) -> None:
        receipt = _assess(commons_id, hand, 1, 3)
        assert receipt is not None
        with checks.refuses(
            operations.DutiesAlreadyAssessed, "2026-03-01", f"entry {receipt.number}", "once"
        ):
            _assess(commons_id, hand, 1, 3)

    def test_worked(self, commons_id: int, hand: Hand) -> None:
        _assess(commons_id, hand, 1)
        with checks.appends(commons_id) as entries:
            _work(commons_id, hand)
        (entry,) = entries
        assert (entry.kind, entry.subject, entry.day) == ("work_given", 1, date(2026, 4, 4))
        assert entry.facts == {"clause": "6.1", "minutes": 200}
        assert entry.texts == {"task": "cleared the slipway"}
        assert checks.lines(entry) == [
            ("duty:6.1:2026-03-01:1", "work", "min", -200),
            ("duty_worked:6.1:2026-03-01:1", "work", "min", 200),
        ]
        assert _standing(commons_id) == (720, 200, 0, 520)

    def test_paid_instead(self, commons_id: int, hand: Hand) -> None:
        _assess(commons_id, hand, 1)
        with checks.appends(commons_id) as entries:
            _pay_instead(commons_id, hand, amount=2_500)
        (entry,) = entries
        # 25 EUR of 60 EUR are 5/12 of six hours: two and a half.
        assert entry.facts == {"clause": "6.1", "amount": 2_500, "minutes": 150}
        assert (entry.kind, entry.subject, entry.day) == (
            "money_given_instead",
            1,
            date(2026, 5, 5),
        )
        assert checks.lines(entry) == [
            ("duty:6.1:2026-03-01:1", "work", "min", -150),
            ("duty_bought:6.1:2026-03-01:1", "work", "min", 150),
            ("instead:6.1:1", "money", "EUR", -2_500),
            ("cash", "money", "EUR", 2_500),
        ]
        assert _standing(commons_id) == (720, 0, 150, 570)

    @pytest.mark.parametrize(
        ("cents", "minutes"),
        # A minute costs 16 2/3 cents; a part of a minute is lost to the one who pays.
        [(6_000, 360), (12_000, 720), (50, 3), (100, 6), (17, 1), (16, 0), (1, 0), (5_999, 359)],
    )
    def test_money_buys_whole_minutes(
        self, cents: int, minutes: int, commons_id: int, hand: Hand
    ) -> None:
        _assess(commons_id, hand, 1)
        with checks.appends(commons_id) as entries:
            _pay_instead(commons_id, hand, amount=cents)
        assert entries[0].facts["minutes"] == minutes
        assert _standing(commons_id) == (720, 0, minutes, 720 - minutes)
        assert _balances(commons_id, "cash") == {"cash": cents}

    def test_worked_and_paid_together_and_more_than_owed(self, commons_id: int, hand: Hand) -> None:
        _assess(commons_id, hand, 1, 3)
        _work(commons_id, hand, minutes=500)
        _pay_instead(commons_id, hand, amount=6_000)
        assert _standing(commons_id) == (720, 500, 360, -140)
        assert _standing(commons_id, member=3) == (720, 0, 0, 720)

    def test_work_before_the_season_counts_for_the_first(self, commons_id: int, hand: Hand) -> None:
        _work(commons_id, hand, day=date(2026, 2, 10), minutes=60)
        _assess(commons_id, hand, 1)
        assert _standing(commons_id) == (720, 60, 0, 660)

    def test_work_counts_for_the_last_season_begun(self, commons_id: int, hand: Hand) -> None:
        builders.open_seasons(commons_id=commons_id, hand=hand, during=builders.NEXT_SEASON)
        for day, account in (
            (date(2027, 2, 28), "duty_worked:6.1:2026-03-01:1"),
            (date(2027, 3, 1), "duty_worked:6.1:2027-03-01:1"),
        ):
            with checks.appends(commons_id) as entries:
                _work(commons_id, hand, day=day)
            assert checks.lines(entries[0])[1] == (account, "work", "min", 200)

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            ({"minutes": 0}, operations.NothingGiven, ("amount 0", "above zero")),
            ({"minutes": -30}, operations.NothingGiven, ("amount -30", "above zero")),
            ({"minutes": Decimal("30")}, operations.NothingGiven, ("amount 30", "whole number")),
            ({"minutes": 2**63}, leaves.MalformedDraft, ("64 bits",)),
            ({"member": 77}, commons.UnknownMember, ("77", "admitted")),
            ({"clause": "9.9"}, writing.NoSuchDuty, ("'9.9'", "2026-03-01: 6.1")),
            ({"clause": "3.2"}, writing.NoSuchDuty, ("'3.2'", "2026-03-01: 6.1")),
        ],
    )
    def test_work_refused(
        self,
        changes: dict[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        commons_id: int,
        hand: Hand,
    ) -> None:
        with checks.refuses(error, *words):
            _work(commons_id, hand, **changes)

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            ({"amount": 0}, operations.NothingGiven, ("amount 0", "above zero")),
            ({"amount": -1}, operations.NothingGiven, ("amount -1", "above zero")),
            ({"amount": Decimal("NaN")}, operations.NothingGiven, ("NaN", "whole number")),
            ({"member": 77}, commons.UnknownMember, ("77", "admitted")),
            ({"clause": "9.9"}, writing.NotPayable, ("'9.9'", "2026-05-05: 6.1")),
            ({"clause": "5.1"}, writing.NotPayable, ("'5.1'", "2026-05-05: 6.1")),
            ({"day": date(2026, 2, 1)}, editions.NoEditionInForce, ("2026-02-01",)),
        ],
    )
    def test_money_refused(
        self,
        changes: dict[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        commons_id: int,
        hand: Hand,
    ) -> None:
        with checks.refuses(error, *words):
            _pay_instead(commons_id, hand, **changes)

    def test_a_duty_that_money_cannot_stand_for(self, hand: Hand) -> None:
        commons_id = builders.opened(hand=hand, instead="")
        with checks.refuses(writing.NotPayable, "'6.1'", "2026-05-05: none"):
            _pay_instead(commons_id, hand)

    def test_before_any_season(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        for give in (_work, _pay_instead):
            with checks.refuses(writing.NoSuchSeason, "no season", "once a season was opened"):
                give(commons_id, hand)


@pytest.mark.django_db
class TestDues:
    """Fines are charged by cases and paid in coin."""

    def test_charged_and_paid(self, commons_id: int, hand: Hand) -> None:
        with checks.appends(commons_id) as entries:
            operations.charge_due(
                commons_id=commons_id, member=3, kind="fine", amount=2_500, case=4, hand=hand
            )
        (charge,) = entries
        assert (charge.kind, charge.subject) == ("due_charged", 3)
        assert charge.facts == {"due": "fine", "amount": 2_500, "case": 4}
        assert checks.lines(charge) == [
            ("charged:fine", "money", "EUR", -2_500),
            ("due:fine:3", "money", "EUR", 2_500),
        ]
        with checks.appends(commons_id) as entries:
            operations.pay_due(
                commons_id=commons_id, member=3, kind="fine", amount=1_000, hand=hand
            )
        (payment,) = entries
        assert (payment.kind, payment.subject) == ("due_paid", 3)
        assert payment.facts == {"due": "fine", "amount": 1_000}
        assert checks.lines(payment) == [
            ("due:fine:3", "money", "EUR", -1_000),
            ("paid:fine:3", "money", "EUR", 1_000),
            ("received:fine", "money", "EUR", -1_000),
            ("cash", "money", "EUR", 1_000),
        ]
        assert queries.dues(commons_id=commons_id, kind="fine") == {
            3: queries.DueStanding(charged=2_500, paid=1_000, owed=1_500)
        }

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            ({"amount": 0}, operations.NothingGiven, ("amount 0", "above zero")),
            ({"amount": -100}, operations.NothingGiven, ("amount -100", "above zero")),
            ({"amount": 10.5}, operations.NothingGiven, ("amount 10.5", "whole number")),
            ({"amount": 2**63}, leaves.MalformedDraft, ("64 bits",)),
            ({"member": 77}, commons.UnknownMember, ("77", "admitted")),
            ({"kind": "tithe"}, operations.UnknownDue, ("'tithe'", "accepted are fine")),
        ],
    )
    def test_refused(
        self,
        changes: dict[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        commons_id: int,
        hand: Hand,
    ) -> None:
        values: dict[str, Any] = {"member": 3, "kind": "fine", "amount": 100} | changes
        with checks.refuses(error, *words):
            operations.charge_due(commons_id=commons_id, case=1, hand=hand, **values)
        with checks.refuses(error, *words):
            operations.pay_due(commons_id=commons_id, hand=hand, **values)


@pytest.mark.django_db
class TestGiveBack:
    """What was taken too much goes back to all."""

    def test_before_the_close_to_the_pool(self, commons_id: int, hand: Hand) -> None:
        with checks.appends(commons_id) as entries:
            operations.give_back(
                commons_id=commons_id, member=2, season=CLAMS, amount=3_000, case=7, hand=hand
            )
        (entry,) = entries
        assert (entry.kind, entry.subject) == ("given_back", 2)
        assert entry.facts == {"season": CLAMS, "amount": 3_000, "case": 7}
        assert checks.lines(entry) == [
            ("left:clams-2026:2", "clams", "g", -3_000),
            ("pool:clams-2026", "clams", "g", 3_000),
        ]
        assert seasons_queries.allotments(commons_id=commons_id, season=CLAMS)[2] == 97_000
        assert seasons_queries.pool(commons_id=commons_id, season=CLAMS) == 3_000

    def test_after_the_close_out_of_the_next_allotment(self, commons_id: int, hand: Hand) -> None:
        _close(commons_id, hand)
        with checks.appends(commons_id) as entries:
            operations.give_back(
                commons_id=commons_id, member=2, season=MULLET, amount=3_000, case=7, hand=hand
            )
        assert checks.lines(entries[0]) == [
            ("carried:mullet:2", "mullet", "g", -3_000),
            ("resource:mullet", "mullet", "g", 3_000),
        ]
        builders.open_seasons(commons_id=commons_id, hand=hand, during=builders.NEXT_SEASON)
        builders.adopt_allowables(commons_id=commons_id, hand=hand, year=2027)
        assert seasons_queries.allotments(commons_id=commons_id, season="mullet-2027") == {
            1: 588_000,
            2: 193_000,
            3: 294_000,
        }

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            ({"amount": 0}, operations.NothingGiven, ("amount 0", "above zero")),
            ({"amount": -5}, operations.NothingGiven, ("amount -5", "above zero")),
            ({"member": 77}, commons.UnknownMember, ("77", "admitted")),
            ({"season": "x"}, seasons_queries.UnknownSeason, ("'x'", "clams-2026, mullet-2026")),
        ],
    )
    def test_refused(
        self,
        changes: dict[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        commons_id: int,
        hand: Hand,
    ) -> None:
        values: dict[str, Any] = {"member": 2, "season": MULLET, "amount": 1, "case": 1}
        with checks.refuses(error, *words):
            operations.give_back(commons_id=commons_id, hand=hand, **(values | changes))
