"""Every figure of the record stands in the page, the PDF and the workbook, with the same value."""

import dataclasses
import html as markup
import io
import re
import zipfile
from collections.abc import Iterator
from datetime import UTC, date, datetime, timedelta
from decimal import Decimal
from fractions import Fraction
from pathlib import Path
from typing import Any

import matplotlib
import pypdf
import pytest
import python_calamine

from ledger.reports import details, figures, html, pdf, text, xlsx
from tests.ledger.reports import example

SEASON = example.season()
HOSTILE = "=1+1 <script>alert(1)</script> & \"quoted\" 'x' $a_b$ #set [text](size: 1pt) *b*"
# Written with a leading sign that a sheet could take for a formula.
LEADING = ("=2+5", "+2+5", "-2+5", "@SUM(A1)")


@pytest.fixture(scope="module")
def page() -> str:
    return html.season_html(SEASON)


@pytest.fixture(scope="module")
def page_text(page: str) -> str:
    return _page_text(page)


@pytest.fixture(scope="module")
def document() -> bytes:
    return pdf.season_pdf(SEASON)


@pytest.fixture(scope="module")
def document_text(document: bytes) -> str:
    return _pdf_text(document)


@pytest.fixture(scope="module")
def book() -> bytes:
    return xlsx.season_xlsx(SEASON)


def _page_text(page: str) -> str:
    body = page.split("<body>", 1)[1]
    return " ".join(markup.unescape(re.sub(r"<[^>]*>", " ", body)).split())


def _pdf_text(document: bytes) -> str:
    pages = pypdf.PdfReader(io.BytesIO(document)).pages
    return " ".join(" ".join(page.extract_text() for page in pages).split())


def _sheets(book: bytes) -> dict[str, list[list[Any]]]:
    reader = python_calamine.CalamineWorkbook.from_filelike(io.BytesIO(book))
    return {name: reader.get_sheet_by_name(name).to_python() for name in reader.sheet_names}


def _numbers(text: str) -> set[Decimal]:
    found = re.findall(r"(?<![\w.,])-?\d[\d,]*(?:\.\d+)?", text)
    return {Decimal(number.replace(",", "")) for number in found}


def _kilograms(record: Any) -> Iterator[int]:
    """Yield each amount of a record that is kept in grams, found by its field's place."""
    names = {
        figures.ResourceFigures: "allowable reserve allotted carried_in taken left",
        figures.DayTake: "amount",
        figures.AllowableStep: "amount",
        figures.ZoneRow: "taken",
        figures.SettlementFigures: "given_back carried unclaimed",
        figures.HoldingFigures: "allotment carried_in given_back taken left",
        figures.RestitutionRow: "amount",
        figures.NextSeasonRow: "allowable allotted carried_in may_take",
        details.NextHolding: "allotment carried_in may_take",
    }.get(type(record), "")
    yield from (getattr(record, name) for name in names.split())


def _cents(record: Any) -> Iterator[int]:
    if isinstance(record, figures.MoneyDueRow):
        yield from (record.charged, record.paid, record.open)
    if isinstance(record, figures.StandingRow):
        yield record.dues_owed


def _minutes(record: Any) -> Iterator[int]:
    if isinstance(record, figures.StandingRow):
        yield from (record.duty_owed, record.duty_rendered, record.duty_short)
    if isinstance(record, figures.DutyFigures):
        yield from (record.owed, record.rendered, record.replaced, record.short, record.beyond)


def _counts(record: Any) -> Iterator[int]:
    names = {
        figures.ResourceFigures: "slips members_took members_entitled",
        figures.ZoneRow: "slips",
        figures.FindingRow: "found standing withdrawn",
        figures.CaseStepRow: "opened set_aside upheld overturned undecided",
        figures.CountRow: "count",
        figures.MoneyDueRow: "count",
        figures.RestitutionRow: "count",
        figures.DutyFigures: "members_short",
        figures.ReportingFigures: "slips within_24 within_48 later",
        figures.InspectionRow: "slips checked differences",
        figures.StandingRow: "member household open_cases",
        details.FindingDetail: "number subject",
        details.CaseDetail: "number finding",
    }.get(type(record), "")
    yield from (getattr(record, name) for name in names.split())


def _records(record: Any) -> Iterator[Any]:
    """Yield a record and every record inside it."""
    yield record
    for field in dataclasses.fields(record):
        value = getattr(record, field.name)
        for inner in value if isinstance(value, tuple) else (value,):
            if dataclasses.is_dataclass(inner):
                yield from _records(inner)


