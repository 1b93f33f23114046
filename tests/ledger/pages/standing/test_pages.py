"""The standing page and the season's page: what each visitor reads there."""

from datetime import date
from xml.etree import ElementTree

import pytest

from tests.ledger import builders, scene
from tests.ledger.pages.conftest import At

DAY = date(2026, 3, 2)
BASE = "/c/reed-bank/"
AUDITORLESS = (builders.SECRETARY, builders.BOARD[0])


@pytest.fixture
def landed(bay: scene.Scene) -> scene.Scene:
    """Member 5 landed 60 kg of clams in a day, was judged, and a case was noted."""
    bay.morning(DAY, hour=20)
    bay.lands("A", builders.line("clams", "60"), member=5, day=DAY)
    bay.lands("B", member=1, day=DAY)
    bay.judges(date(2026, 3, 3))
    bay.hears()
    return bay


def test_a_member_reads_their_own_standing_and_no_other(landed: scene.Scene, at: At) -> None:
    """One's own in words, with the case; another's is not there."""
    mine = at(5)
    assert mine.get(f"{BASE}standing/")["Location"] == f"{BASE}members/5/"
    page = mine.get(f"{BASE}members/5/").content.decode()
    assert "case 1" in page
    assert "accuses nobody" in page
    assert "entries 1–" in page
    assert mine.get(f"{BASE}members/7/").status_code == 404
    assert at(builders.MONITOR).get(f"{BASE}members/5/").status_code == 404
    for officer in AUDITORLESS:
        assert at(officer).get(f"{BASE}members/5/").status_code == 200
        assert at(officer).get(f"{BASE}members/99/").status_code == 404


def test_what_is_left_stands_in_the_first_sentence(landed: scene.Scene, at: At) -> None:
    """588 kg were allotted to member 1, who took 10."""
    page = at(1).get(f"{BASE}members/1/").content.decode()
    assert "578" in page
    assert "588" in page


def test_a_member_reads_sums_and_the_board_rows(landed: scene.Scene, at: At) -> None:
    """Names and rows are not for everybody; small counts are told as few."""
    mine = at(5).get(f"{BASE}seasons/clams-2026/").content.decode()
    assert "60" in mine
    assert "Member 7" not in mine
    assert "few" in mine
    board = at(builders.BOARD[0]).get(f"{BASE}seasons/clams-2026/").content.decode()
    assert "Member 7" in board
    assert at(5).get(f"{BASE}seasons/").status_code == 200
    assert at(5).get(f"{BASE}seasons/none/").status_code == 404


def test_the_chart_is_a_picture_that_is_asked_for_once(landed: scene.Scene, at: At) -> None:
    """Well-formed, with its sentence, and unchanged while nothing is taken."""
    mine = at(5)
    drawn = mine.get(f"{BASE}seasons/clams-2026/use.svg")
    assert drawn["Content-Type"] == "image/svg+xml"
    assert ElementTree.fromstring(drawn.content).tag.endswith("svg")  # noqa: S314 (our own)
    again = mine.get(f"{BASE}seasons/clams-2026/use.svg", headers={"If-None-Match": drawn["ETag"]})
    assert again.status_code == 304
    landed.lands("C", builders.line("clams", "1"), member=7, day=DAY)
    after = mine.get(f"{BASE}seasons/clams-2026/use.svg", headers={"If-None-Match": drawn["ETag"]})
    assert after.status_code == 200


def test_a_report_waits_for_the_close_and_is_not_for_members(landed: scene.Scene, at: At) -> None:
    """403 for a member, 404 while the season is open or for an unknown form."""
    assert at(5).get(f"{BASE}seasons/clams-2026/report.pdf").status_code == 403
    board = at(builders.BOARD[0])
    assert board.get(f"{BASE}seasons/clams-2026/report.pdf").status_code == 404
    assert board.get(f"{BASE}seasons/clams-2026/report.docx").status_code == 404


@pytest.mark.parametrize("first", ["x", "9" * 30])
def test_a_list_that_begins_nowhere_is_not_there(landed: scene.Scene, at: At, first: str) -> None:
    """A wrong beginning is no fault of the service."""
    board = at(builders.BOARD[0])
    assert board.get(f"{BASE}seasons/clams-2026/?from={first}").status_code == 404
