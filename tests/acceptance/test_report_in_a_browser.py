"""The season report's page as a browser shows it, from the file on the disk."""

import re
from collections.abc import Iterator
from io import BytesIO
from itertools import pairwise
from pathlib import Path
from typing import Any

import pypdf
import pytest
from playwright import sync_api

from ledger.reports import html
from tests import browsers
from tests.acceptance.played import PlayedSeason

pytestmark = pytest.mark.needs_server(browsers.BROWSER)


@pytest.fixture(scope="module")
def address(played_season: PlayedSeason, tmp_path_factory: pytest.TempPathFactory) -> str:
    """The address of the report's page, a file."""
    page: Path = tmp_path_factory.mktemp("report") / "report.html"
    page.write_text(html.season_html(played_season.figures), encoding="utf-8")
    return page.as_uri()


@pytest.fixture(scope="module")
def browser() -> Iterator[sync_api.Browser]:
    """The browser that the environment names."""
    with browsers.opened() as found:
        yield found


@pytest.fixture(params=[320, 1100])
def page(
    request: pytest.FixtureRequest, browser: sync_api.Browser, address: str
) -> Iterator[sync_api.Page]:
    """The report's page in a narrow and in a wide window; anything amiss fails the test."""
    page = browser.new_page(viewport={"width": request.param, "height": 900})
    asked: list[str] = []
    said: list[str] = []
    page.on("request", lambda each: asked.append(each.url))
    page.on("console", lambda each: said.append(each.text))
    page.on("pageerror", lambda each: said.append(str(each)))
    page.goto(address, wait_until="load")
    yield page
    page.close()
    assert said == []
    assert [each for each in asked if not each.startswith(("data:", address))] == []


def test_it_asks_nobody_and_says_nothing_on_the_console(page: sync_api.Page) -> None:
    assert page.title() == "Season report 2026 · Tarrin Bay Fishing Cooperative"
    # Every chart is drawn: an image that failed has no size.
    sizes = page.eval_on_selector_all("img", "all => all.map(one => one.naturalWidth)")
    assert len(sizes) == 3
    assert all(sizes)


def test_it_does_not_scroll_sideways(page: sync_api.Page) -> None:
    wide = page.evaluate(
        "() => [document.documentElement.scrollWidth, document.documentElement.clientWidth]"
    )
    assert wide[0] <= wide[1]


def test_headings_stand_in_order(page: sync_api.Page) -> None:
    levels = page.eval_on_selector_all(
        "h1, h2, h3, h4, h5, h6", "all => all.map(one => Number(one.tagName[1]))"
    )
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert len(levels) > 10
    assert all(below <= above + 1 for above, below in pairwise(levels))


def test_every_table_has_a_caption_and_headers(page: sync_api.Page) -> None:
    tables = page.eval_on_selector_all(
        "table",
        """all => all.map(one => ({
            caption: one.caption ? one.caption.textContent.trim() : "",
            columns: Array.from(one.querySelectorAll("thead th")).map(each => each.scope),
            bare: Array.from(one.tBodies[0].rows).filter(
                row => !(row.cells[0].tagName === "TH" && row.cells[0].scope === "row")
            ).length,
        }))""",
    )
    assert len(tables) > 15
    for table in tables:
        assert table["caption"]
        assert table["columns"]
        assert set(table["columns"]) <= {"col", "colgroup"}
        assert table["bare"] == 0


def test_a_wide_table_scrolls_by_itself_and_by_the_keyboard(page: sync_api.Page) -> None:
    boxes: list[dict[str, Any]] = page.eval_on_selector_all(
        "table",
        """all => all.map(one => {
            const box = one.closest(".scroll");
            return {wider: one.scrollWidth > box.clientWidth + 1, tab: box.tabIndex};
        })""",
    )
    wider = [box for box in boxes if box["wider"]]
    assert page.viewport_size is not None
    assert len(wider) > 3 or page.viewport_size["width"] > 320
    assert all(box["tab"] == 0 for box in wider)


def test_captions_and_words_have_the_room_they_need(page: sync_api.Page) -> None:
    captions = page.eval_on_selector_all(
        "caption span",
        """all => all.map(one => {
            const place = one.getBoundingClientRect();
            return place.left >= 0 && place.right <= document.documentElement.clientWidth;
        })""",
    )
    assert len(captions) > 20
    assert all(captions)
    # Of words that go over several lines no line is a word alone: the column is nine rem wide.
    narrow = page.eval_on_selector_all(
        "tbody .text",
        """all => all.filter(one => one.textContent.length > 14
            && one.getBoundingClientRect().width < 9 * 16).map(one => one.textContent)""",
    )
    assert narrow == []


def test_the_columns_of_the_contents_begin_at_one_height(page: sync_api.Page) -> None:
    tops: list[list[float]] = page.eval_on_selector_all(
        "nav li",
        """all => all.map(one => {
            const place = one.getBoundingClientRect();
            return [place.left, place.top];
        })""",
    )
    first = {left: min(top for each, top in tops if each == left) for left, _ in tops}
    assert len(set(first.values())) == 1
    assert page.viewport_size is not None
    assert len(first) == (2 if page.viewport_size["width"] > 320 else 1)


def test_it_prints(page: sync_api.Page, played_season: PlayedSeason) -> None:
    document = pypdf.PdfReader(BytesIO(page.pdf(prefer_css_page_size=True)))
    text = re.sub(r"\s+", " ", " ".join(sheet.extract_text() for sheet in document.pages))
    assert 5 <= len(document.pages) <= 40
    assert played_season.figures.proof in text
    # A4, in points.
    assert all(round(float(sheet.mediabox.width)) == 595 for sheet in document.pages)