def _expected() -> set[Decimal]:
    wanted: set[Decimal] = set()
    for record in _records(SEASON):
        wanted |= {Decimal(value) / 1000 for value in _kilograms(record)}
        wanted |= {Decimal(value) / 100 for value in _cents(record)}
        wanted |= {Decimal(value) / 60 for value in _minutes(record)}
        wanted |= {Decimal(value) for value in _counts(record)}
        if isinstance(record, figures.ObservationRow):
            wanted.add(Decimal(record.value.numerator) / record.value.denominator)
    for advice in SEASON.advice:
        wanted |= {
            Decimal(value) / 1000
            for value in (advice.present, advice.before_bounds, advice.proposed)
        }
        for row in advice.risk.rows if advice.risk else ():
            wanted.add(Decimal(row.candidate) / 1000)
    wanted |= {Decimal("6.5"), Decimal("17.0")}
    assert len(wanted) > 300
    return wanted


def _texts() -> set[str]:
    """Return every text of the record, and every day as ISO 8601 writes it."""
    wanted: set[str] = set()
    for record in _records(SEASON):
        for field in dataclasses.fields(record):
            value = getattr(record, field.name)
            if isinstance(value, date) and not isinstance(value, datetime):
                wanted.add(value.isoformat())
            elif field.name in {"name", "title", "measure", "label", "kind", "reason", "authority"}:
                wanted.add(value)
            elif field.name in {"cautions", "reasons", "bounds", "zones"}:
                wanted |= {_named(one) for one in value if isinstance(one, str)}
    return wanted - {""}


def _named(words: str) -> str:
    """Return a text as the page has it, with the names of the two grounds that it names by code."""
    return words.replace("anvil_sand", "Anvil Sand").replace("cockle_row", "Cockle Row")


def test_every_figure_stands_in_the_page(page_text: str) -> None:
    assert _expected() - _numbers(page_text) == set()


def test_every_figure_stands_in_the_pdf(document_text: str) -> None:
    assert _expected() - _numbers(document_text) == set()


def test_every_figure_stands_in_the_workbook_as_a_number(book: bytes) -> None:
    cells = [cell for rows in _sheets(book).values() for row in rows for cell in row]
    typed = {round(Decimal(cell), 6) for cell in cells if isinstance(cell, int | float)}
    assert {round(value, 6) for value in _expected()} - typed == set()


def test_every_text_and_day_stands_in_the_page_and_the_pdf(
    page_text: str, document_text: str
) -> None:
    # A line of the PDF may break anywhere between words.
    for words in (page_text, document_text):
        seen = words.replace(" ", "").replace("\u00a0", "")
        assert {one for one in _texts() if one.replace(" ", "") not in seen} == set()


def test_every_text_and_day_stands_in_the_workbook(book: bytes) -> None:
    cells = [cell for rows in _sheets(book).values() for row in rows for cell in row]
    days = {cell.isoformat()[:10] for cell in cells if isinstance(cell, date)}
    words = " ".join(cell for cell in cells if isinstance(cell, str))
    assert {one for one in _texts() if one not in days and one not in words} == set()


def test_the_workbook_has_the_chances_as_numbers_and_the_page_as_people_count(
    book: bytes, page_text: str
) -> None:
    rows = _sheets(book)["Risk table"]
    sizes = [row[0] for row in rows if isinstance(row[0], int | float)]
    chances = {row[0]: row[2] for row in rows if isinstance(row[0], int | float)}
    assert chances[54_400.0] == 0.058
    # One table after the other: the mullet's candidates, then the clams' two, each by size.
    assert sizes[:-2] == sorted(sizes[:-2])
    assert sizes[-2:] == [20_000.0, 22_237.5]
    assert chances[20_000.0] == 0.065
    assert "1 in 20 (5.8 %)" in page_text.replace("\u00a0", " ")
    assert "3 in 20 (14.3 %)" in page_text.replace("\u00a0", " ")


