from datetime import date
from fractions import Fraction

import pytest

from governance import facts
from governance.periods import DateRange

ALL_2026 = DateRange(first=date(2026, 1, 1), until=date(2027, 1, 1))


def gifts(*, amounts: list[int], days: list[int]) -> facts.Contributions:
    count = len(amounts)
    return facts.Contributions(
        kind="work",
        base="min",
        duties=("6.1",),
        entry=facts.column(range(count)),
        member=facts.column([1] * count),
        day=facts.column(days),
        amount=facts.column(amounts),
        duty=facts.column([0] * count),
    )


def member(number: int, *, shares: tuple[facts.Dated[Fraction], ...] = ()) -> facts.Member:
    return facts.Member(
        number=number,
        household=number,
        classes=(facts.Dated(value="licensed", during=ALL_2026, entry=1),),
        shares={"clams": shares},
        suspended=(),
    )


class TestColumns:
    def test_they_are_read_only(self):
        table = gifts(amounts=[5], days=[1])
        with pytest.raises(ValueError, match="read-only"):
            table.amount[0] = 6

    def test_of_unequal_length_they_are_refused(self):
        with pytest.raises(facts.UnequalColumns, match="Contributions"):
            gifts(amounts=[5, 6], days=[1])

    @pytest.mark.parametrize("sign", [1, -1])
    def test_amounts_that_could_add_up_past_64_bits_are_refused(self, sign):
        half = sign * 2**62
        assert int(gifts(amounts=[sign * (2**62 - 1)] * 2, days=[1, 1]).amount.sum()) == (
            sign * (2**63 - 2)
        )
        with pytest.raises(facts.SumTooLarge, match="2 amounts"):
            gifts(amounts=[half, half], days=[1, 1])


class TestMember:
    @pytest.mark.parametrize(
        ("day", "held"),
        [
            (date(2025, 12, 31), False),
            (date(2026, 1, 1), True),
            (date(2026, 12, 31), True),
            (date(2027, 1, 1), False),
        ],
    )
    def test_a_class_holds_on_its_days(self, day, held):
        assert member(1).is_in("licensed", day) is held
        assert not member(1).is_in("retired", day)

    def test_shares_of_one_day_add_up_exactly(self):
        from_july = DateRange(first=date(2026, 7, 1), until=date(2027, 1, 1))
        one = member(
            1,
            shares=(
                facts.Dated(value=Fraction(1, 3), during=ALL_2026, entry=1),
                facts.Dated(value=Fraction(1, 7), during=from_july, entry=2),
            ),
        )
        assert one.share_of("clams", date(2026, 6, 30)) == Fraction(1, 3)
        assert one.share_of("clams", date(2026, 7, 1)) == Fraction(10, 21)
        assert one.share_of("mullet", date(2026, 7, 1)) == 0


@pytest.mark.parametrize("numbers", [(2, 1), (1, 1)])
def test_a_roster_out_of_order_is_an_impossibility(numbers):
    with pytest.raises(AssertionError, match="in order of number"):
        facts.Roster(members=tuple(member(number) for number in numbers))
