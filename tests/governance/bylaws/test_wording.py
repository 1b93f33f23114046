"""Clauses as sentences, against sentences written by hand."""

from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import pytest

from governance.bylaws import clauses, documents, wording
from governance.periods import Per
from governance.quantities import Amount, Money, Price

FIXTURE = Path(__file__).parents[3] / "fixtures" / "tarrin_bay" / "bylaws.yaml"
BOOK = documents.read(text=FIXTURE.read_text(encoding="utf-8"), name=FIXTURE.name)

BY_HAND = {
    "1.1": "A member is licensed or retired.",
    "2.1": (
        "The season's allowable of mullet is split among licensed members by their shares, with 2"
        " percent kept in the pool, parts rounded by largest remainder and ties going to the lower"
        " member number."
    ),
    "2.3": (
        "A licensed member must not take more mullet in a season than the member's allotment,"
        " though up to 3 percent beyond that is tolerated; otherwise the ladder “When more was"
        " landed than agreed” applies."
    ),
    "3.1": (
        "The licensed members of a household together must not take more mullet in a day than 90"
        " kilograms, though up to 5 percent beyond that is tolerated; otherwise the ladder “When"
        " more was landed than agreed” applies."
    ),
    "4.1": (
        "A licensed member must not take mullet in inner flats or heron channel from 10 April to 30"
        " April of any year, both days included; otherwise the ladder “When somebody fished where"
        " it was closed” applies."
    ),
    "6.1": (
        "A licensed member must give 2 days of work in each season, 6 hours to the day, or pay 60"
        " EUR for each day not worked; otherwise the ladder “When beach days are neither worked nor"
        " paid for” applies."
    ),
    "7.3": ("What a licensed member takes beyond the allotment of mullet comes off the next one."),
    "ladder.closure": (
        "An act that breaks a clause is answered with a fine of 5 EUR for each kilogram of the"
        " breach but no more than 300 EUR, then a suspension of 21 days, then referral to the"
        " assembly, one step further for each earlier act within the 730 days before it."
    ),
    "quota.clams": (
        "The next season's allowable of clams is advised 45 days before the season as 15 percent of"
        " what the survey found on the zones that may open; the board confirms it with 2 approvals."
    ),
}


@pytest.mark.parametrize("clause_id", BY_HAND)
def test_the_book_of_tarrin_bay(clause_id: str) -> None:
    said = wording.sentence(clause=BOOK.clause(clause_id), book=BOOK)
    assert said == BY_HAND[clause_id]


def limit() -> clauses.QuantityLimit:
    clause = BOOK.clause("3.1")
    assert isinstance(clause, clauses.QuantityLimit)
    return clause


def test_every_span_of_a_limit() -> None:
    said = {
        per: wording.sentence(clause=replace(limit(), per=per), book=BOOK).split("mullet ")[1][:11]
        for per in Per
    }
    assert said == {
        Per.DAY: "in a day th",
        Per.ISO_WEEK: "in a week t",
        Per.MONTH: "in a month ",
        Per.SEASON: "in a season",
    }


def test_a_household_and_its_allotments() -> None:
    clause = replace(limit(), more_than=None, per=Per.SEASON, tolerance=Fraction(0))
    assert wording.sentence(clause=clause, book=BOOK).startswith(
        "The licensed members of a household together must not take more mullet in a season than"
        " their allotments, and nothing beyond that is tolerated;"
    )


def test_a_clause_that_nothing_follows_says_so_by_silence() -> None:
    clause = replace(limit(), head=replace(limit().head, or_else=None, who=None))
    assert wording.sentence(clause=clause, book=BOOK) == (
        "The members of a household together must not take more mullet in a day than 90 kilograms,"
        " though up to 5 percent beyond that is tolerated."
    )


def test_one_of_a_unit_and_parts_of_it() -> None:
    one = replace(limit(), more_than=Amount(number=Fraction(1), unit="t"))
    part = replace(limit(), more_than=Amount(number=Fraction(5, 2), unit="t"))
    assert "than 1 tonne," in wording.sentence(clause=one, book=BOOK)
    assert "than 2.5 tonnes," in wording.sentence(clause=part, book=BOOK)


def test_a_closure_everywhere() -> None:
    clause = BOOK.clause("4.1")
    assert isinstance(clause, clauses.ClosedWindow)
    said = wording.sentence(clause=replace(clause, zones=()), book=BOOK)
    assert said.startswith("A licensed member must not take mullet anywhere from 10 April to")


def test_work_that_cannot_be_paid_off() -> None:
    clause = BOOK.clause("6.1")
    assert isinstance(clause, clauses.WorkDuty)
    said = wording.sentence(clause=replace(clause, instead=None), book=BOOK)
    assert "6 hours to the day, which cannot be paid off;" in said


@pytest.mark.parametrize(
    ("step", "said"),
    [
        (clauses.Warning(), "a written warning"),
        (clauses.Suspension(days=14), "a suspension of 14 days"),
        (clauses.Referral(body="assembly"), "referral to the assembly"),
        (
            clauses.Fine(
                flat=Money(number=Fraction(10), currency="EUR"), per_excess=None, at_most=None
            ),
            "a fine of 10 EUR",
        ),
        (
            clauses.Fine(
                flat=None,
                per_excess=Price(money=Money(number=Fraction(1, 2), currency="EUR"), per="h"),
                at_most=None,
            ),
            "a fine of 0.50 EUR for each hour of the breach",
        ),
    ],
)
def test_steps(step: clauses.Step, said: str) -> None:
    assert wording.step_words(step) == said


def ref(multiple: str, of: str) -> clauses.Reference:
    return clauses.Reference(multiple=Fraction(multiple), of=of)


@pytest.mark.parametrize(
    ("rule", "said"),
    [
        (
            clauses.HockeyStick(
                limit=ref("0.2", "K"), trigger=ref("0.5", "Bmsy"), fraction=ref("0.8", "Fmsy")
            ),
            "nothing at or below 20 percent of the unfished stock, 80 percent of the fraction that"
            " yields most from 50 percent of the stock that yields most upwards, and between the"
            " two a fraction that rises in a straight line;",
        ),
        (
            clauses.FortyTen(
                lower=ref("0.1", "K"),
                upper=ref("0.4", "K"),
                fraction=ref("1", "Fmsy"),
                reading=clauses.FortyTenReading.RAMP_IN_FRACTION,
            ),
            "between the two a fraction that rises in a straight line;",
        ),
        (
            clauses.ConstantEscapement(leave=ref("0.5", "K")),
            "its growth: all that stands above 50 percent of the unfished stock;",
        ),
    ],
)
def test_rules(rule: clauses.Rule, said: str) -> None:
    quota = BOOK.clause("quota.mullet")
    assert isinstance(quota, clauses.PoolTotal)
    assert isinstance(quota.method, clauses.ByGrowthModel)
    clause = replace(quota, method=replace(quota.method, rule=rule))
    assert said in wording.sentence(clause=clause, book=BOOK)