@pytest.mark.parametrize(
    ("sheet", "row"),
    [
        ("Summary", ["Taken", 60_668.5, 19_275.55]),
        ("Summary", ["Carried in from the season before", 1_204.5, 0]),
        ("Use by day", [date(2026, 3, 2), 553.8, 955.15, 174.05, 295.05]),
        ("Use by day", ["bay mullet", date(2026, 4, 20), 68_000, "kg"]),
        (
            "Standing",
            [
                *(17, 17, "licensed", 966.696, 22.01, 5.25, 980.67, 2.786),
                *(262.571, 0, 0, 216.936, 45.635),
            ],
        ),
        ("Work and dues", [17, 17, "licensed", 12, 11.25, 0.75, 25, 1]),
        ("Findings", ["3.1", "No more than ninety kilos of mullet a day", 27, 5, 22]),
        ("Cases", ["Taking more than allowed", "1. warning", 19, 4, 11, 1, 3]),
        ("Cases", ["From then until the decision", 17]),
        ("Dues", ["fine", 7, 613.5, 401.25, 212.25]),
        ("Dues", ["instead of work", 9, 540]),
        ("Dues", ["Bay mullet, kg", 12, 148.9]),
        # Given, replaced and short are 520.5 hours, 4.5 more than the 516 that were owed.
        ("Dues", ["All members", 516, 455.25, 54, 11.25, 4.5, 6]),
        ("Reporting", ["After 24 and within 48 hours", 466, 466 / 4_514]),
        ("Reporting", ["All classes", 4_514, 413, 413 / 4_514, 17]),
        ("Risk table", [68_000, "as now", 0.372, 100 / 121, 63_876.55, 117_876.55]),
        ("Settlement", ["Carried to the next season", 2_411.25, 0]),
        ("Settlement", ["less what is owed from the next season", -96.4, -12.35]),
        ("Settlement", ["less what was entered after the close", 0, -4.25]),
        # 69,204.5 kg less 60,668.5 taken; 22,000 less 19,275.55.
        ("Settlement", ["Left of the season: all of that", 8_536, 2_724.45]),
        ("Next season", ["less the reserve", -952]),
        ("Next season", ["and carried in", 2_411.25]),
        ("Next season", ["less what was taken beyond a measure", -96.4]),
        ("Next season", ["less what was given back since the close", -8.5]),
        # 46,648 and 2,411.25, less 96.4 and 8.5; the one in the middle has 12,000 less 104.9.
        ("Next season", ["Members may take in all", 48_954.35]),
        ("Next season", ["The least that one may take", 11_059.25]),
        ("Next season", ["The median of what each may take", 11_895.1]),
        ("Next season", ["The most that one may take", 26_000]),
        ("Next allotments", [17, 17, 12_000, 0, -104.9, 11_895.1]),
        ("Next allotments", ["All", "", 46_648, 2_411.25, -104.9, 48_954.35]),
        (
            "Findings one by one",
            [
                *(201, "3.1", "household 31", date(2026, 3, 8), date(2026, 3, 8)),
                *(99.5, 90, 5, "kg", "312, 318, 331, … (5 in all)", "standing"),
            ],
        ),
        (
            "Findings one by one",
            [
                *(202, "5.1", "member 44", date(2026, 3, 9), date(2026, 3, 10)),
                *(4_499 / 60, 48, 1_619 / 60, "h", "277", "withdrawn"),
            ],
        ),
        (
            "Cases one by one",
            [
                *(71, 201, "Taking more than allowed", "2. fine", 15.25, "final"),
                *(date(2026, 3, 17), date(2026, 4, 2), date(2026, 4, 24)),
            ],
        ),
        ("Cases one by one", [72, 202, "Late slips", "–", "", "set aside", "", "", ""]),
        ("Observations", ["clams", "ground survey", "long_spit", 2026, 23_400, "kg"]),
    ],
)
def test_a_row_has_its_figures_in_their_places(book: bytes, sheet: str, row: list[Any]) -> None:
    # A sheet keeps sixteen digits of a number.
    rows = [_to_ten_places(found[: len(row)]) for found in _sheets(book)[sheet]]
    assert _to_ten_places(row) in rows


def _to_ten_places(row: list[Any]) -> list[Any]:
    return [round(cell, 10) if isinstance(cell, float) else cell for cell in row]


