"""The seasons, as members read them in sums and the board with the advice."""

import hashlib
import re

from django.http import Http404, HttpRequest, HttpResponse, HttpResponseNotModified

from ledger.commons import queries as commons
from ledger.foundation.clocks import system_clock
from ledger.journal import queries as journal
from ledger.pages.visiting import page, show
from ledger.reports import (
    cautions,
    charts,
    collecting,
    html,
    numbers,
    pdf,
    progress,
    resource_tables,
    xlsx,
)
from ledger.reports.progress import SeasonProgress
from ledger.seasons import queries as seasons
from ledger.web.visitors import AUDITOR, BOARD, SECRETARY, NotHere, Visitor

ROWS = 30
REPORTS = {
    "html": ("text/html; charset=utf-8", html.season_html),
    "pdf": ("application/pdf", pdf.season_pdf),
    "xlsx": (
        "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet",
        xlsx.season_xlsx,
    ),
}


@page
def seasons_page(request: HttpRequest, visitor: Visitor) -> HttpResponse:
    """List the seasons, the newest first."""
    found = seasons.seasons(commons_id=visitor.commons.commons_id).values()
    newest = sorted(found, key=lambda each: (each.during.first, each.code), reverse=True)
    return show(request, visitor, "standing/seasons.html", seasons=newest)


@page
def season_page(request: HttpRequest, visitor: Visitor, code: str) -> HttpResponse:
    """Show how a season stands: a sentence, the chart, the sums, and the advice with its risks."""
    found = _progress(visitor, code)
    everybody = visitor.sees_everybody()
    return show(
        request,
        visitor,
        "standing/season.html",
        season=found,
        allowable=_amount(found, found.allowable),
        reserve=_amount(found, found.reserve),
        taken=_amount(found, found.taken),
        months=_months(found),
        findings=_counted(found.findings, everybody),
        cases=_counted(found.cases, everybody),
        everybody=everybody,
        members=_members(request, visitor, found) if everybody else None,
        risk=None if found.advice is None else resource_tables.risk(found.advice, resource=found),
        proposed=None if found.advice is None else _amount(found, found.advice.proposed),
        cautions=cautions.CAUTIONS,
    )


@page
def use_chart(request: HttpRequest, visitor: Visitor, code: str) -> HttpResponse:
    """Draw the take under the allowable; unchanged where nothing was taken since."""
    found = _progress(visitor, code)
    seen = repr((found.daily, found.allowable_steps, found.closed)).encode()
    tag = f'"{hashlib.sha256(seen).hexdigest()[:32]}"'
    if request.headers.get("If-None-Match") == tag:
        return HttpResponseNotModified(headers={"ETag": tag})
    head = journal.head(commons_id=visitor.commons.commons_id)
    drawn = charts.take_svg(
        resource=found, proof=journal.proof_line(head), description=found.sentence
    )
    return HttpResponse(drawn, content_type="image/svg+xml", headers={"ETag": tag})


@page
def report(request: HttpRequest, visitor: Visitor, code: str, form: str) -> HttpResponse:
    """Make the season report from the book, as a page, for print or as a workbook."""
    visitor.needs(SECRETARY, BOARD, AUDITOR)
    if form not in REPORTS:
        raise NotHere(what="form of a report")
    season = _season(visitor, code)
    if not season.closed:
        raise NotHere(what="report before the season is closed")
    figures = collecting.season_figures(
        commons_id=visitor.commons.commons_id,
        first=season.during.first,
        made_at=system_clock(),
    )
    kind, render = REPORTS[form]
    answer = HttpResponse(render(figures), content_type=kind)
    answer["Content-Disposition"] = f'attachment; filename="{code}-report.{form}"'
    return answer


def _season(visitor: Visitor, code: str) -> seasons.SeasonRecord:
    try:
        return seasons.season(commons_id=visitor.commons.commons_id, code=code)
    except seasons.UnknownSeason as error:
        raise NotHere(what="season") from error


def _progress(visitor: Visitor, code: str) -> SeasonProgress:
    _season(visitor, code)
    return progress.season_progress(commons_id=visitor.commons.commons_id, season=code)


def _amount(season: SeasonProgress, amount: int | None) -> str:
    if amount is None:
        return "none adopted"
    return numbers.amount_with_unit(amount, base=season.base, unit=season.unit)


def _months(season: SeasonProgress) -> list[tuple[str, str, str]]:
    """Return the take of each month, and the sum up to its end: the chart's numbers as a table."""
    sums: dict[str, int] = {}
    for row in season.daily:
        month = f"{row.day:%Y-%m}"
        sums[month] = sums.get(month, 0) + row.amount
    so_far, rows = 0, []
    for month, amount in sums.items():
        so_far += amount
        rows.append((month, _amount(season, amount), _amount(season, so_far)))
    return rows


def _counted(counts: object, everybody: bool) -> list[tuple[str, str]]:
    assert isinstance(counts, dict)
    return [
        (what, str(count) if everybody else progress.few(count))
        for what, count in sorted(counts.items())
    ]


def _members(request: HttpRequest, visitor: Visitor, season: SeasonProgress) -> dict[str, object]:
    """Return thirty members' rows from a number on, with the number where the next thirty begin."""
    asked = request.GET.get("from", "1")
    if not re.fullmatch("[0-9]{1,9}", asked):
        raise Http404("A list begins at a member's number.")
    first = int(asked)
    commons_id = visitor.commons.commons_id
    part = commons.members_from(commons_id=commons_id, number=first, limit=ROWS + 1)
    rows = [
        (each.number, each.name, *_holding(commons_id, season, each.number)) for each in part[:ROWS]
    ]
    return {"rows": rows, "next": part[ROWS].number if len(part) > ROWS else None}


def _holding(commons_id: int, season: SeasonProgress, member: int) -> tuple[str, str]:
    resource = seasons.season(commons_id=commons_id, code=season.season).resource
    taken, left = (
        journal.balance(
            commons_id=commons_id,
            account=account(season=season.season, member=member),
            resource=resource,
            unit=season.base,
        )
        for account in (seasons.taken_account, seasons.left_account)
    )
    return _amount(season, taken), _amount(season, left)
