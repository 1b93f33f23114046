"""``manage.py demo``: what it prints and writes, and that it touches no commons but its own."""

import io
from collections.abc import Iterator
from html.parser import HTMLParser
from pathlib import Path
from typing import Any, NamedTuple

import pypdf
import pytest
import python_calamine
from django.apps import apps
from django.conf import LazySettings
from django.core.management import CommandError, call_command
from django.db import connections

from ledger.commons import queries as commons
from ledger.journal import queries as journal
from ledger.reports import collecting, html, pdf, xlsx
from ledger.reports.figures import digest
from tests import databases
from tests.acceptance import played
from tests.acceptance.played import PlayedSeason

SECOND = "tarrin-bay-demo-2"


class Told(NamedTuple):
    """What a run of the demo left: its account, its progress and its folder."""

    account: str
    progress: str
    folder: Path


@pytest.fixture
def empty_database(django_db_setup: None, django_db_blocker: Any, tmp_path: Path) -> Iterator[None]:
    """A database without a single table."""
    with django_db_blocker.unblock():
        if connections["default"].vendor == "sqlite":
            with databases.led_to(str(tmp_path / "empty.sqlite3")):
                yield
            return
        name = databases.new_name()
        databases.create(name)
        try:
            with databases.led_to(name):
                yield
        finally:
            databases.drop(name)


def test_a_database_without_tables_is_refused_with_a_sentence(empty_database: None) -> None:
    with pytest.raises(CommandError, match=r"no (tables|book).* yet.*: run migrate first\.$"):
        call_command("demo", stdout=io.StringIO(), stderr=io.StringIO())


def test_a_second_play_beside_others_comes_to_the_same_and_touches_nobody(
    own_season: PlayedSeason, settings: LazySettings, tmp_path: Path
) -> None:
    others = (own_season.real, own_season.commons_id)
    before = {each: _rows(each) for each in others}
    assert journal.head(commons_id=own_season.real).size > 10

    told = _demo(settings, tmp_path / "output")

    assert {each: _rows(each) for each in others} == before
    founded = commons.commons_named(slug=SECOND)
    assert founded.is_demo
    assert not commons.commons(commons_id=own_season.real).is_demo
    # The season was played before, by other hands, into another commons: the same fixtures give
    # the same head, the same figures and the same reports to the byte.
    second = journal.head(commons_id=founded.commons_id)
    assert second == journal.head(commons_id=own_season.commons_id)
    figures = collecting.season_figures(
        commons_id=founded.commons_id, first=played.FIRST, made_at=own_season.figures.made_at
    )
    assert digest(figures) == digest(own_season.figures)
    assert figures == own_season.figures
    assert (told.folder / "report.html").read_text(encoding="utf-8") == html.season_html(figures)
    assert (told.folder / "report.pdf").read_bytes() == pdf.season_pdf(own_season.figures)
    assert (told.folder / "report.xlsx").read_bytes() == xlsx.season_xlsx(own_season.figures)
    _check_account(told, own_season)
    _check_files(told.folder, own_season)


def _demo(settings: LazySettings, output: Path) -> Told:
    settings.OUTPUT = output
    account, progress = io.StringIO(), io.StringIO()
    call_command("demo", stdout=account, stderr=progress, no_color=True)
    return Told(account.getvalue(), progress.getvalue(), output / SECOND)


def _check_account(told: Told, season: PlayedSeason) -> None:
    lines = told.account.splitlines()
    assert "invented commons, invented people, invented figures" in lines[0]
    # The output folder is the caller's, and may be as long as it likes.
    assert [line for line in lines if len(line) > 100 and str(told.folder) not in line] == []
    for heading in (
        *("In short", "Findings and cases", "Standing of the members", "Settlement"),
        *("The resource: clams", "Next season", "Cautions"),
    ):
        assert lines[lines.index(heading) + 1] == "=" * len(heading)
    for caption in ("Findings by clause", "Cases by ladder and step"):
        assert caption in lines
    by_clause = {line.split()[0]: line.split()[-3:] for line in lines if line[:5].strip()}
    # Found, withdrawn, standing: counted in planted.csv.
    assert by_clause["3.1"] == ["14", "0", "14"]
    assert by_clause["4.1"] == ["3", "1", "2"]
    assert by_clause["5.1"] == ["30", "0", "30"]
    cells = [line.split()[:3] for line in lines]
    standing = {row[0] for row in cells if row[2:] in (["licensed"], ["retired"])}
    assert standing == {str(number) for number in range(1, 46)}
    assert season.figures.proof in lines
    assert f"figures {digest(season.figures)}" in lines
    assert f"  {told.folder}" in lines
    assert "a darker cell" not in told.account.lower()
    progress = told.progress.splitlines()
    assert len(progress) > 15
    assert len({line.split()[4] for line in progress}) == len(progress), "no line tells nothing new"
    assert progress[0].split()[0] == "2026-02-17"
    assert "4,462 slips in" in progress[-1]


def _check_files(folder: Path, season: PlayedSeason) -> None:
    assert sorted(path.name for path in folder.iterdir()) == [
        "report.html",
        "report.pdf",
        "report.xlsx",
    ]
    page = _Balanced()
    page.feed((folder / "report.html").read_text(encoding="utf-8"))
    page.close()
    assert page.open == []
    assert season.figures.proof in page.words
    document = pypdf.PdfReader(folder / "report.pdf")
    assert len(document.pages) > 3
    for sheet in document.pages:
        assert season.figures.proof in sheet.extract_text()
    workbook = python_calamine.CalamineWorkbook.from_path(folder / "report.xlsx")
    assert "Standing" in workbook.sheet_names
    rows = workbook.get_sheet_by_name("Standing").to_python()
    assert [row[0] for row in rows if isinstance(row[0], float)] == list(range(1, 46))


def _rows(commons_id: int) -> dict[str, list[tuple[Any, ...]]]:
    """Return every row that belongs to a commons, by table."""
    found = {}
    for model in apps.get_models():
        fields = {field.name for field in model._meta.get_fields()} | {
            getattr(field, "attname", "") for field in model._meta.get_fields()
        }
        if model._meta.label_lower == "commons.commons":
            rows = model._default_manager.filter(pk=commons_id)
        elif "commons_id" in fields:
            rows = model._default_manager.filter(commons_id=commons_id)
        else:
            continue
        found[model._meta.db_table] = list(rows.order_by("pk").values_list())
    assert len(found) > 15, "every table carries the commons"
    return found


class _Balanced(HTMLParser):
    """Reads a page, keeps its words, and holds the elements that are still open."""

    void = frozenset({"meta", "link", "br", "img", "hr", "col", "input"})

    def __init__(self) -> None:
        super().__init__()
        self.open: list[str] = []
        self.words = ""

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Open an element."""
        if tag not in self.void:
            self.open.append(tag)

    def handle_endtag(self, tag: str) -> None:
        """Close the element opened last, which must be of this name."""
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        """Keep the words."""
        self.words += data