def test_the_workbook_has_the_course_of_the_stock_and_the_estimates_unrounded(book: bytes) -> None:
    sheets = _sheets(book)
    advice = SEASON.advice[0]
    assert advice.stock is not None
    observed = {row.year: row.amount for row in advice.stock.observed}
    years = {row[0]: row for row in sheets["Stock by year"] if isinstance(row[0], int | float)}
    assert len(years) == 46
    for band in advice.stock.bands:
        row = years[band.year]
        assert row[1] == ("estimated" if band.year < 2026 else "projected")
        assert row[2] == (observed[band.year] / 1000 if band.year in observed else "")
        assert row[3:10] == [
            amount / 1000
            for amount in (
                *(band.median, band.low_50, band.high_50),
                *(band.low_80, band.high_80, band.low_95, band.high_95),
            )
        ]
    named = {row[0]: row for row in sheets["Advice"]}
    for estimate in (*advice.estimates, *advice.reference_points):
        low, high = ("" if end is None else end for end in (estimate.low, estimate.high))
        assert named[estimate.name][1:5] == [estimate.meaning, estimate.value, low, high]


def test_the_advice_can_be_repeated_from_what_the_page_says(page_text: str) -> None:
    assert "It uses 10,000 runs from the seed 20260630." in page_text
    assert "Clause “How much mullet” (quota.mullet) asks for it." in page_text
    assert figures.digest(SEASON) in page_text
    assert "Edition 4, in force from 2026-03-01; adopted by the assembly" in page_text
    assert "with 31 for, 4 against, 2 abstained" in page_text


def test_a_broken_threshold_has_a_frame_and_others_have_none(page: str) -> None:
    framed = re.findall(r'class="percent[^"]*framed">([^<]*)', page)
    assert [text.replace("\u00a0", " ") for text in framed] == [
        "1 in 20 (5.8 %)",
        "3 in 20 (14.3 %)",
        "7 in 20 (37.2 %)",
        "16 in 20 (81.1 %)",
    ]


def test_the_summary_says_what_the_group_took(page_text: str) -> None:
    # 103 days by hand: the sum of the example's daily takes is 60,668,500 grams.
    seen = page_text.replace("\u00a0", " ")
    assert (
        "The group took 60,669 kg of bay mullet, 89.2 % of the season's allowable of 68,000 kg."
    ) in seen
    assert sum(row.amount for row in SEASON.resources[0].daily) == 60_668_500


def test_the_proof_line_stands_at_both_ends_of_the_page_and_on_every_sheet_and_leaf(
    page: str, document: bytes, book: bytes
) -> None:
    assert page.count(f'<p class="proof">{example.PROOF}</p>') == 2
    leaves = pypdf.PdfReader(io.BytesIO(document)).pages
    for number, leaf in enumerate(leaves, start=1):
        text = leaf.extract_text()
        assert example.PROOF in text
        assert f"page {number} of {len(leaves)}" in text
        assert "Tarrin Bay Fishing Cooperative · Season report 2026" in text
    for rows in _sheets(book).values():
        assert rows[1][0] == example.PROOF


def test_a_demo_says_so_on_every_leaf_page_sheet_and_in_the_account() -> None:
    mark = "Invented demo: no real commons, no real people"
    real = dataclasses.replace(SEASON, is_demo=False)
    for season, times in ((SEASON, 1), (real, 0)):
        leaves = pypdf.PdfReader(io.BytesIO(pdf.season_pdf(season))).pages
        assert {leaf.extract_text().count(mark) for leaf in leaves} == {times}
        assert html.season_html(season).split("</header>")[0].count(mark) == times
        book = xlsx.season_xlsx(season)
        for rows in _sheets(book).values():
            assert rows[2][:1] == ([mark] if times else [""])
        with zipfile.ZipFile(io.BytesIO(book)) as parts:
            sheets = [name for name in parts.namelist() if name.startswith("xl/worksheets/sheet")]
            printed = [parts.read(name).decode() for name in sheets]
        assert {one.split("<headerFooter")[1].count(mark) for one in printed} == {times}
        assert list(text.season_text(season, keys=("summary",))).count(mark) == times


@pytest.mark.parametrize("render", [html.season_html, pdf.season_pdf, xlsx.season_xlsx])
def test_the_same_figures_give_the_same_bytes(render: Any) -> None:
    assert render(example.season()) == render(example.season())


def test_the_digest_tells_figures_apart_but_not_the_moment_of_making() -> None:
    later = dataclasses.replace(SEASON, made_at=SEASON.made_at + timedelta(days=3))
    other = dataclasses.replace(SEASON, season="2027")
    assert figures.digest(later) == figures.digest(SEASON)
    assert figures.digest(other) != figures.digest(SEASON)


