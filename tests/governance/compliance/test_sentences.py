from datetime import date
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from governance import quantities
from governance.compliance import sentences
from governance.periods import OPEN_END, DateRange
from tests.governance.compliance import scenes


@pytest.mark.parametrize(
    ("minutes", "text"),
    [(0, "0 min"), (59, "59 min"), (60, "1 h"), (3030, "50 h 30 min"), (60_000, "1,000 h")],
)
def test_minutes_are_read_as_hours(minutes, text):
    assert sentences.hours(minutes) == text


def test_a_window_of_one_day_is_a_day():
    one = scenes.days(date(2026, 4, 3), date(2026, 4, 3))
    assert sentences.when(one) == "on 2026-04-03"
    assert sentences.when(scenes.SEASON) == "from 2026-03-01 to 2026-06-28"


def test_a_window_that_nobody_has_ended_goes_on():
    opened = DateRange(first=date(2026, 4, 3), until=OPEN_END)
    assert sentences.when(opened) == "from 2026-04-03 until further notice"


@pytest.mark.parametrize(
    ("numbers", "text"),
    [
        ((7,), "Entry 7"),
        ((7, 8), "Entries 7, 8"),
        (tuple(range(1, 9)), "Entries 1, 2, 3, 4, 5, 6, 7, 8"),
        (tuple(range(1, 10)), "9 entries from 1 to 9"),
    ],
)
def test_few_entries_are_listed_and_many_counted(numbers, text):
    assert sentences.listed(numbers) == text


def test_a_figure_is_hours_for_a_duty_and_the_reading_unit_for_a_take():
    book = scenes.book()
    duty = sentences.figure(amount=90, base="min", resource="", book=book)
    take = sentences.figure(amount=1_500, base="g", resource="clams", book=book)
    assert (duty, take) == ("1 h 30 min", "1.5 kg")


@given(amount=st.integers(-(2**62), 2**62), units=st.sampled_from([("g", "kg"), ("min", "d")]))
def test_amounts_are_written_as_their_exact_value_is(amount, units):
    base, unit = units
    exact = quantities.converted(Fraction(amount), from_unit=base, to_unit=unit)
    text = quantities.amount_text(amount, base=base, unit_code=unit)
    assert text == f"{quantities.decimal_text(exact)} {unit}"
    written = Fraction(text.removesuffix(f" {unit}").replace(",", ""))
    assert abs(written - exact) <= Fraction(1, 2_000_000)
