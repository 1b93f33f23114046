from dataclasses import replace
from datetime import date

import pytest

from governance.bylaws import clauses
from governance.compliance import explain, findings, judge
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Take


def finding_of(*held: clauses.Clause, takes: tuple[Take, ...] = ()) -> findings.Finding:
    (one,) = judge.judge(
        editions=scenes.one(*held),
        facts=scenes.season(takes, members=(scenes.member(1), scenes.member(3, household=1))),
        as_of=date(2026, 6, 28),
    )
    return one


def test_a_finding_opens_from_the_clause_to_the_entries():
    takes = (Take(entry=1201, kg=25), Take(entry=1207, member=3, kg=18))
    one = finding_of(scenes.limit(), takes=takes)
    assert explain.explain(finding=one, book=scenes.book(scenes.limit())) == (
        "Clause 3.2: Title of 3.2",
        "Text of 3.2.",
        "About household 1, clams, on 2026-04-03.",
        "Entries 1201, 1207: 25 kg + 18 kg = 43 kg on 2026-04-03.",
        "Limit 40 kg; with 5 % tolerance 42 kg.",
        "Beyond the limit 3 kg; beyond limit and tolerance 1 kg.",
        "It rests on: 1201, 1207.",
        "Total 43 kg; limit 40 kg; breach 1 kg; overuse 3 kg.",
        "What may follow stands in ladder.overdraw; people decide.",
        "Judged by edition 4 of Tarrin Bay Fishing Cooperative, adopted by the assembly on"
        f" 2026-02-14, in force from 2020-01-01. Inputs {one.inputs}.",
    )


def test_a_duty_is_read_in_hours():
    late = Take(entry=12, delay_min=50 * 60 + 30)
    one = finding_of(scenes.reporting_duty(), takes=(late,))
    lines = explain.explain(finding=one, book=scenes.book(scenes.reporting_duty()))
    assert "About member 1, on 2026-04-03." in lines
    assert "Total 50 h 30 min; limit 48 h; breach 2 h 30 min; overuse 2 h 30 min." in lines


def test_no_entry_and_no_ladder_are_said():
    one = replace(
        finding_of(scenes.limit(), takes=(Take(entry=1, kg=50),)), entries=(), or_else=None
    )
    lines = explain.explain(finding=one, book=scenes.book(scenes.limit()))
    assert "It rests on no entry: nothing was recorded." in lines
    assert "The book ties no sanction to this clause: it is reported only." in lines


def test_a_clause_that_the_book_dropped_is_said_to_be_gone():
    one = finding_of(scenes.limit(), takes=(Take(entry=1, kg=50),))
    lines = explain.explain(finding=one, book=scenes.book())
    assert lines[0] == "Clause 3.2, which edition 4 no longer holds."


def test_another_edition_is_refused():
    one = finding_of(scenes.limit(), takes=(Take(entry=1, kg=50),))
    with pytest.raises(AssertionError):
        explain.explain(finding=one, book=scenes.book(scenes.limit(), edition=5))
