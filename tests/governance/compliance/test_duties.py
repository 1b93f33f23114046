from datetime import date
from fractions import Fraction

import pytest

from governance import facts
from governance.bylaws import clauses, editions
from governance.compliance import duties, findings, judge
from governance.periods import OPEN_END, DateRange
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Gift

ALONE = (scenes.member(1),)


def found(
    known: facts.SeasonFacts,
    *,
    clause: clauses.WorkDuty | None = None,
    as_of: date = scenes.AFTER,
) -> tuple[findings.Finding, ...]:
    held = scenes.work_duty() if clause is None else clause
    return judge.judge(editions=scenes.one(held), facts=known, as_of=as_of)


class TestShort:
    """Two working days of 6 h are 720 minutes; a day may be paid off with 60 EUR."""

    def test_nothing_rendered_is_the_whole_duty_short(self):
        (one,) = found(scenes.season(members=ALONE))
        assert one.key == findings.Key(
            clause="6.1",
            subject_kind=findings.SubjectKind.MEMBER,
            subject=1,
            resource="",
            window=scenes.SEASON,
        )
        assert (one.total, one.limit, one.breach, one.overuse) == (0, 720, 720, 720)
        assert (one.base, one.entries, one.or_else) == ("min", (), "ladder.shirking")
        assert one.working == (
            "Owed 12 h: 2 × a working day of 6 h.",
            "Nothing was rendered in the season.",
            "Short by 12 h.",
        )

    @pytest.mark.parametrize(("minutes", "shortfall"), [(719, 1), (720, None), (800, None)])
    def test_work_is_counted_to_the_minute(self, minutes, shortfall):
        known = scenes.season(members=ALONE, work=(Gift(entry=9, member=1, amount=minutes),))
        assert [one.breach for one in found(known)] == ([] if shortfall is None else [shortfall])

    def test_work_and_money_add_up(self):
        # 4 h worked; 45 EUR at 60 EUR for 360 min are 270 min; 510 of 720 leave 210.
        known = scenes.season(
            members=ALONE,
            work=(Gift(entry=9, member=1, amount=200), Gift(entry=7, member=1, amount=40)),
            money=(Gift(entry=8, member=1, amount=4_500),),
        )
        (one,) = found(known)
        assert (one.total, one.breach, one.entries) == (510, 210, (7, 8, 9))
        assert one.working == (
            "Owed 12 h: 2 × a working day of 6 h.",
            "Entries 7, 8, 9: worked 4 h.",
            "Paid 45.00 EUR, at 60.00 EUR for each working day: 4 h 30 min.",
            "Short by 3 h 30 min.",
        )

    @pytest.mark.parametrize(("cents", "breaches"), [(12_000, 0), (11_999, 1)])
    def test_the_whole_duty_may_be_paid_off(self, cents, breaches):
        known = scenes.season(members=ALONE, money=(Gift(entry=8, member=1, amount=cents),))
        assert len(found(known)) == breaches

    def test_money_does_not_count_where_the_book_does_not_let_it(self):
        known = scenes.season(
            members=ALONE,
            work=(Gift(entry=7, member=1, amount=700),),
            money=(Gift(entry=8, member=1, amount=12_000),),
        )
        (one,) = found(known, clause=scenes.work_duty(instead=None))
        assert one.breach == 20
        assert "Money does not stand in for this work." in one.working

    def test_gifts_under_another_clause_or_outside_the_season_do_not_count(self):
        known = scenes.season(
            members=ALONE,
            work=(
                Gift(entry=1, member=1, amount=720, duty="6.2"),
                Gift(entry=2, member=1, amount=720, day=date(2026, 2, 28)),
                Gift(entry=3, member=1, amount=720, day=date(2026, 6, 29)),
                Gift(entry=4, member=1, amount=5, day=date(2026, 3, 1)),
                Gift(entry=5, member=1, amount=6, day=date(2026, 6, 28)),
            ),
        )
        (one,) = found(known)
        assert (one.total, one.entries) == (11, (4, 5))

    def test_a_gift_counts_for_its_giver_only(self):
        known = scenes.season(work=(Gift(entry=1, member=2, amount=720),))
        assert [one.key.subject for one in found(known)] == [1, 3]


class TestWhen:
    def test_nobody_is_judged_before_the_season_has_ended(self):
        known = scenes.season(members=ALONE)
        assert found(known, as_of=date(2026, 6, 28)) == ()
        assert len(found(known, as_of=date(2026, 6, 29))) == 1

    def test_who_is_in_the_class_on_the_first_day_owes(self):
        members = (
            scenes.member(
                1, classes={"licensed": DateRange(first=date(2026, 3, 1), until=date(2026, 3, 2))}
            ),
            scenes.member(
                2, classes={"licensed": DateRange(first=date(2026, 3, 2), until=OPEN_END)}
            ),
        )
        answer = found(scenes.season(members=members), clause=scenes.work_duty(who="licensed"))
        assert [one.key.subject for one in answer] == [1]

    def test_the_season_is_judged_by_the_edition_of_its_first_day(self):
        change = date(2026, 4, 15)
        books = (
            scenes.book(
                scenes.work_duty(work_days=Fraction(1)),
                in_force=DateRange(first=date(2020, 1, 1), until=change),
            ),
            scenes.book(
                scenes.work_duty(work_days=Fraction(9)),
                edition=5,
                in_force=DateRange(first=change, until=OPEN_END),
            ),
        )
        answer = judge.judge(
            editions=editions.Editions(books=books),
            facts=scenes.season(members=ALONE),
            as_of=scenes.AFTER,
        )
        assert [(one.edition, one.limit) for one in answer] == [(4, 360)]


@pytest.mark.parametrize(
    ("instead", "cents", "minutes"),
    [
        ("60 EUR/d", 6_000, 360),  # the clause's working day, not 24 hours
        ("60 EUR/d", 100, 6),
        ("60 EUR/d", 116, 6),  # 6.96 minutes, rounded down
        ("0.005 EUR/d", 1, 720),  # half a cent a day
        (None, 6_000, 0),
    ],
)
def test_money_becomes_minutes_rounded_down_once(instead, cents, minutes):
    clause = scenes.work_duty(instead=instead)
    assert duties.minutes_of(clause=clause, paid=cents) == minutes


def test_half_a_minute_owed_is_not_owed():
    clause = scenes.work_duty(work_days=Fraction(1, 720) * 3)  # 1.5 minutes
    known = scenes.season(members=ALONE)
    assert [one.limit for one in found(known, clause=clause)] == [1]
