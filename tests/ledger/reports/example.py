"""An invented season, made by hand: plain arithmetic, no code under test."""

from datetime import UTC, date, datetime, timedelta
from fractions import Fraction

from governance.advice import records as advised
from ledger.reports import cautions, details, figures

OPENS, CLOSES = date(2026, 3, 1), date(2026, 6, 28)
DAYS = tuple(OPENS + timedelta(days=step) for step in range(120))
PROOF = "entries 1–5,218 · head 7f3a 91c0 · 2026-06-30 18:02 +00:00"
MULLET_GROUNDS = ("north_bar", "heron_channel", "inner_flats", "outer_bay")
CLAM_GROUNDS = ("anvil_sand", "cockle_row", "long_spit", "mill_reach", "pier_sand", "west_hard")


def _days(*, start: int, swing: int, rest: int) -> tuple[figures.DayTake, ...]:
    """Give takes that vary by an uneven pattern, and none on every day of rest."""
    return tuple(
        figures.DayTake(day=day, amount=start + swing * (step * 37 % 11) + 50 * (step % 7))
        for step, day in enumerate(DAYS)
        if step % 7 != rest
    )


def _parts(total: int, names: tuple[str, ...]) -> tuple[figures.ZoneRow, ...]:
    weights = range(2, 2 + len(names))
    amounts = [total * weight // sum(weights) for weight in weights]
    amounts[0] += total - sum(amounts)
    return tuple(
        figures.ZoneRow(zone=name, slips=101 + 17 * index, taken=amount)
        for index, (name, amount) in enumerate(zip(names, amounts, strict=True))
    )


def mullet(*, daily: tuple[figures.DayTake, ...] | None = None) -> figures.ResourceFigures:
    """Give the use of bay mullet, with other daily takes if wanted."""
    rows = _days(start=401_350, swing=38_100, rest=6) if daily is None else daily
    taken = sum(row.amount for row in rows)
    return figures.ResourceFigures(
        code="mullet",
        name="bay mullet",
        base="g",
        unit="kg",
        opens=OPENS,
        closes=CLOSES,
        allowable=68_000_000,
        reserve=1_360_000,
        allotted=66_640_000,
        carried_in=1_204_500,
        taken=taken,
        left=68_000_000 + 1_204_500 - taken,
        slips=2_891,
        members_took=42,
        members_entitled=43,
        daily=rows,
        allowable_steps=(
            figures.AllowableStep(from_day=OPENS, amount=64_000_000),
            figures.AllowableStep(from_day=date(2026, 4, 20), amount=68_000_000),
        ),
        zones=_parts(taken, MULLET_GROUNDS),
        # Left is reserve, given back, carried and unclaimed, less what is owed.
        settlement=figures.SettlementFigures(
            given_back=52_500,
            carried=2_411_250,
            unclaimed=68_000_000 + 1_204_500 - taken - 1_360_000 - 52_500 - 2_411_250 + 96_400,
            owed=96_400,
            after_close=0,
        ),
    )


def clams() -> figures.ResourceFigures:
    """Give the use of clams."""
    rows = _days(start=121_000, swing=13_250, rest=3)
    taken = sum(row.amount for row in rows)
    return figures.ResourceFigures(
        code="clams",
        name="clams",
        base="g",
        unit="kg",
        opens=OPENS,
        closes=CLOSES,
        allowable=22_000_000,
        reserve=0,
        allotted=22_000_000,
        carried_in=0,
        taken=taken,
        left=22_000_000 - taken,
        slips=1_623,
        members_took=38,
        members_entitled=43,
        daily=rows,
        allowable_steps=(figures.AllowableStep(from_day=OPENS, amount=22_000_000),),
        zones=_parts(taken, CLAM_GROUNDS),
        settlement=figures.SettlementFigures(
            given_back=20_500,
            carried=0,
            unclaimed=22_000_000 - taken - 20_500 + 12_350 + 4_250,
            owed=12_350,
            after_close=4_250,
        ),
    )


def _standing(number: int) -> figures.StandingRow:
    allotment = 700_000 + 33_337 * (number % 9)
    taken = allotment - 41_213 * (number % 5) + (96_400 if number == 17 else 0)
    own_clams = 250_000 + 12_571 * (number % 8)
    clams_taken = own_clams - 9_127 * (number % 6)
    retired = number in (41, 42)
    return figures.StandingRow(
        member=number,
        household={43: 6, 44: 19, 45: 31}.get(number, number),
        member_class="retired" if retired else "licensed",
        holdings=()
        if retired
        else (
            figures.HoldingFigures(
                resource="mullet",
                allotment=allotment,
                carried_in=11_005 * (number % 3),
                given_back=5_250 * (number % 2),
                taken=taken,
                left=allotment + 11_005 * (number % 3) - 5_250 * (number % 2) - taken,
            ),
            figures.HoldingFigures(
                resource="clams",
                allotment=own_clams,
                carried_in=0,
                given_back=0,
                taken=clams_taken,
                left=own_clams - clams_taken,
            ),
        ),
        duty_owed=0 if retired else 720,
        duty_rendered=0 if retired else 720 - 45 * (number % 4),
        duty_short=0 if retired else 45 * (number % 4),
        dues_owed=1_250 * (number % 3),
        open_cases=number % 2,
    )


def _risk() -> advised.RiskTable:
    rows = []
    for step in range(12):
        candidate = step * 6_800_000
        below = (0.0, 0.0, 0.001, 0.004, 0.009, 0.016, 0.027, 0.041, 0.058, 0.143, 0.372, 0.811)
        rows.append(
            advised.RiskRow(
                candidate=candidate,
                label={0: "none", 7: "proposed", 10: "as now"}.get(step, ""),
                chance_below=below[step],
                chance_cut=min(1.0, step * step / 121),
                mean_take=candidate - step * 412_345,
                end_median=312_000_000 - step * 19_412_345,
                breaks=below[step] > 0.05,
            )
        )
    return advised.RiskTable(
        limit=68_300_000,
        limit_words="0.2 K",
        cut_words="the allowable after this one is lower",
        horizon_years=20,
        at_most=0.05,
        runs=10_000,
        under_rule=0.011,
        rows=tuple(reversed(rows)),
    )


def history(*, years: int = 46, runs: int = 10_000) -> advised.StockHistory:
    """Give a course of the stock that declines, recovers and is then projected."""
    bands = []
    for step in range(years):
        median = 300_000_000 - 9_700_123 * min(step, 15) + 3_812_777 * max(0, step - 15)
        spread = 9_000_000 + 1_213_331 * abs(step - 25)
        bands.append(
            advised.YearBand(
                year=2000 + step,
                median=median,
                low_50=median - spread,
                high_50=median + spread,
                low_80=median - 2 * spread,
                high_80=median + 2 * spread,
                low_95=median - 3 * spread,
                high_95=median + 3 * spread,
            )
        )
    observed = tuple(
        advised.ObservedStock(
            year=band.year, amount=band.median + 7_000_000 * (band.year * 7 % 5 - 2)
        )
        for band in bands[:26]
    )
    return advised.StockHistory(
        bands=tuple(bands),
        observed=observed,
        first_projected=2026,
        limit=68_300_000,
        trigger=170_750_000,
        runs=runs,
    )


def mullet_advice() -> advised.Advice:
    """Give an advice by a growth model."""
    return advised.Advice(
        resource="mullet",
        clause="quota.mullet",
        season="2027",
        method="A growth model is fitted to 26 years of catch and of a survey index.",
        model="Schaefer growth; the take comes first and the rest grows.",
        data_first_year=2000,
        data_last_year=2025,
        interval="95 of 100 draws lie between them",
        estimates=(
            _estimate("r", "growth of a small stock", 0.38712, 0.2911, 0.4902, "1/a"),
            _estimate("K", "stock without any take", 341_523.4, 301_011.2, 402_218.9, "kg"),
            _estimate("B2026", "the stock now", 198_452.6, 171_011.2, 231_218.9, "kg"),
            _estimate("q", "survey index for each kilogram", 0.0000031842, None, None, "1"),
        ),
        reference_points=(
            _estimate("MSY", "largest take that lasts", 33_052.6, 29_871.0, 37_412.8, "kg"),
            _estimate("Fmsy", "share of the stock that gives it", 0.19356, 0.1456, 0.2451, "1"),
        ),
        rule=(
            "Four fifths of the share that gives the largest lasting take, less below half of the"
            " stock without any take, nothing below a fifth of it."
        ),
        present=68_000_000,
        before_bounds=44_120_500,
        proposed=47_600_000,
        bounds=("No more than 30 % less than the season before, unless below the limit.",),
        risk=_risk(),
        survey_risk=None,
        stock=history(),
        reasons=("The survey index of the last three years lies above the ten-year mean.",),
        cautions=(
            "The model knows one stock without ages; a run of weak year classes is not in it.",
            "Take by people outside the commons is not recorded and not included.",
        ),
        runs=10_000,
        seed=20_260_630,
        made_on=date(2026, 6, 30),
    )


def clam_advice() -> advised.Advice:
    """Give an advice by survey and rate, which uses no chance."""
    return advised.Advice(
        resource="clams",
        clause="quota.clams",
        season="2027",
        method="The biomass that the survey found on the six grounds, times a rate of 15 %.",
        model="None; the survey is taken as it is.",
        data_first_year=2026,
        data_last_year=2026,
        interval="",
        estimates=(_estimate("anvil_sand", "found there", 148_250.0, None, None, "kg"),),
        reference_points=(),
        rule="Fifteen hundredths of the surveyed biomass.",
        present=22_000_000,
        before_bounds=22_237_500,
        proposed=22_237_500,
        bounds=(),
        risk=None,
        survey_risk=advised.SurveyRisk(
            rate="15 %",
            found=148_250_000,
            variation=0.07,
            rows=(
                advised.SurveyRiskRow(candidate=20_000_000, label="", chance_above=0.065),
                advised.SurveyRiskRow(candidate=22_237_500, label="proposed", chance_above=0.5),
            ),
        ),
        stock=None,
        reasons=("The survey found 148,250 kg on the grounds anvil_sand, cockle_row.",),
        cautions=("The survey says nothing of how fast the clams grow.",),
        runs=None,
        seed=None,
        made_on=date(2026, 6, 30),
    )


def _estimate(
    name: str, meaning: str, value: float, low: float | None, high: float | None, unit: str
) -> advised.EstimateRow:
    return advised.EstimateRow(
        name=name, meaning=meaning, value=value, low=low, high=high, unit=unit
    )


def _cases() -> figures.CaseFigures:
    return figures.CaseFigures(
        steps=(
            _step("overdraw", "Taking more than allowed", 1, "warning", 19, 4, 11, 1, 3),
            _step("overdraw", "Taking more than allowed", 2, "fine", 6, 1, 4, 0, 1),
            _step("closure", "Taking where it is closed", 1, "fine", 3, 0, 2, 1, 0),
            _step("paperwork", "Late slips", 1, "warning", 22, 9, 12, 0, 1),
        ),
        states=(
            figures.CountRow(label="checking", count=5),
            figures.CountRow(label="set aside", count=14),
            figures.CountRow(label="done", count=31),
        ),
        set_aside=(
            figures.CountRow(label="the slip was wrong", count=8),
            figures.CountRow(label="engine failure, confirmed", count=6),
        ),
        days_act_to_told=Fraction(13, 2),
        days_told_to_decided=Fraction(17),
    )


def _step(
    ladder: str,
    title: str,
    step: int,
    measure: str,
    opened: int,
    set_aside: int,
    upheld: int,
    overturned: int,
    undecided: int,
) -> figures.CaseStepRow:
    return figures.CaseStepRow(
        ladder=ladder,
        title=title,
        step=step,
        measure=measure,
        opened=opened,
        set_aside=set_aside,
        upheld=upheld,
        overturned=overturned,
        undecided=undecided,
    )


def _findings() -> tuple[figures.FindingRow, ...]:
    rows = (
        ("2.3", "No more than one's allotment of mullet", 3, 1),
        ("3.1", "No more than ninety kilos of mullet a day", 27, 5),
        ("3.2", "No more than forty kilos of clams a day", 14, 2),
        ("4.1", "No nets on the spawning grounds in April", 2, 0),
        ("4.2", "No clams from a closed ground", 4, 1),
        ("5.1", "Slips within forty-eight hours", 61, 7),
        ("6.1", "Two working days a season", 9, 0),
    )
    return tuple(
        figures.FindingRow(
            clause=clause,
            title=title,
            found=found,
            standing=found - withdrawn,
            withdrawn=withdrawn,
        )
        for clause, title, found, withdrawn in rows
    )


def _observations() -> tuple[figures.ObservationRow, ...]:
    surveys = (
        figures.ObservationRow(
            resource="clams",
            kind="ground survey",
            zone=zone,
            year=2026,
            value=Fraction(18_250 + 2_575 * index),
            unit="kg",
        )
        for index, zone in enumerate(CLAM_GROUNDS)
    )
    index = figures.ObservationRow(
        resource="mullet",
        kind="survey index",
        zone="",
        year=2026,
        value=Fraction(9_713, 10_000),
        unit="1",
    )
    return (*surveys, index)


def _finding_details() -> tuple[details.FindingDetail, ...]:
    rows = (
        ("3.1", "household", 31, "g", "kg", 99_500, 90_000, 5_000, (312, 318, 331, 340, 351)),
        ("5.1", "member", 44, "min", "h", 4_499, 2_880, 1_619, (277,)),
        ("6.1", "member", 10, "min", "h", 0, 720, 720, ()),
    )
    return tuple(
        details.FindingDetail(
            number=201 + place,
            clause=clause,
            subject_kind=kind,
            subject=subject,
            first=date(2026, 3, 8 + place),
            last=date(2026, 3, 8 + 2 * place),
            base=base,
            unit=unit,
            total=total,
            limit=limit,
            breach=breach,
            entries=entries,
            standing=place != 1,
        )
        for place, (clause, kind, subject, base, unit, total, limit, breach, entries) in enumerate(
            rows
        )
    )


def _case_details() -> tuple[details.CaseDetail, ...]:
    return (
        details.CaseDetail(
            number=71,
            finding=201,
            ladder="Taking more than allowed",
            state="final",
            step=2,
            measure="fine",
            amount=1_525,
            told_on=date(2026, 3, 17),
            decided_on=date(2026, 4, 2),
            final_on=date(2026, 4, 24),
        ),
        details.CaseDetail(
            number=72,
            finding=202,
            ladder="Late slips",
            state="set aside",
            step=None,
            measure="",
            amount=0,
            told_on=None,
            decided_on=None,
            final_on=None,
        ),
    )


def _next_holdings() -> tuple[details.NextHolding, ...]:
    """Give three members who share 46,648 kg."""
    return (
        details.NextHolding(
            member=3,
            household=3,
            allotment=10_648_000,
            carried_in=411_250,
            owed=0,
            given_back=0,
        ),
        details.NextHolding(
            member=17,
            household=17,
            allotment=12_000_000,
            carried_in=0,
            owed=96_400,
            given_back=8_500,
        ),
        details.NextHolding(
            member=43,
            household=6,
            allotment=24_000_000,
            carried_in=2_000_000,
            owed=0,
            given_back=0,
        ),
    )


def season(*, commons: str = "Tarrin Bay Fishing Cooperative") -> figures.SeasonFigures:
    """Give a full season of figures."""
    return figures.SeasonFigures(
        commons=commons,
        is_demo=True,
        season="2026",
        first=OPENS,
        made_at=datetime(2026, 6, 30, 18, 2, tzinfo=UTC),
        zone="Europe/Dublin",
        proof=PROOF,
        currency="EUR",
        edition=figures.EditionFigures(
            number=4,
            in_force_from=OPENS,
            adopted_by="assembly",
            adopted_on=date(2026, 2, 14),
            votes_for=31,
            votes_against=4,
            votes_abstained=2,
        ),
        resources=(mullet(), clams()),
        names=(
            figures.NameRow(code="2027", name="the season from 2027-03-01"),
            figures.NameRow(code="3.1", name="No more than ninety kilos of mullet a day"),
            figures.NameRow(code="anvil_sand", name="Anvil Sand"),
            figures.NameRow(code="cockle_row", name="Cockle Row"),
            figures.NameRow(code="quota.clams", name="How many clams"),
            figures.NameRow(code="quota.mullet", name="How much mullet"),
        ),
        findings=_findings(),
        finding_details=_finding_details(),
        cases=_cases(),
        case_details=_case_details(),
        dues=(
            figures.MoneyDueRow(kind="fine", count=7, charged=61_350, paid=40_125, open=21_225),
            figures.MoneyDueRow(
                kind="instead of work", count=9, charged=54_000, paid=54_000, open=0
            ),
        ),
        restitution=(figures.RestitutionRow(resource="mullet", count=12, amount=148_900),),
        duties=figures.DutyFigures(
            base="min",
            unit="h",
            owed=30_960,
            rendered=27_315,
            replaced=3_240,
            short=675,
            members_short=6,
        ),
        reporting=figures.ReportingFigures(
            slips=4_514, within_24=3_987, within_48=466, later=61, median_hours=Fraction(37, 4)
        ),
        inspections=(
            figures.InspectionRow(
                member_class="licensed", slips=4_502, checked=411, differences=17
            ),
            figures.InspectionRow(member_class="retired", slips=12, checked=2, differences=0),
        ),
        standings=tuple(_standing(number) for number in range(1, 46)),
        orders=(
            figures.OrderRow(
                authority="The shellfish-water authority",
                resource="clams",
                zones=("mill_reach", "pier_sand"),
                from_day=date(2026, 5, 4),
                until=date(2026, 5, 19),
                reason="a test of the water",
            ),
        ),
        observations=_observations(),
        advice=(mullet_advice(), clam_advice()),
        next_season=(
            figures.NextSeasonRow(
                resource="mullet",
                opens=date(2027, 3, 1),
                closes=date(2027, 6, 28),
                adopted_by="board",
                adopted_on=date(2026, 6, 30),
                allowable=47_600_000,
                reserve=952_000,
                allotted=46_648_000,
                holdings=_next_holdings(),
            ),
        ),
        cautions=cautions.CAUTIONS,
    )
