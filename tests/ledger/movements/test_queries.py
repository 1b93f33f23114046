"""Withdrawals, contributions and dues as recorded, and as known at an entry."""

from datetime import date

import numpy as np
import pytest

from governance import facts
from governance.periods import DateRange
from ledger.foundation.hands import Hand
from ledger.journal import queries as journal
from ledger.movements import operations, queries
from tests.ledger import builders, checks

MARCH = DateRange(first=date(2026, 3, 1), until=date(2026, 4, 1))


@pytest.fixture
def commons_id(hand: Hand) -> int:
    """The small commons, its season open and split."""
    return builders.opened(hand=hand)


def _of(tables: tuple[facts.Withdrawals, ...], resource: str) -> facts.Withdrawals:
    return next(table for table in tables if table.resource == resource)


def test_the_names_of_accounts() -> None:
    first = date(2026, 3, 1)
    assert queries.duty_account(clause="6.1", first=first, member=7) == "duty:6.1:2026-03-01:7"
    assert (
        queries.worked_account(clause="6.1", first=first, member=7)
        == "duty_worked:6.1:2026-03-01:7"
    )
    assert (
        queries.bought_account(clause="6.1", first=first, member=7)
        == "duty_bought:6.1:2026-03-01:7"
    )
    assert queries.due_account(kind="fine", member=7) == "due:fine:7"
    assert queries.paid_account(kind="fine", member=7) == "paid:fine:7"


@pytest.mark.django_db
class TestWithdrawals:
    """Takes as columns: standing ones, of some days, some members, as known."""

    def test_of_some_days_and_members(self, commons_id: int, hand: Hand) -> None:
        builders.land(
            commons_id=commons_id,
            hand=hand,
            slips=[
                builders.slip("A1", builders.line(), builders.line("clams", "2")),
                builders.slip("A2", builders.line(kilograms="7"), member=3, day=MARCH.last),
                builders.slip("A3", builders.line(kilograms="5"), day=MARCH.until),
            ],
        )
        found = queries.withdrawals(commons_id=commons_id, during=MARCH)
        assert [(table.resource, table.base) for table in found] == [
            ("clams", "g"),
            ("mullet", "g"),
        ]
        assert _of(found, "mullet").amount.tolist() == [10_000, 7_000]
        assert _of(found, "mullet").member.tolist() == [1, 3]
        assert _of(found, "clams").amount.tolist() == [2_000]
        mine = queries.withdrawals(commons_id=commons_id, during=builders.SEASON, members=[1])
        assert _of(mine, "mullet").amount.tolist() == [10_000, 5_000]

    def test_as_known_before_and_after_a_correction(self, commons_id: int, hand: Hand) -> None:
        wrong_slip = builders.slip("A1", builders.line(kilograms="100"))
        (wrong,) = builders.land(commons_id=commons_id, hand=hand, slips=[wrong_slip])
        undone, redone = operations.correct_withdrawal(
            commons_id=commons_id,
            number=wrong.number,
            slip=builders.slip("A1"),
            reason="misread",
            hand=hand,
        )
        known = [
            _of(
                queries.withdrawals(commons_id=commons_id, during=MARCH, up_to=up_to), "mullet"
            ).amount.tolist()
            for up_to in (wrong.number - 1, wrong.number, undone.number, redone.number, None)
        ]
        assert known == [[], [100_000], [], [10_000], [10_000]]

    def test_a_take_after_the_close_or_off_season_keeps_its_day(
        self, commons_id: int, hand: Hand
    ) -> None:
        slip = builders.slip("A1", day=date(2026, 7, 2))
        builders.land(commons_id=commons_id, hand=hand, slips=[slip])
        july = DateRange(first=date(2026, 7, 1), until=date(2026, 8, 1))
        takes = _of(queries.withdrawals(commons_id=commons_id, during=july), "mullet")
        # 2 July 2026 is the day 20,636 after 1 January 1970.
        assert takes.day.tolist() == [20_636]
        assert np.datetime64("1970-01-01") + 20_636 == np.datetime64("2026-07-02")
        season = queries.withdrawals(commons_id=commons_id, during=builders.SEASON)
        assert len(_of(season, "mullet")) == 0

    def test_the_standing_entry_of_a_slip(self, commons_id: int, hand: Hand) -> None:
        (first,) = builders.land(commons_id=commons_id, hand=hand, slips=[builders.slip("A1")])
        assert queries.entry_of_slip(commons_id=commons_id, slip="A1") == first.number
        _, redone = operations.correct_withdrawal(
            commons_id=commons_id,
            number=first.number,
            slip=builders.slip("A1"),
            reason="misread",
            hand=hand,
        )
        assert queries.entry_of_slip(commons_id=commons_id, slip="A1") == redone.number
        with checks.refuses(queries.UnknownSlip, "'A2'", "stand recorded"):
            queries.entry_of_slip(commons_id=commons_id, slip="A2")