def test_the_page_asks_for_nothing_from_outside(page: str) -> None:
    assert "<script" not in page
    assert set(re.findall(r'(?:src|href)="(#|data:image/svg\+xml;base64,)?', page)) == {
        "#",
        "data:image/svg+xml;base64,",
    }
    assert "url(" not in page


def test_the_page_has_headers_for_its_cells_and_one_landmark_of_each_kind(page: str) -> None:
    tables = re.findall(r"<table.*?</table>", page, re.DOTALL)
    assert len(tables) > 20
    for table in tables:
        assert "<caption>" in table
        rows = re.findall(r"<tr>(.*?)</tr>", table.split("<tbody>")[1], re.DOTALL)
        assert all(row.startswith('<th scope="row"') for row in rows)
        assert 'scope="col"' in table
    for landmark in ("<header>", "<nav ", "<main>", "<footer>"):
        assert page.count(landmark) == 1
    targets = re.findall(r'href="#([^"]+)"', page)
    assert len(targets) == len(set(targets)) == 15
    assert all(f'id="{target}"' in page for target in targets)


def test_the_pdf_is_tagged_pdf_ua_on_a4_under_a_megabyte(document: bytes) -> None:
    reader = pypdf.PdfReader(io.BytesIO(document))
    assert b"<pdfuaid:part>1</pdfuaid:part>" in document
    assert "/StructTreeRoot" in reader.root_object
    assert str(reader.root_object["/Lang"]) == "en"
    box = reader.pages[0].mediabox
    assert (round(box.width), round(box.height)) == (595, 842)
    assert len(document) < 1_000_000
    assert reader.metadata is not None
    assert reader.metadata.creation_date == datetime(2026, 6, 30, 18, 2, tzinfo=UTC)


def test_no_page_of_the_pdf_but_the_last_is_half_empty(document: bytes) -> None:
    for leaf in pypdf.PdfReader(io.BytesIO(document)).pages[:-1]:
        heights: list[float] = []

        def note(words: str, place: Any, *rest: Any, kept: list[float] = heights) -> None:
            if words.strip():
                kept.append(float(place[5]))

        leaf.extract_text(visitor_text=note)
        # In points from the foot of a sheet of 842, where the head of the page stands high.
        assert max(heights) > 780
        assert min(heights) < 421


def test_no_text_of_the_pdf_is_smaller_than_eight_points(document: bytes) -> None:
    sizes: set[float] = set()

    def note(text: str, user: Any, matrix: Any, _font: Any, size: float) -> None:
        if text.strip():
            sizes.add(round(size * abs(matrix[3] * user[3]), 2))

    for leaf in pypdf.PdfReader(io.BytesIO(document)).pages:
        leaf.extract_text(visitor_text=note)
    # The charts' proof line is among them.
    assert 8 <= min(sizes) < 8.1


def test_hostile_texts_are_inert_everywhere() -> None:
    season = dataclasses.replace(
        example.season(commons=HOSTILE),
        findings=tuple(
            figures.FindingRow(clause=text, title=HOSTILE, found=1, standing=1, withdrawn=0)
            for text in LEADING
        ),
        cautions=(HOSTILE,),
    )
    page = html.season_html(season)
    assert "<script" not in page
    assert page.count("&lt;script&gt;alert(1)&lt;/script&gt;") >= 6
    assert HOSTILE in _page_text(page)

    squeezed = _pdf_text(pdf.season_pdf(season)).replace(" ", "")
    assert HOSTILE.replace(" ", "") in squeezed.replace("’", "'").replace("“", '"')

    book = xlsx.season_xlsx(season)
    rows = _sheets(book)["Findings"]
    assert {row[0] for row in rows} >= set(LEADING)
    assert _formulas(book) == 0


def _formulas(book: bytes) -> int:
    """Count the cells that a sheet would compute, in the sheets' own markup."""
    with zipfile.ZipFile(io.BytesIO(book)) as parts:
        names = [name for name in parts.namelist() if name.startswith("xl/worksheets/")]
        assert names
        return sum(len(re.findall(rb"<f[ >]", parts.read(name))) for name in names)


