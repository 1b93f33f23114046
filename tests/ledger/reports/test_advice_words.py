"""The sentences about the advice: names for codes, reference points in words, the verdict."""

import dataclasses

import pytest

from governance.advice import records as advised
from ledger.reports import advice_words, sections
from tests.ledger.reports import example

SEASON = example.season()
MULLET = SEASON.resources[0]


def _said(sentence: str) -> str:
    return sentence.replace("\u00a0", " ")


def _risk(*, under_rule: float, at_most: float | None) -> advised.RiskTable:
    table = example.mullet_advice().risk
    assert table is not None
    return dataclasses.replace(table, under_rule=under_rule, at_most=at_most)


@pytest.mark.parametrize(
    ("under_rule", "at_most", "ends"),
    [
        (0.0, 0.05, "is in no run (0.0 %): within the 5.0 % that the book accepts."),
        (0.0004, 0.05, "is under 0.1 %: within the 5.0 % that the book accepts."),
        (0.05, 0.05, "is 1 in 20 (5.0 %): within the 5.0 % that the book accepts."),
        (0.0501, 0.05, "is 1 in 20 (5.0 %): beyond the 5.0 % that the book accepts."),
        (0.3, None, "is 6 in 20 (30.0 %); the book names no chance that it accepts."),
    ],
)
def test_the_books_chance_governs_the_rule_and_not_a_fixed_take(
    under_rule: float, at_most: float | None, ends: str
) -> None:
    said = _said(advice_words.risk(_risk(under_rule=under_rule, at_most=at_most)))
    assert said.startswith(
        "With the take set anew each season by the book's rule, the chance of falling below 0.2 K,"
        " a fifth of the stock without any take, at some time within 20 years"
    )
    assert said.endswith(ends)


@pytest.mark.parametrize(
    ("words", "read"),
    [
        ("0.2 K", "0.2 K, a fifth of the stock without any take"),
        ("0.37 K", "0.37 K, 37.0 % of the stock without any take"),
        ("1 K", "1 K, the stock without any take"),
        (
            "0.5 Bmsy",
            "0.5 Bmsy, half of the stock that gives the largest take that can go on for ever",
        ),
        ("a third of the bay", "a third of the bay"),
    ],
)
def test_a_level_is_said_in_words(words: str, read: str) -> None:
    assert _said(advice_words.level(words)) == read


def test_a_rule_comes_with_what_its_letters_mean() -> None:
    said = advice_words.glossary("Nothing at or below 0.2 K; from there 0.8 Fmsy.")
    assert said.startswith("K is the stock without any take; Fmsy is the part of the stock")
    assert "Bmsy" not in said
    assert advice_words.glossary("15 % of what stands.") == ""


def test_codes_become_names_and_plain_words_stay() -> None:
    assert advice_words.readable(SEASON, "on anvil_sand, cockle_row.") == (
        "on Anvil Sand, Cockle Row."
    )
    assert advice_words.readable(SEASON, "anvil_sandy of 2027") == "anvil_sandy of 2027"
    seen = [
        words
        for section in sections.report(SEASON).sections
        for words in (
            *section.sentences,
            *(point for points in section.lists for point in points.points),
        )
    ]
    assert not [words for words in seen if "anvil_sand" in words or "cockle_row" in words]


def test_a_single_year_of_data_is_named_once() -> None:
    clams, mullet = (
        " ".join(advice_words.method(SEASON, row))
        for row in (example.clam_advice(), example.mullet_advice())
    )
    assert "Data: 2026. Made" in clams
    assert "Data: 2000 to 2025. Made" in mullet


def test_the_stock_is_the_most_likely_value_of_the_estimates() -> None:
    said = _said(advice_words.stock(example.mullet_advice(), resource=MULLET))
    assert said.startswith(
        "The stock of bay mullet at the start of 2026 is put at 198,500 kg, the most likely value,"
        " between 171,000 and 231,200 kg (95 of 100 draws lie between them). With the take set"
        " anew each season by the rule, the median of the runs in 2045 is "
    )
    bare = dataclasses.replace(example.mullet_advice(), estimates=())
    # 300,000,000 less 15 times 9,700,123, and 10 times 3,812,777 grams, in 2025.
    assert "is estimated at 192,600 kg in 2025, the median of the runs" in _said(
        advice_words.stock(bare, resource=MULLET)
    )


def test_the_summary_raises_no_alarm_over_a_survey_at_its_own_rate() -> None:
    summary, *rest = sections.report(SEASON).sections
    said = _said(" ".join(summary.lists[0].points))
    assert "For the season from 2027-03-01 the advice proposes an allowable of 22,238 kg" in said
    assert "10 in 20" not in said
    risk = next(
        table
        for section in rest
        for table in section.tables
        if table.caption.startswith("Risk table of clams")
    )
    assert [row[2].text.replace("\u00a0", " ") for row in risk.rows] == [
        "1 in 20 (6.5 %)",
        "10 in 20 (50.0 %)",
    ]
    assert "a chance of a half there is no alarm" in risk.note


def test_an_even_chance_and_a_certainty_are_shaded_apart() -> None:
    table = next(
        table
        for section in sections.report(SEASON).sections
        for table in section.tables
        if table.caption.startswith("Risk table of bay mullet")
    )
    shades = {row[3].text.replace("\u00a0", " "): row[3].fill for row in table.rows}
    # 64 of 121 and all of 121: the example's chances of a cut.
    assert shades["11 in 20 (52.9 %)"] < shades["in every run (100.0 %)"] == 5
