"""The season report as one HTML file that asks for nothing from outside itself."""

import base64
from pathlib import Path

from django.template import Context, Engine

from ledger.reports import sections
from ledger.reports.figures import SeasonFigures
from ledger.reports.outline import Chart, Section

TEMPLATES = Path(__file__).parent / "templates"


def season_html(figures: SeasonFigures, /) -> str:
    """Return the season report as a page: charts, style and all in the one file."""
    report = sections.report(figures)
    # Its own engine: the page is a document, whatever the settings say of the site's templates.
    engine = Engine(dirs=[str(TEMPLATES)])
    page = engine.get_template("season.html")
    shown = {"report": report, "sections": [(part, _told(part)) for part in report.sections]}
    return page.render(Context(shown, use_l10n=False))


def _told(section: Section) -> list[tuple[str, list[tuple[Chart, str]]]]:
    """Return a section's sentences, each with the charts after it and their data addresses."""
    return [
        (sentence, [(chart, _address(chart)) for chart in charts])
        for sentence, charts in section.told
    ]


def _address(chart: Chart) -> str:
    """Return a chart as a data address: an image cannot leak its style or its names to the page."""
    return "data:image/svg+xml;base64," + base64.b64encode(chart.svg.encode()).decode()