@pytest.mark.django_db
class TestContributions:
    """Work and money as columns, and where each member stands."""

    def test_as_columns_and_as_known(self, commons_id: int, hand: Hand) -> None:
        work = operations.record_work(
            commons_id=commons_id,
            member=3,
            clause="6.1",
            day=date(2026, 3, 7),
            minutes=200,
            task="",
            hand=hand,
        )
        money = operations.record_money_instead(
            commons_id=commons_id,
            member=1,
            clause="6.1",
            day=date(2026, 3, 8),
            amount=6_000,
            hand=hand,
        )
        worked = queries.work(commons_id=commons_id, during=MARCH)
        assert (worked.kind, worked.base, worked.duties) == ("work", "min", ("6.1",))
        assert [worked.entry.tolist(), worked.member.tolist(), worked.amount.tolist()] == [
            [work.number],
            [3],
            [200],
        ]
        paid = queries.money_instead(commons_id=commons_id, during=MARCH)
        assert (paid.kind, paid.base) == ("money", "EUR")
        assert [paid.entry.tolist(), paid.member.tolist(), paid.amount.tolist()] == [
            [money.number],
            [1],
            [6_000],
        ]
        before = queries.money_instead(commons_id=commons_id, during=MARCH, up_to=work.number)
        assert before.amount.tolist() == []
        others = queries.work(commons_id=commons_id, during=MARCH, members=[1, 2])
        assert others.amount.tolist() == []

    def test_standings_add_up(self) -> None:
        one = queries.DutyStanding(assessed=720, worked=200, paid_instead=150, owed=370)
        assert one.plus(one) == queries.DutyStanding(
            assessed=1_440, worked=400, paid_instead=300, owed=740
        )

    def test_nobody_charged_is_no_standing(self, commons_id: int) -> None:
        assert queries.duties(commons_id=commons_id, clause="6.1", first=MARCH.first) == {}
        assert queries.dues(commons_id=commons_id, kind="fine") == {}


@pytest.mark.django_db
class TestDutySeason:
    """Work counts for the last season window begun; before the first, for the first."""

    def test_without_a_season_there_is_none(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        assert queries.duty_season(commons_id=commons_id, day=MARCH.first) is None

    @pytest.mark.parametrize(
        ("day", "window"),
        [
            (date(2020, 1, 1), builders.SEASON),
            (date(2026, 3, 1), builders.SEASON),
            (date(2027, 2, 28), builders.SEASON),
            (date(2027, 3, 1), builders.NEXT_SEASON),
            (date(2029, 1, 1), builders.NEXT_SEASON),
        ],
    )
    def test_by_day(self, day: date, window: DateRange, commons_id: int, hand: Hand) -> None:
        builders.open_seasons(commons_id=commons_id, hand=hand, during=builders.NEXT_SEASON)
        assert queries.duty_season(commons_id=commons_id, day=day) == window


@pytest.mark.django_db
def test_rows_are_of_the_kinds_asked_for(commons_id: int, hand: Hand) -> None:
    (receipt,) = builders.land(commons_id=commons_id, hand=hand, slips=[builders.slip("A1")])
    (row,) = queries.rows(commons_id=commons_id, kinds=(queries.WITHDRAWAL,), during=MARCH)
    assert (row.number, row.subject, row.day) == (receipt.number, 1, date(2026, 3, 2))
    assert queries.rows(commons_id=commons_id, kinds=(queries.WORK,), during=MARCH) == []
    assert journal.head(commons_id=commons_id).size == receipt.number
