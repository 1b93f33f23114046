from datetime import date

import pytest

from governance import facts
from governance.bylaws import editions
from governance.compliance import findings, judge
from governance.periods import OPEN_END, DateRange, Per
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Take

BOOK = scenes.one(scenes.limit(), scenes.closed(), scenes.reporting_duty())

# Members 1 and 3 keep one household; member 2 lives alone.
KNOWN = scenes.season(
    (
        Take(entry=1, member=1, kg=30),
        Take(entry=2, member=3, kg=20),
        Take(entry=3, member=2, kg=50),
        Take(entry=4, member=3, day=date(2026, 4, 12), zone="mill_reach"),
        Take(entry=5, member=2, day=date(2026, 4, 20), delay_min=3_000),
    )
)


def judged(
    *, as_of: date = scenes.AFTER, members: frozenset[int] | None = None
) -> tuple[findings.Finding, ...]:
    return judge.judge(editions=BOOK, facts=KNOWN, as_of=as_of, members=members)


def named(found: tuple[findings.Finding, ...]) -> list[tuple[str, int]]:
    return [(one.key.clause, one.key.subject) for one in found]


def test_every_clause_is_judged_and_findings_come_in_order_of_key():
    assert named(judged()) == [("3.2", 1), ("3.2", 2), ("4.1", 3), ("5.1", 2)]


@pytest.mark.parametrize(
    ("as_of", "clauses"),
    [
        (date(2026, 2, 1), []),
        (date(2026, 4, 2), []),
        (date(2026, 4, 3), ["3.2", "3.2"]),
        (date(2026, 4, 12), ["3.2", "3.2", "4.1"]),
        (date(2026, 4, 20), ["3.2", "3.2", "4.1", "5.1"]),
    ],
)
def test_what_has_not_happened_by_the_day_is_not_judged(as_of, clauses):
    assert [one.key.clause for one in judged(as_of=as_of)] == clauses


class TestMembers:
    def test_a_member_is_judged_with_the_household(self):
        (household, closure) = judged(members=frozenset({3}))
        assert (household.key.subject, household.total, household.entries) == (1, 50_000, (1, 2))
        assert closure.key.subject == 3

    def test_findings_on_others_of_the_household_are_left_out(self):
        assert named(judged(members=frozenset({1}))) == [("3.2", 1)]

    @pytest.mark.parametrize("members", [set(), {1}, {2}, {3}, {1, 3}, {1, 2, 3}, {99}])
    def test_the_answer_is_the_whole_answer_filtered(self, members):
        households = {1: {1, 3}, 2: {2}}
        expected = tuple(
            one
            for one in judged()
            if (
                members & households[one.key.subject]
                if one.key.subject_kind is findings.SubjectKind.HOUSEHOLD
                else one.key.subject in members
            )
        )
        assert judged(members=frozenset(members)) == expected


class TestEditions:
    def test_days_before_the_first_edition_are_not_judged(self):
        late = scenes.book(
            scenes.limit(), in_force=DateRange(first=date(2026, 4, 4), until=OPEN_END)
        )
        answer = judge.judge(
            editions=editions.Editions(books=(late,)), facts=KNOWN, as_of=scenes.AFTER
        )
        assert answer == ()

    def test_an_act_is_judged_by_the_edition_of_its_day(self):
        change = date(2026, 4, 15)
        books = (
            scenes.book(
                scenes.closed(zones=("mill_reach",)),
                edition=4,
                in_force=DateRange(first=date(2020, 1, 1), until=change),
            ),
            scenes.book(
                scenes.closed(zones=("pier_sand",)),
                edition=5,
                in_force=DateRange(first=change, until=OPEN_END),
            ),
        )
        takes = [
            Take(entry=10 + day, day=date(2026, 4, day), zone=zone)
            for day in (14, 15)
            for zone in ("mill_reach", "pier_sand")
        ]
        answer = judge.judge(
            editions=editions.Editions(books=books),
            facts=scenes.season(takes),
            as_of=scenes.AFTER,
        )
        assert [(one.edition, one.key.window.first.day) for one in answer] == [(4, 14), (5, 15)]

    @pytest.mark.parametrize(
        "clause",
        [
            scenes.closed(zones=()),
            scenes.order_clause(),
            scenes.reporting_duty(),
            scenes.limit(more_than="1 kg"),
        ],
        ids=lambda clause: type(clause).__name__,
    )
    @pytest.mark.parametrize("suspended", [False, True])
    def test_each_day_is_found_once_by_its_own_edition(self, clause, suspended):
        change = date(2026, 4, 15)
        ranges = (
            DateRange(first=date(2020, 1, 1), until=change),
            DateRange(first=change, until=OPEN_END),
        )
        books = tuple(
            scenes.book(clause, edition=edition, in_force=in_force)
            for edition, in_force in zip((4, 5), ranges, strict=True)
        )
        order = facts.Order(
            entry=77,
            authority="the authority",
            resource="clams",
            zones=(),
            during=scenes.days(date(2026, 4, 1), date(2026, 4, 30)),
        )
        takes = [
            Take(entry=day, member=2, day=date(2026, 4, day), kg=2, delay_min=3_000)
            for day in (14, 15)
        ]
        while_suspended = {"9.9": scenes.ALWAYS} if suspended else {}
        answer = judge.judge(
            editions=editions.Editions(books=books),
            facts=scenes.season(
                takes, members=(scenes.member(2, suspended=while_suspended),), orders=(order,)
            ),
            as_of=scenes.AFTER,
        )
        expected = [(clause.head.id, 4, (14,)), (clause.head.id, 5, (15,))]
        if suspended:
            expected += [("9.9", 4, (14,)), ("9.9", 5, (15,))]
        assert [(one.key.clause, one.edition, one.entries) for one in answer] == expected

    def test_a_clause_that_comes_in_mid_window_judges_from_the_next_window(self):
        change = date(2026, 4, 15)
        books = (
            scenes.book(edition=4, in_force=DateRange(first=date(2020, 1, 1), until=change)),
            scenes.book(
                scenes.limit(per=Per.MONTH),
                edition=5,
                in_force=DateRange(first=change, until=OPEN_END),
            ),
        )
        takes = [Take(entry=n, kg=50, day=date(2026, n, 20)) for n in (4, 5)]
        answer = judge.judge(
            editions=editions.Editions(books=books),
            facts=scenes.season(takes),
            as_of=scenes.AFTER,
        )
        assert [one.entries for one in answer] == [(5,)]


def test_nobody_and_nothing_are_judged_without_fault():
    empty = scenes.season((), members=())
    everything = scenes.one(
        scenes.limit(), scenes.closed(), scenes.reporting_duty(), scenes.order_clause()
    )
    assert judge.judge(editions=everything, facts=empty, as_of=scenes.AFTER) == ()
