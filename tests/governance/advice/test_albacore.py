"""Advice on a published series, against estimates that others made of it.

South Atlantic albacore, 1967-1989, of Polacheck, Hilborn & Punt 1993 (CJFAS 50:2597-2607). Their
estimates, from memory: r 0.328, K 239.6 and MSY 19.65 thousand tonnes, q 0.2671. The optimum of the
same likelihood by Nelder-Mead from 18 starts (computed): r 0.31972, K 243.366, q 0.264203, MSY
19.4525, stock of 1990 66.310.
"""

from dataclasses import replace
from fractions import Fraction

import pytest

from governance.advice import by_model
from governance.advice.records import Advice, EstimateRow
from governance.advice.request import Request
from governance.bylaws import clauses
from governance.regeneration import series
from tests.governance.advice import asked
from tests.governance.regeneration import albacore

FIFTH_OF_K = clauses.Reference(multiple=Fraction(1, 5), of="K")
RISK = clauses.Risk(below=FIFTH_OF_K, at_most=Fraction(5, 100))


@pytest.fixture(scope="module")
def advice() -> Advice:
    clause = asked.quota(asked.by_model(), risk=RISK)
    return asked.advised(asked.albacore_request(clause))


def named(advice: Advice) -> dict[str, EstimateRow]:
    return {row.name: row for row in (*advice.estimates, *advice.reference_points)}


class TestEstimates:
    def test_near_the_published_ones(self, advice: Advice) -> None:
        rows = named(advice)
        assert rows["r"].value == pytest.approx(0.328, rel=0.05)
        assert rows["K"].value == pytest.approx(239_600, rel=0.03)
        assert rows["MSY"].value == pytest.approx(19_650, rel=0.02)
        assert rows["q"].value == pytest.approx(0.2671 / 1000, rel=0.03)

    def test_at_the_optimum_that_was_found_elsewhere(self, advice: Advice) -> None:
        rows = named(advice)
        assert rows["r"].value == pytest.approx(0.31972, rel=1e-3)
        assert rows["K"].value == pytest.approx(243_366, rel=1e-3)
        assert rows["MSY"].value == pytest.approx(19_452.5, rel=1e-3)
        assert rows["B1990"].value == pytest.approx(66_310, rel=1e-3)
        assert rows["B1990/K"].value == pytest.approx(66.310 / 243.366, rel=1e-3)
        assert rows["sigma"].value == pytest.approx(0.110365, rel=1e-3)

    def test_schaefers_own_points(self, advice: Advice) -> None:
        """Schaefer 1954: Bmsy is half of K, Fmsy half of r."""
        rows = named(advice)
        assert rows["Bmsy"].value == pytest.approx(rows["K"].value / 2)
        assert rows["Fmsy"].value == pytest.approx(rows["r"].value / 2)

    def test_every_estimate_lies_in_its_interval(self, advice: Advice) -> None:
        for row in named(advice).values():
            assert row.low is not None and row.high is not None
            assert row.low < row.value < row.high, row.name

    def test_the_interval_of_r_is_as_wide_as_the_likelihood(self, advice: Advice) -> None:
        """By the likelihood ratio, on a grid of 0.005, r lies from 0.16 to 0.485 (computed).

        Chances of a flat prior are another measure, so only roughly the same.
        """
        r = named(advice)["r"]
        assert r.low == pytest.approx(0.16, abs=0.06)
        assert r.high == pytest.approx(0.485, abs=0.06)


class TestProposal:
    def test_the_rule_worked_by_hand(self, advice: Advice) -> None:
        """From 0.2 K to 0.5 K the fraction rises to 0.8 Fmsy, and Fmsy is r/2."""
        rows = named(advice)
        r, K, now = (rows[name].value for name in ("r", "K", "B1990"))
        risen = (now - 0.2 * K) / (0.5 * K - 0.2 * K)
        by_hand = 0.8 * r / 2 * risen * now
        assert advice.before_bounds == pytest.approx(by_hand * 1_000, abs=1)

    def test_the_rule_on_the_optimum_found_elsewhere(self, advice: Advice) -> None:
        """0.8 × 0.15986 × (66.310 - 48.673)/73.010 × 66.310 = 2.0486 thousand tonnes."""
        assert advice.before_bounds == pytest.approx(2_048_600, rel=0.01)

    def test_without_a_present_allowable_the_rule_stands(self, advice: Advice) -> None:
        assert advice.proposed == advice.before_bounds
        assert advice.bounds == ()

    def test_the_books_bounds_move_it_and_say_so(self) -> None:
        """3,000 t now: a fall of at most 30 % ends at 2,100 t, above the rule's 2,049."""
        clause = asked.quota(asked.by_model(), up=Fraction(1, 5), down=Fraction(3, 10))
        advice = asked.advised(asked.albacore_request(clause, present=3_000_000))
        assert advice.proposed == 2_100_000
        assert "fall of 30 %" in advice.bounds[0]
        assert any("stops there" in reason for reason in advice.reasons)

    @pytest.mark.parametrize(("below", "proposed"), [("0.2", 2_100_000), ("0.3", None)])
    def test_below_the_exception_the_fall_is_free(self, below: str, proposed: int | None) -> None:
        """The stock of 1990 stands at 0.27 K: above a fifth, below three tenths."""
        clause = asked.quota(
            asked.by_model(),
            down=Fraction(3, 10),
            unless_below=clauses.Reference(multiple=Fraction(below), of="K"),
        )
        advice = asked.advised(asked.albacore_request(clause, present=3_000_000))
        assert advice.proposed == (advice.before_bounds if proposed is None else proposed)


