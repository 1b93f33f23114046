"""What holds for every kind of clause: a new kind without a fixture here fails."""

import re
import typing
from dataclasses import dataclass
from datetime import date
from fractions import Fraction

import pytest

from governance import facts
from governance.bylaws import clauses
from governance.compliance import explain, findings, judge
from governance.periods import DateRange
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Gift, Take

TWO_DAYS = 48 * 60


@dataclass(frozen=True, slots=True, kw_only=True)
class Fixture:
    """A clause, a season and what must be found.

    ``expected`` rows are worked by hand: subject, total, limit, breach, overuse, entries.
    """

    clause: clauses.Clause
    known: facts.SeasonFacts
    expected: tuple[tuple[int, int, int, int, int, tuple[int, ...]], ...] = ()


# Breaks every binding clause below at once: too much, in a closed ground, slip too late.
CROWDED = scenes.season(
    (
        Take(entry=3, day=date(2026, 5, 4), kg=30, zone="mill_reach", delay_min=TWO_DAYS + 90),
        Take(entry=1, day=date(2026, 5, 4), kg=13, member=3, zone="pier_sand"),
        Take(entry=2, day=date(2026, 5, 4), kg=10, member=2, zone="mill_reach"),
    ),
    work=(Gift(entry=8, member=1, amount=720), Gift(entry=9, member=2, amount=400)),
    money=(Gift(entry=10, member=2, amount=3_000),),
    orders=(
        facts.Order(
            entry=77,
            authority="the authority",
            resource="clams",
            zones=("mill_reach",),
            during=DateRange(first=date(2026, 5, 4), until=date(2026, 5, 19)),
        ),
    ),
)

STOCK = clauses.Reference(multiple=Fraction(1, 2), of="K")

FIXTURES: dict[type, Fixture] = {
    clauses.QuantityLimit: Fixture(
        clause=scenes.limit(),
        known=CROWDED,
        expected=((1, 43_000, 40_000, 1_000, 3_000, (1, 3)),),
    ),
    clauses.ClosedWindow: Fixture(
        clause=scenes.closed(first=(5, 4), last=(5, 4), zones=("pier_sand",)),
        known=CROWDED,
        expected=((3, 13_000, 0, 13_000, 13_000, (1,)),),
    ),
    clauses.OutsideOrder: Fixture(
        clause=scenes.order_clause(),
        known=CROWDED,
        expected=(
            (1, 30_000, 0, 30_000, 30_000, (3,)),
            (2, 10_000, 0, 10_000, 10_000, (2,)),
        ),
    ),
    clauses.ReportingDuty: Fixture(
        clause=scenes.reporting_duty(),
        known=CROWDED,
        expected=((1, TWO_DAYS + 90, TWO_DAYS, 90, 90, (3,)),),
    ),
    # Member 2: 400 min worked, 30 EUR at 60 EUR for 360 min are 180: 580 of 720.
    clauses.WorkDuty: Fixture(
        clause=scenes.work_duty(),
        known=CROWDED,
        expected=((2, 580, 720, 140, 140, (9, 10)), (3, 0, 720, 720, 720, ())),
    ),
    clauses.Membership: Fixture(
        clause=clauses.Membership(head=scenes.head("1.1"), classes=("licensed",)), known=CROWDED
    ),
    clauses.Allocation: Fixture(
        clause=clauses.Allocation(
            head=scenes.head("2.1"),
            resource="clams",
            basis=clauses.Basis.SHARES,
            rounding=clauses.Apportionment.LARGEST_REMAINDER,
            reserve=Fraction(0),
        ),
        known=CROWDED,
    ),
    clauses.CarryOver: Fixture(
        clause=clauses.CarryOver(
            head=scenes.head("7.1"), resource="clams", at_most=Fraction(1, 10)
        ),
        known=CROWDED,
    ),
    clauses.Payback: Fixture(
        clause=clauses.Payback(head=scenes.head("7.3"), resource="clams", factor=Fraction(1)),
        known=CROWDED,
    ),
    clauses.SanctionLadder: Fixture(
        clause=clauses.SanctionLadder(
            head=scenes.head("ladder.overdraw"),
            window_days=730,
            restore=True,
            steps=(clauses.Warning(),),
        ),
        known=CROWDED,
    ),
    clauses.Procedure: Fixture(
        clause=clauses.Procedure(
            head=scenes.head("8.1"),
            answer_days=14,
            answer_to_warning_days=7,
            appeal_days=21,
            appeal_to="assembly",
        ),
        known=CROWDED,
    ),
    clauses.PoolTotal: Fixture(
        clause=clauses.PoolTotal(
            head=scenes.head("quota.clams"),
            resource="clams",
            method=clauses.BySurvey(rate=Fraction(15, 100)),
            up_at_most=None,
            down_at_most=None,
            unless_below=STOCK,
            risk=None,
            review_days=45,
            confirm_by="board",
            approvals=2,
        ),
        known=CROWDED,
    ),
}