def test_a_sign_without_a_font_costs_the_standard_and_not_the_report(
    monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    monkeypatch.setattr(matplotlib, "get_data_path", lambda: str(tmp_path))
    document = pdf.season_pdf(example.season(commons="漁業"))
    assert b"pdfuaid" not in document
    assert "page 1 of" in _pdf_text(document)


def test_a_season_in_which_nothing_happened_still_makes_a_report() -> None:
    quiet = dataclasses.replace(
        SEASON,
        resources=(
            dataclasses.replace(
                example.mullet(daily=()),
                allowable=0,
                reserve=0,
                allotted=0,
                carried_in=0,
                left=0,
                settlement=figures.SettlementFigures(
                    given_back=0, carried=0, unclaimed=0, owed=0, after_close=0
                ),
                allowable_steps=(),
                zones=(),
                slips=0,
            ),
        ),
        names=(),
        findings=(),
        finding_details=(),
        case_details=(),
        cases=figures.CaseFigures(
            steps=(), states=(), set_aside=(), days_act_to_told=None, days_told_to_decided=None
        ),
        dues=(),
        restitution=(),
        duties=None,
        reporting=figures.ReportingFigures(
            slips=0, within_24=0, within_48=0, later=0, median_hours=None
        ),
        inspections=(),
        standings=(),
        orders=(),
        observations=(),
        advice=(),
        next_season=(),
    )
    said = _page_text(html.season_html(quiet))
    for sentence in (
        "No case was opened.",
        "No dues in money were charged.",
        "The book asks for no work.",
        "No slip was reported.",
        "No allowable of the next season is adopted yet.",
        "no allowable was in force.",
    ):
        assert sentence in said
    assert "page 1 of" in _pdf_text(pdf.season_pdf(quiet))
    assert _sheets(xlsx.season_xlsx(quiet))["Standing"][3][0].startswith("Standing of every member")


def test_a_record_that_contradicts_itself_is_refused() -> None:
    with pytest.raises(figures.FiguresDisagree, match="daily takes of mullet"):
        dataclasses.replace(example.mullet(), taken=1)
    with pytest.raises(figures.FiguresDisagree, match=r"clause 3\.1"):
        figures.FindingRow(clause="3.1", title="", found=3, standing=1, withdrawn=1)
    with pytest.raises(figures.FiguresDisagree, match="slips by delay"):
        dataclasses.replace(SEASON.reporting, later=0)
    with pytest.raises(figures.FiguresDisagree, match="resources that rows name"):
        dataclasses.replace(SEASON, resources=SEASON.resources[:1])
    doubled = (SEASON.resources[0].daily[0],) * 2
    with pytest.raises(figures.FiguresDisagree, match="list of days"):
        dataclasses.replace(SEASON.resources[0], daily=doubled, taken=2 * doubled[0].amount)


def test_used_is_the_share_of_the_allowable() -> None:
    assert example.mullet().used == Fraction(60_668_500, 68_000_000)
    nothing = dataclasses.replace(
        example.mullet(daily=()),
        allowable=0,
        left=1_204_500,
        settlement=figures.SettlementFigures(
            given_back=0, carried=0, unclaimed=0, owed=155_500, after_close=0
        ),
    )
    assert nothing.used is None


def test_what_does_not_add_up_is_refused() -> None:
    mullet, holding = example.mullet(), SEASON.standings[0].holdings[0]
    with pytest.raises(figures.FiguresDisagree, match=r"left of mullet .* was taken"):
        dataclasses.replace(mullet, left=mullet.left + 1)
    settled = dataclasses.replace(mullet.settlement, given_back=52_501)
    with pytest.raises(figures.FiguresDisagree, match="parts that it was settled into"):
        dataclasses.replace(mullet, settlement=settled)
    with pytest.raises(figures.FiguresDisagree, match="member has left of mullet"):
        dataclasses.replace(holding, given_back=holding.given_back + 1)
    with pytest.raises(figures.FiguresDisagree, match="next allotments of mullet"):
        dataclasses.replace(SEASON.next_season[0], holdings=SEASON.next_season[0].holdings[1:])
    with pytest.raises(figures.FiguresDisagree, match="less the reserve"):
        dataclasses.replace(SEASON.next_season[0], reserve=952_001)


def test_the_print_header_of_a_sheet_holds_the_longest_name() -> None:
    book = xlsx.season_xlsx(example.season(commons="&" * 200))
    with zipfile.ZipFile(io.BytesIO(book)) as parts:
        header = parts.read("xl/worksheets/sheet1.xml").decode().split("<oddHeader>")[1]
    header = markup.unescape(header.split("</oddHeader>")[0])
    assert example.PROOF in header
    assert len(header) <= 255
