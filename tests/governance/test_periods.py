from datetime import UTC, date, datetime, timedelta, timezone

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from governance import periods
from governance.periods import DateRange, EmptyRange, Per

SEASON = DateRange(first=date(2026, 3, 1), until=date(2026, 6, 29))


class TestDateRange:
    def test_the_end_is_the_first_day_outside(self):
        assert (SEASON.last, SEASON.length_days) == (date(2026, 6, 28), 120)
        assert SEASON.holds(date(2026, 3, 1))
        assert SEASON.holds(date(2026, 6, 28))
        assert not SEASON.holds(date(2026, 2, 28))
        assert not SEASON.holds(date(2026, 6, 29))

    @pytest.mark.parametrize("until", [date(2026, 3, 1), date(2026, 2, 28)])
    def test_a_range_without_a_day_is_refused(self, until):
        with pytest.raises(EmptyRange, match="begins on 2026-03-01 and ends before 2026-0"):
            DateRange(first=date(2026, 3, 1), until=until)

    @pytest.mark.parametrize(
        ("first", "until", "shared"),
        [
            (date(2026, 2, 1), date(2026, 3, 1), False),
            (date(2026, 2, 1), date(2026, 3, 2), True),
            (date(2026, 6, 28), date(2026, 6, 30), True),
            (date(2026, 6, 29), date(2026, 6, 30), False),
            (date(2026, 4, 1), date(2026, 4, 2), True),
            (date(2025, 1, 1), date(2027, 1, 1), True),
        ],
    )
    def test_ranges_that_touch_share_no_day(self, first, until, shared):
        other = DateRange(first=first, until=until)
        assert SEASON.overlaps(other) is shared
        assert other.overlaps(SEASON) is shared

    def test_its_days_in_order(self):
        leap = DateRange(first=date(2028, 2, 28), until=date(2028, 3, 2))
        assert list(leap.days()) == [date(2028, 2, 28), date(2028, 2, 29), date(2028, 3, 1)]


@pytest.mark.parametrize(
    ("day", "number"),
    [
        (date(1970, 1, 1), 0),
        (date(1969, 12, 31), -1),
        # Seconds since 1970 of POSIX 4.16's example 2001-09-09 01:46:40 UTC, 1,000,000,000, over
        # 86,400.
        (date(2001, 9, 9), 11_574),
    ],
)
def test_days_are_numbered_from_1970(day, number):
    assert periods.day_number(day) == number
    assert periods.date_of(number) == day


class TestLocalDay:
    @pytest.mark.parametrize(
        ("instant", "day"),
        [
            (datetime(2026, 4, 14, 22, 59, tzinfo=UTC), date(2026, 4, 14)),
            (datetime(2026, 4, 14, 23, 0, tzinfo=UTC), date(2026, 4, 15)),  # summer time
            (datetime(2026, 1, 14, 23, 59, tzinfo=UTC), date(2026, 1, 14)),
            (datetime(2026, 1, 14, 22, 0, tzinfo=timezone(-timedelta(hours=2))), date(2026, 1, 15)),
        ],
    )
    def test_the_day_in_dublin(self, instant, day):
        assert periods.local_day(instant, zone="Europe/Dublin") == day

    def test_an_instant_without_an_offset_is_refused(self):
        naive = datetime(2026, 1, 14, tzinfo=UTC).replace(tzinfo=None)
        with pytest.raises(ValueError, match="no offset"):
            periods.local_day(naive, zone="Europe/Dublin")


class TestStartOfDay:
    def test_in_winter_and_in_summer(self):
        winter = periods.start_of_day(date(2026, 1, 14), zone="Europe/Dublin")
        summer = periods.start_of_day(date(2026, 4, 14), zone="Europe/Dublin")
        assert winter == datetime(2026, 1, 14, 0, tzinfo=UTC)
        assert summer == datetime(2026, 4, 13, 23, tzinfo=UTC)

    def test_a_day_without_a_midnight_begins_when_the_clock_jumps(self):
        # Beirut's clocks go from 00:00 +02:00 to 01:00 on the last Sunday of March (from memory).
        begins = periods.start_of_day(date(2024, 3, 31), zone="Asia/Beirut")
        assert begins == datetime(2024, 3, 30, 22, tzinfo=UTC)
        assert periods.local_day(begins, zone="Asia/Beirut") == date(2024, 3, 31)
        just_before = begins - timedelta(microseconds=1)
        assert periods.local_day(just_before, zone="Asia/Beirut") == date(2024, 3, 30)


def starts(day: date, per: Per) -> date:
    column = np.array([periods.day_number(day)], dtype=np.int64)
    (start,) = periods.span_starts(column, per=per, season=SEASON).tolist()
    return periods.date_of(start)


class TestSpanStarts:
    @pytest.mark.parametrize(
        ("day", "monday"),
        [
            # ISO 8601: 2019-12-30 is 2020-W01-1 and 2006-12-31 is 2006-W52-7 (verified on public
            # pages of ISO weeks); 2021-01-03 is 2020-W53-7 (computed).
            (date(2019, 12, 30), date(2019, 12, 30)),
            (date(2006, 12, 31), date(2006, 12, 25)),
            (date(2021, 1, 3), date(2020, 12, 28)),
            (date(1969, 12, 31), date(1969, 12, 29)),
        ],
    )
    def test_a_week_begins_on_its_monday(self, day, monday):
        assert starts(day, Per.ISO_WEEK) == monday

    @pytest.mark.parametrize(
        ("day", "first"),
        [
            (date(2028, 2, 29), date(2028, 2, 1)),
            (date(2026, 12, 31), date(2026, 12, 1)),
            (date(1969, 12, 31), date(1969, 12, 1)),
        ],
    )
    def test_a_month_begins_on_its_first(self, day, first):
        assert starts(day, Per.MONTH) == first

    def test_a_day_begins_itself_and_a_season_on_its_first_day(self):
        assert starts(date(2026, 4, 3), Per.DAY) == date(2026, 4, 3)
        assert starts(date(2026, 4, 3), Per.SEASON) == date(2026, 3, 1)

    @given(day=st.dates(min_value=date(1900, 1, 1), max_value=date(2199, 12, 31)))
    def test_the_standard_librarys_calendar_agrees(self, day):
        assert starts(day, Per.ISO_WEEK) == date.fromisocalendar(*day.isocalendar()[:2], 1)
        assert starts(day, Per.MONTH) == day.replace(day=1)