KINDS = pytest.mark.parametrize(
    "kind", typing.get_args(clauses.Clause), ids=lambda kind: kind.__name__
)


def judged(
    fixture: Fixture,
    *,
    known: facts.SeasonFacts | None = None,
    members: frozenset[int] | None = None,
) -> tuple[findings.Finding, ...]:
    return judge.judge(
        editions=scenes.one(fixture.clause),
        facts=fixture.known if known is None else known,
        as_of=scenes.AFTER,
        members=members,
    )


def test_every_kind_has_a_fixture_of_its_own():
    assert set(FIXTURES) == set(typing.get_args(clauses.Clause))
    assert all(type(fixture.clause) is kind for kind, fixture in FIXTURES.items())


@KINDS
def test_what_is_found_is_what_was_worked_by_hand(kind):
    found = judged(FIXTURES[kind])
    rows = tuple(
        (one.key.subject, one.total, one.limit, one.breach, one.overuse, one.entries)
        for one in found
    )
    assert rows == FIXTURES[kind].expected


@KINDS
def test_a_finding_names_its_clause_edition_and_ladder(kind):
    clause = FIXTURES[kind].clause
    for one in judged(FIXTURES[kind]):
        assert one.key.clause == clause.head.id
        assert (one.edition, one.or_else) == (4, clause.head.or_else)
        assert one.breach > 0
        assert one.working and all(line.endswith(".") for line in one.working)
        assert re.fullmatch("[0-9a-f]{64}", one.inputs)


@KINDS
def test_a_kind_that_binds_somebody_heeds_its_class(kind):
    fixture = FIXTURES[kind]
    outsiders = tuple(
        scenes.member(number, household=household, classes={"retired": scenes.ALWAYS})
        for number, household in ((1, 1), (2, 2), (3, 1))
    )
    known = facts.SeasonFacts(
        season=CROWDED.season,
        roster=facts.Roster(members=outsiders),
        withdrawals=CROWDED.withdrawals,
        work=CROWDED.work,
        money=CROWDED.money,
        orders=CROWDED.orders,
        allotments={},
    )
    licensed = scenes.with_head(fixture.clause, who="licensed")
    retired = scenes.with_head(fixture.clause, who="retired")
    assert judged(Fixture(clause=licensed, known=known)) == ()
    assert len(judged(Fixture(clause=retired, known=known))) == len(fixture.expected)


@KINDS
def test_the_order_of_rows_is_no_input(kind):
    for order in ([2, 1, 0], [1, 2, 0]):
        known = scenes.shuffled(CROWDED, order)
        assert judged(FIXTURES[kind], known=known) == judged(FIXTURES[kind])


@KINDS
def test_restricting_is_filtering(kind):
    whole = judged(FIXTURES[kind])
    for household in ({1, 3}, {2}):
        expected = tuple(one for one in whole if one.key.subject in household)
        assert judged(FIXTURES[kind], members=frozenset(household)) == expected


@KINDS
def test_a_clause_out_of_force_finds_nothing(kind):
    past = DateRange(first=date(2020, 1, 1), until=scenes.SEASON.first)
    clause = scenes.with_head(FIXTURES[kind].clause, in_force=past)
    assert judged(Fixture(clause=clause, known=CROWDED)) == ()


@KINDS
def test_every_finding_can_be_explained(kind):
    fixture = FIXTURES[kind]
    for one in judged(fixture):
        lines = explain.explain(finding=one, book=scenes.book(fixture.clause))
        assert set(one.working) <= set(lines)
        assert any(fixture.clause.head.text in line for line in lines)
