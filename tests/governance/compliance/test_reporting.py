from datetime import date
from fractions import Fraction

import pytest

from governance import facts
from governance.compliance import findings, judge
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Take

TWO_DAYS = 48 * 60
MICROSECOND = Fraction(1, 60_000_000)


def found(known: facts.SeasonFacts, *, who: str | None = None) -> tuple[findings.Finding, ...]:
    clause = scenes.reporting_duty(hours=48, who=who)
    return judge.judge(editions=scenes.one(clause), facts=known, as_of=scenes.AFTER)


@pytest.mark.parametrize("delay", [0, TWO_DAYS - 1, TWO_DAYS])
def test_a_slip_within_the_hours_is_in_time(delay):
    assert found(scenes.season((Take(entry=1, delay_min=delay),))) == ()


@pytest.mark.parametrize(
    ("delay", "total"),
    [
        (TWO_DAYS + MICROSECOND, TWO_DAYS + 1),
        (TWO_DAYS + 1, TWO_DAYS + 1),
        (TWO_DAYS + 1 + MICROSECOND, TWO_DAYS + 2),
    ],
)
def test_a_begun_minute_beyond_counts_whole(delay, total):
    (one,) = found(scenes.season((Take(entry=1, delay_min=delay),)))
    assert (one.total, one.limit) == (total, TWO_DAYS)
    assert one.breach == one.overuse == total - TWO_DAYS


def test_late_slips_of_one_day_are_one_finding_of_no_resource():
    day = date(2026, 4, 3)
    known = scenes.season(
        (
            Take(entry=4, day=day, delay_min=TWO_DAYS + 30),
            Take(entry=2, day=day, delay_min=TWO_DAYS + 150, resource="mullet"),
            Take(entry=3, day=day, delay_min=10),
        )
    )
    (one,) = found(known)
    assert one.key == findings.Key(
        clause="5.1",
        subject_kind=findings.SubjectKind.MEMBER,
        subject=1,
        resource="",
        window=scenes.days(day, day),
    )
    assert (one.entries, one.base, one.total, one.breach) == ((2, 4), "min", 3_030, 150)
    assert one.working == (
        "Entries 2, 4: taken on 2026-04-03, handed in too late;"
        " the longest wait, of entry 2, was 50 h 30 min.",
        "Allowed 48 h; beyond it 2 h 30 min.",
    )


def test_days_and_members_are_found_apart():
    late = TWO_DAYS + 60
    known = scenes.season(
        (
            Take(entry=1, day=date(2026, 4, 3), delay_min=late),
            Take(entry=2, day=date(2026, 4, 4), delay_min=late),
            Take(entry=3, day=date(2026, 4, 3), delay_min=late, member=3),
        )
    )
    assert [(one.key.subject, one.entries) for one in found(known)] == [
        (1, (1,)),
        (1, (2,)),
        (3, (3,)),
    ]


def test_members_outside_the_class_are_out_of_reach():
    members = (scenes.member(1, classes={}), scenes.member(2))
    takes = [Take(entry=n, member=n, delay_min=TWO_DAYS + 60) for n in (1, 2)]
    known = scenes.season(takes, members=members)
    assert [one.key.subject for one in found(known, who="licensed")] == [2]
