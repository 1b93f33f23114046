"""The sentences of the report, held to the example's figures by sums done by hand."""

import dataclasses

import pytest

from governance.sanctions.moves import State
from ledger.reports import case_tables, figures, words
from tests.ledger.reports import example

SEASON = example.season()


def _said(sentence: str) -> str:
    return sentence.replace("\u00a0", " ")


def _findings(withdrawn: int) -> figures.SeasonFigures:
    row = figures.FindingRow(
        clause="3.1", title="", found=64, standing=64 - withdrawn, withdrawn=withdrawn
    )
    return dataclasses.replace(SEASON, findings=(row,))


@pytest.mark.parametrize(
    ("withdrawn", "begins"),
    [
        (0, "64 findings were computed. A finding says"),
        (1, "64 findings were computed; 1 was withdrawn after a later entry"),
        (2, "64 findings were computed; 2 were withdrawn after a later entry"),
    ],
)
def test_findings_accuse_nobody(withdrawn: int, begins: str) -> None:
    said = words.findings(_findings(withdrawn))
    assert said.startswith(begins)
    assert said.endswith("not that anybody is guilty.")


def test_cases_are_counted_by_how_they_ended() -> None:
    # 4 + 1 + 0 + 9 set aside, 11 + 4 + 2 + 12 stand, 1 + 0 + 1 + 0 overturned, 3 + 1 + 0 + 1 not.
    assert words.cases(SEASON) == (
        "Of 50 cases, 14 were set aside; 29 were decided and stand; 2 were overturned on appeal;"
        " 5 were not decided yet."
    )


def test_fines_and_payments_in_place_of_work_are_told_apart() -> None:
    assert words.dues(SEASON) == (
        "Fines of 613.50 EUR were charged; 401.25 EUR is paid and 212.25 EUR is open."
        " Apart from that, 9 payments of 540.00 EUR came in place of work."
    )
    only = dataclasses.replace(SEASON, dues=SEASON.dues[1:])
    assert words.dues(only).startswith("No dues in money were charged. Apart from that, 9 pay")


def test_work_says_where_some_gave_more_than_they_owed() -> None:
    # 455.25 + 54 + 11.25 hours are 4.5 more than 516.
    assert _said(words.duties(SEASON)) == (
        "516 h of work was owed; 455.25 h was given and 54 h replaced by money; 6 members are"
        " short by 11.25 h in all. Some gave more than they owed: 4.5 h in all."
    )
    assert SEASON.duties is not None
    even = dataclasses.replace(SEASON.duties, rendered=SEASON.duties.rendered - 270)
    assert "more than they owed" not in words.duties(dataclasses.replace(SEASON, duties=even))


def test_what_was_left_is_told_in_its_parts() -> None:
    mullet, clams = map(_said, words.settlement(SEASON))
    # 8,536 is 1,360 and 52.5 and 2,411.25 and 4,808.65, less 96.4.
    assert mullet == (
        "Of bay mullet, 8,536 kg was left: 1,360 kg was kept in reserve, 53 kg was given back in"
        " the season, off members' allotments, 2,411 kg is carried to the next season, 4,809 kg"
        " went back to the pool unclaimed. 96 kg was taken beyond what members had, and comes off"
        " their next allotments."
    )
    assert "reserve" not in clams


def test_the_next_season_says_what_members_may_take() -> None:
    (sentence,) = words.next_season(SEASON)
    assert _said(sentence) == (
        "The board adopted 47,600 kg of bay mullet on 2026-06-30 for 2027-03-01 to 2027-06-28:"
        " 46,648 kg is allotted and 952 kg kept in reserve. With 2,411 kg carried in and 105 kg"
        " coming off for what was taken beyond a measure, 3 members may take 48,954 kg in all,"
        " from 11,059 kg to 26,000 kg each."
    )


def test_what_is_nought_is_left_out_of_the_next_season() -> None:
    (row,) = SEASON.next_season
    plain = tuple(
        dataclasses.replace(held, carried_in=0, owed=0, given_back=0) for held in row.holdings
    )
    bare = dataclasses.replace(row, allowable=row.allotted, reserve=0, holdings=plain)
    (sentence,) = words.next_season(dataclasses.replace(SEASON, next_season=(bare,)))
    assert _said(sentence).endswith(
        ": all of it is allotted. 3 members may take 46,648 kg in all, from 10,648 kg to 24,000 kg"
        " each."
    )


def test_every_state_of_a_case_is_explained() -> None:
    assert set(case_tables.STATE_MEANINGS) == {state.value.replace("_", " ") for state in State}
    assert all(case_tables.STATE_MEANINGS.values())


def test_recomputing_names_commands_as_they_are_typed() -> None:
    said = " ".join(words.recompute(SEASON))
    assert "“.venv/bin/python manage.py verify”" in said
    assert "“.venv/bin/python manage.py report --commons SLUG --season 2026-03-01”" in said
    assert "at the same head" in said
    assert figures.digest(SEASON) in said