class TestRiskTable:
    def test_more_take_is_never_less_risk(self, advice: Advice) -> None:
        assert advice.risk is not None
        rows = advice.risk.rows
        takes = [row.candidate for row in rows]
        assert len(rows) == 30 and takes == sorted(takes)
        below = [row.chance_below for row in rows]
        cut = [row.chance_cut for row in rows]
        end = [row.end_median for row in rows]
        assert below == sorted(below) and cut == sorted(cut)
        assert end == sorted(end, reverse=True)
        assert below[0] < below[-1] and cut[0] == 0 < cut[-1]

    def test_it_holds_nought_and_the_proposal(self, advice: Advice) -> None:
        assert advice.risk is not None
        labels = {row.label: row.candidate for row in advice.risk.rows if row.label}
        assert labels == {"none": 0, "proposed": advice.proposed}

    def test_what_passes_the_accepted_risk_is_marked(self, advice: Advice) -> None:
        assert advice.risk is not None
        assert advice.risk.at_most == 0.05
        for row in advice.risk.rows:
            assert row.breaks == (row.chance_below > 0.05)

    def test_the_level_is_a_fifth_of_k(self, advice: Advice) -> None:
        assert advice.risk is not None
        fifth = named(advice)["K"].value / 5
        assert advice.risk.limit == pytest.approx(fifth * 1_000, abs=1)
        assert advice.risk.limit_words == "0.2 K"

    def test_a_proposal_that_passes_it_is_not_hidden(self) -> None:
        """The stock stands near the level: one chance in a thousand is soon passed."""
        strict = clauses.Risk(below=FIFTH_OF_K, at_most=Fraction(1, 1000))
        clause = asked.quota(asked.by_model(), risk=strict)
        advice = asked.advised(asked.albacore_request(clause))
        assert advice.risk is not None
        (row,) = (row for row in advice.risk.rows if row.label == "proposed")
        assert row.breaks and row.chance_below > 0.001
        (said,) = (each for each in advice.reasons if "the book accepts 0.1%" in each)
        assert advice.risk.under_rule > 0.001
        assert f"a chance of {advice.risk.under_rule:.1%}" in said

    def test_without_a_bound_of_the_book_nothing_breaks(self) -> None:
        advice = asked.advised(asked.albacore_request())
        assert advice.risk is not None
        assert advice.risk.at_most is None
        assert not any(row.breaks for row in advice.risk.rows)
        assert not any("the book accepts" in each for each in advice.reasons)


class TestHistory:
    def test_past_and_years_to_come_stand_in_a_row(self, advice: Advice) -> None:
        assert advice.stock is not None
        years = [band.year for band in advice.stock.bands]
        assert years == list(range(1967, 1990 + 21))
        assert advice.stock.first_projected == 1990
        for band in advice.stock.bands:
            assert band.low_95 <= band.low_80 <= band.low_50 <= band.median
            assert band.median <= band.high_50 <= band.high_80 <= band.high_95

    def test_the_index_is_scaled_to_the_stock(self, advice: Advice) -> None:
        assert advice.stock is not None
        q = named(advice)["q"].value
        assert [each.year for each in advice.stock.observed] == list(albacore.YEARS)
        first = advice.stock.observed[0]
        assert first.amount == pytest.approx(61.89 / q * 1_000, abs=1)


class TestSeed:
    def test_the_same_seed_gives_the_same_advice(self, advice: Advice) -> None:
        clause = asked.quota(asked.by_model(), risk=RISK)
        assert asked.advised(asked.albacore_request(clause)) == advice

    def test_another_gives_nearly_the_same(self, advice: Advice) -> None:
        clause = asked.quota(asked.by_model(), risk=RISK)
        other = asked.advised(asked.albacore_request(clause, seed=2))
        assert other.proposed == advice.proposed
        assert [row.value for row in other.estimates] == [row.value for row in advice.estimates]
        assert other.risk is not None and advice.risk is not None
        assert other.risk.rows != advice.risk.rows
        for mine, its in zip(advice.risk.rows, other.risk.rows, strict=True):
            # Five standard errors of a chance from 10,000 draws are at most 0.025, of two 0.035.
            assert mine.chance_below == pytest.approx(its.chance_below, abs=0.035)


