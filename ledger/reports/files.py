"""The season report as files in a folder."""

import tempfile
from pathlib import Path
from typing import ClassVar

from ledger.foundation.errors import LedgerError
from ledger.reports import html, pdf, xlsx
from ledger.reports.figures import SeasonFigures

NAMES = ("report.html", "report.pdf", "report.xlsx")


class FolderUnusable(LedgerError):
    """The files of a report cannot be written into a folder."""

    code: ClassVar[str] = "reports.folder_unusable"
    message: ClassVar[str] = "Nothing can be written into the folder {found}: {why}."


def check_folder(folder: Path) -> None:
    """Make a folder where it is missing, and try whether files can be written into it.

    :raises FolderUnusable: if they cannot.
    """
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            pass
        for name in NAMES:
            if (folder / name).exists():
                with (folder / name).open("ab"):
                    pass
    except (OSError, ValueError) as error:
        why = getattr(error, "strerror", None) or str(error)
        raise FolderUnusable(found=folder, why=why) from error


def write(*, figures: SeasonFigures, folder: Path) -> None:
    """Write the report as a page, for print and as a workbook, over an earlier one.

    :raises FolderUnusable: if nothing can be written there.
    """
    check_folder(folder)
    page, document, workbook = (folder / name for name in NAMES)
    page.write_text(html.season_html(figures), encoding="utf-8", newline="\n")
    document.write_bytes(pdf.season_pdf(figures))
    workbook.write_bytes(xlsx.season_xlsx(figures))
