"""Where a report can be written, and where not."""

from pathlib import Path

import pytest

from ledger.reports import files, html
from tests.ledger.reports import example


def test_three_files_are_written_over_an_earlier_report(tmp_path: Path) -> None:
    folder = tmp_path / "a" / "b"
    for _ in range(2):
        files.write(figures=example.season(), folder=folder)
    assert sorted(path.name for path in folder.iterdir()) == sorted(files.NAMES)
    page = (folder / "report.html").read_text(encoding="utf-8")
    assert page == html.season_html(example.season())


def test_a_look_at_a_folder_leaves_it_empty(tmp_path: Path) -> None:
    files.check_folder(tmp_path / "new")
    assert list((tmp_path / "new").iterdir()) == []


def test_a_folder_below_a_file_is_refused(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("")
    with pytest.raises(files.FolderUnusable, match="Nothing can be written into the folder"):
        files.check_folder(tmp_path / "file" / "below")
    with pytest.raises(files.FolderUnusable):
        files.check_folder(tmp_path / "file")


def test_a_folder_that_stands_in_a_files_place_is_refused(tmp_path: Path) -> None:
    (tmp_path / "report.pdf").mkdir()
    with pytest.raises(files.FolderUnusable, match=r"(?i)directory"):
        files.check_folder(tmp_path)