class TestRefused:
    """What does not bear an advice is refused in words."""

    def refusal(self, request: Request, why: type[Exception]) -> str:
        with pytest.raises(why) as refused:
            asked.advised(request)
        return str(refused.value)

    def test_too_few_years(self) -> None:
        request = asked.albacore_request()
        early = tuple(each for each in request.observations if each.year < 1971)
        words = self.refusal(replace(request, observations=early), series.TooFewYears)
        assert "Found 4 years with an index" in words

    def test_no_index(self) -> None:
        request = asked.without(asked.albacore_request(), kind="index")
        assert "Found 0 years" in self.refusal(request, series.TooFewYears)

    def test_nothing_at_all(self) -> None:
        request = asked.albacore_request(observations=())
        assert "Found 0 years" in self.refusal(request, series.TooFewYears)

    def test_an_index_that_never_moves(self) -> None:
        request = asked.albacore_request()
        flat = tuple(
            replace(each, value=Fraction(40)) if each.kind == "index" else each
            for each in request.observations
        )
        words = self.refusal(replace(request, observations=flat), series.NoContrast)
        assert "index never moves" in words

    def test_a_year_without_a_catch_on_record(self) -> None:
        request = asked.without(asked.albacore_request(), kind="catch", years=(1975, 1976))
        words = self.refusal(request, by_model.CatchMissing)
        assert "1975, 1976" in words and "from 1967 to 1989" in words

    def test_a_catch_of_nought_is_a_catch(self) -> None:
        request = asked.without(asked.albacore_request(), kind="catch", years=(1983,))
        nought = asked.reading("catch", 1983, 0, unit="t")
        found = by_model.series_of(replace(request, observations=(*request.observations, nought)))
        assert found.catches[1983 - 1967] == 0

    def test_a_year_without_an_index_is_none(self) -> None:
        request = asked.without(asked.albacore_request(), kind="index", years=(1970,))
        assert by_model.series_of(request).index[3] is None


class TestSeries:
    def test_the_journals_own_catch_stands_before_an_observed_one(self) -> None:
        request = replace(asked.albacore_request(), catches={1989: 20_000_000})
        assert by_model.series_of(request).catches[-1] == 20_000

    def test_years_from_the_season_on_do_not_count(self) -> None:
        request = asked.albacore_request()
        later = asked.reading("index", 1990, 50)
        found = by_model.series_of(replace(request, observations=(*request.observations, later)))
        assert found.years == albacore.YEARS

    def test_units_meet_in_the_one_for_reading(self) -> None:
        request = asked.albacore_request()
        kilos = tuple(
            replace(each, value=each.value * 1000, unit="kg") if each.kind == "catch" else each
            for each in request.observations
        )
        in_kilos = by_model.series_of(replace(request, observations=kilos))
        assert in_kilos == by_model.series_of(request)


@pytest.mark.parametrize(
    ("rule", "words"),
    [
        (
            asked.HOCKEY_STICK,
            "Nothing at or below 0.2 K; a rising part of the stock up to 0.5 K; from there"
            " 0.8 Fmsy.",
        ),
        (
            clauses.FortyTen(
                lower=clauses.Reference(multiple=Fraction(1, 10), of="K"),
                upper=clauses.Reference(multiple=Fraction(2, 5), of="K"),
                fraction=clauses.Reference(multiple=Fraction(1), of="Fmsy"),
                reading=clauses.FortyTenReading.STRAIGHT_LINE_IN_CATCH,
            ),
            "Nothing at or below 0.1 K; up to 0.4 K the take rises in a straight line; from there"
            " 1 Fmsy.",
        ),
        (
            clauses.ConstantEscapement(leave=clauses.Reference(multiple=Fraction(1), of="Bmsy")),
            "Whatever stands above 1 Bmsy.",
        ),
    ],
)
def test_every_rule_has_its_words_and_its_table(rule: clauses.Rule, words: str) -> None:
    """The other rules, on the bent model, with the take before the growth."""
    method = asked.by_model(
        rule=rule,
        growth=clauses.Growth.PELLA_TOMLINSON,
        shape=Fraction(19, 100),
        sequence=clauses.Sequence.TAKE_THEN_GROW,
    )
    advice = asked.advised(asked.albacore_request(asked.quota(method)))
    assert advice.rule == words
    assert advice.model == (
        "Pella–Tomlinson, shape 0.19; in each season the take comes before the growth."
    )
    assert advice.risk is not None and len(advice.risk.rows) == 30
