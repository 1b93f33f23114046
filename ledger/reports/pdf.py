"""The season report as a tagged PDF, the same bytes for the same figures."""

import dataclasses
import json
from pathlib import Path
from typing import Any

from ledger.reports import sections
from ledger.reports.figures import SeasonFigures
from ledger.reports.outline import Report, Table

TEMPLATE = Path(__file__).parent / "templates" / "season.typ"


def season_pdf(figures: SeasonFigures, /) -> bytes:
    """Return the season report as PDF/UA on A4.

    A sign that the fonts lack is set as a box. Where they have no box that keeps the sign readable
    for a machine, the file cannot claim to be PDF/UA and is an ordinary tagged PDF.
    """
    import matplotlib
    import typst

    # The standard knows no part of a second.
    stamp = figures.made_at.replace(microsecond=0)
    compiler = typst.Compiler(
        TEMPLATE,
        # The charts are set in the font that they were measured with, which comes with matplotlib.
        font_paths=[Path(matplotlib.get_data_path()) / "fonts" / "ttf"],
        ignore_system_fonts=True,
        sys_inputs={"report": json.dumps(plain(sections.report(figures)), ensure_ascii=False)},
    )
    try:
        made = compiler.compile(format="pdf", pdf_standards="ua-1", timestamp=stamp)
    except typst.TypstError:
        made = compiler.compile(format="pdf", timestamp=stamp)
    assert isinstance(made, bytes), "one document without an output file is one run of bytes"
    return made


def plain(report: Report) -> dict[str, Any]:
    """Return the outline as what JSON can hold, for the template."""
    record = dataclasses.asdict(report)
    del record["made_at"]
    for section, shown in zip(record["sections"], report.sections, strict=True):
        del section["charts"], section["sentences"]
        section["told"] = [
            {"sentence": sentence, "charts": [dataclasses.asdict(chart) for chart in charts]}
            for sentence, charts in shown.told
        ]
        section["tables"] = [_table(table) for table in shown.tables]
    return record


def _table(table: Table) -> dict[str, Any]:
    return {
        "caption": table.caption,
        "groups": table.groups,
        "note": table.full_note,
        "empty": table.empty,
        "headed": [dataclasses.asdict(column) for column in table.headed],
        "rows": [
            [
                {
                    "kind": cell.kind,
                    "text": cell.text,
                    "fill": cell.fill,
                    "framed": cell.framed,
                }
                for cell in row
            ]
            for row in table.rows
        ],
    }
