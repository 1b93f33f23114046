"""How figures are written: cases worked by hand."""

from datetime import UTC, datetime
from fractions import Fraction

import pytest

from ledger.reports import numbers, outline


@pytest.mark.parametrize(
    ("probability", "words"),
    [
        (0.0, "in no run (0.0 %)"),
        (0.0004, "under 0.1 %"),
        (0.001, "under 1 in 40 (0.1 %)"),
        (0.0249, "under 1 in 40 (2.5 %)"),
        (0.025, "1 in 20 (2.5 %)"),
        (0.146, "3 in 20 (14.6 %)"),
        (0.5, "10 in 20 (50.0 %)"),
        (0.975, "20 in 20 (97.5 %)"),
        (0.98, "over 39 in 40 (98.0 %)"),
        (0.9996, "over 99.9 %"),
        (1.0, "in every run (100.0 %)"),
    ],
)
def test_a_chance_is_written_as_people_count(probability: float, words: str) -> None:
    assert numbers.chance(probability).replace("\u00a0", " ") == words


@pytest.mark.parametrize(
    ("probability", "words"),
    [
        (0.0, "under 0.1 %"),
        (1e-300, "under 0.1 %"),
        (0.5, "10 in 20 (50.0 %)"),
        (1.0, "over 99.9 %"),
    ],
)
def test_a_chance_that_no_run_counts_is_never_a_certainty(probability: float, words: str) -> None:
    assert numbers.reckoned_chance(probability).replace("\u00a0", " ") == words


@pytest.mark.parametrize(
    ("grams", "words"),
    [
        (72_264_270, "72,264 kg"),
        (22_372_500, "22,373 kg"),
        (1_000, "1 kg"),
        (999, "0.999 kg"),
        (0, "0 kg"),
        (-5_190, "-5 kg"),
    ],
)
def test_an_amount_in_a_sentence_is_rounded_to_whole_units(grams: int, words: str) -> None:
    assert numbers.whole_amount(grams, base="g", unit="kg").replace("\u00a0", " ") == words


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (348_123.7, "348,100"),
        (148_250.0, "148,300"),
        (0.38712, "0.3871"),
        (0.0000031842, "0.000003184"),
        (-12.3456, "-12.35"),
        (0.0, "0"),
        (99_999.6, "100,000"),
        (7.0, "7.000"),
    ],
)
def test_an_estimate_has_four_significant_digits(value: float, text: str) -> None:
    assert numbers.significant(value) == text


def test_amounts_and_money_are_exact() -> None:
    assert numbers.amount(43_000, base="g", unit="kg") == "43"
    assert numbers.amount(-1_234_567, base="g", unit="kg") == "-1,234.567"
    assert numbers.amount_with_unit(90, base="min", unit="h") == "1.5\u00a0h"
    assert numbers.money(1_250, currency="EUR") == "12.50"
    assert numbers.money(1_250, currency="JPY") == "1,250"
    assert numbers.tenths(Fraction(-1, 4)) == "-0.3"
    assert numbers.percent(Fraction(9_179, 10_000)) == "91.8\u00a0%"


def test_a_moment_is_written_in_the_commons_zone_with_its_offset() -> None:
    moment = datetime(2026, 6, 30, 18, 2, tzinfo=UTC)
    assert numbers.moment(moment, zone="Europe/Dublin") == "2026-06-30 19:02+01:00"


def test_counts_have_their_noun() -> None:
    assert numbers.many(0, one="slip", more="slips") == "no slips"
    assert numbers.many(1, one="slip", more="slips") == "1 slip"
    assert numbers.many(4_512, one="slip", more="slips") == "4,512 slips"


def test_a_column_of_numbers_is_written_to_equally_many_decimals() -> None:
    rows = outline.aligned(
        (outline.text("1.5 kg"), outline.exact(value)) for value in (Fraction(12), Fraction(5, 4))
    )
    assert [row[1].text for row in rows] == ["12.00", "1.25"]
    assert [row[0].text for row in rows] == ["1.5 kg", "1.5 kg"]
    mixed = outline.aligned(((outline.blank(),), (outline.exact(Fraction(1, 8)),)))
    assert [row[0].text for row in mixed] == ["–", "0.125"]
