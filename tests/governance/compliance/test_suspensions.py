from datetime import date

import pytest

from governance import facts
from governance.bylaws import clauses
from governance.compliance import findings, judge
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Take

TWO_WEEKS = scenes.days(date(2026, 5, 1), date(2026, 5, 14))


def found(
    takes: tuple[Take, ...], *held: clauses.Clause, member: facts.Member | None = None
) -> tuple[findings.Finding, ...]:
    suspended = scenes.member(1, suspended={"3.2": TWO_WEEKS}) if member is None else member
    known = scenes.season(takes, members=(suspended, scenes.member(2)))
    return judge.judge(editions=scenes.one(*held), facts=known, as_of=scenes.AFTER)


@pytest.mark.parametrize(
    ("day", "breaches"),
    [
        (date(2026, 4, 30), 0),
        (date(2026, 5, 1), 1),
        (date(2026, 5, 14), 1),
        (date(2026, 5, 15), 0),
    ],
)
def test_a_suspension_holds_on_its_days(day, breaches):
    assert len(found((Take(entry=1, day=day),), scenes.limit())) == breaches


def test_any_take_under_suspension_is_found_under_the_clause_broken_before():
    day = date(2026, 5, 3)
    takes = (
        Take(entry=2, day=day, kg=1),
        Take(entry=1, day=day, kg=2),
        Take(entry=3, day=day, member=2),
    )
    (one,) = found(takes, scenes.limit())
    assert one.key == findings.Key(
        clause="3.2",
        subject_kind=findings.SubjectKind.MEMBER,
        subject=1,
        resource="clams",
        window=scenes.days(day, day),
    )
    assert (one.total, one.limit, one.breach, one.overuse) == (3_000, 0, 3_000, 3_000)
    assert (one.entries, one.or_else) == ((1, 2), "ladder.overdraw")
    assert one.working == (
        "Entries 1, 2: 2 kg + 1 kg = 3 kg on 2026-05-03.",
        "Entry 900 suspended the member for clause 3.2 from 2026-05-01 to 2026-05-14.",
        "Nothing was allowed: all of it, 3 kg, lies beyond the limit.",
    )


def test_each_resource_is_found_apart():
    day = date(2026, 5, 3)
    takes = (Take(entry=1, day=day), Take(entry=1, day=day, resource="mullet"))
    assert [one.key.resource for one in found(takes, scenes.limit())] == ["clams", "mullet"]


def test_of_two_suspensions_the_first_is_named():
    member = scenes.member(
        1,
        suspended={
            "3.2": TWO_WEEKS,
            "4.1": scenes.days(date(2026, 4, 20), date(2026, 5, 10)),
        },
    )
    (one,) = found((Take(entry=1, day=date(2026, 5, 3)),), scenes.limit(), member=member)
    assert one.key.clause == "4.1"


def test_a_suspension_under_a_ladder_leads_back_to_that_ladder():
    ladder = clauses.SanctionLadder(
        head=scenes.head("ladder.overdraw"), window_days=730, restore=False, steps=()
    )
    member = scenes.member(1, suspended={"ladder.overdraw": TWO_WEEKS})
    (one,) = found((Take(entry=1, day=date(2026, 5, 3)),), ladder, member=member)
    assert (one.key.clause, one.or_else) == ("ladder.overdraw", "ladder.overdraw")


def test_a_suspension_outlives_its_clause():
    (one,) = found((Take(entry=1, day=date(2026, 5, 3)),))
    assert (one.key.clause, one.or_else) == ("3.2", None)


def test_the_same_clause_broken_again_under_suspension_is_one_finding():
    member = scenes.member(1, suspended={"4.1": scenes.days(date(2026, 4, 1), date(2026, 4, 30))})
    takes = (
        Take(entry=1, day=date(2026, 4, 12), zone="mill_reach", kg=2),
        Take(entry=2, day=date(2026, 4, 12), zone="pier_sand", kg=3),
    )
    (one,) = found(takes, scenes.closed(), member=member)
    assert (one.breach, one.entries) == (5_000, (1, 2))
    assert any("suspended" in line for line in one.working)
    assert any("Closed each year" in line for line in one.working)
