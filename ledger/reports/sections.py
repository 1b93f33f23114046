"""The season report as an outline: which sentence, chart and table stands in which section."""

from dataclasses import replace

from governance.advice.records import Advice
from ledger.reports import (
    advice_words,
    case_tables,
    charts,
    detail_tables,
    duty_tables,
    numbers,
    resource_tables,
    standing_tables,
    use_tables,
    words,
)
from ledger.reports.figures import ResourceFigures, SeasonFigures, digest
from ledger.reports.outline import Chart, PointList, Report, Section, Sheet

DEMO_MARK = "Invented demo: no real commons, no real people"


def report(figures: SeasonFigures) -> Report:
    """Return the season report of the figures, charts drawn."""
    return Report(
        mark=DEMO_MARK if figures.is_demo else "",
        commons=figures.commons,
        season=figures.season,
        title=f"Season report {figures.season}",
        facts=(
            ("Made", numbers.moment(figures.made_at, zone=figures.zone)),
            ("Bylaws", words.edition(figures)),
            ("Figures", f"digest {numbers.short_digest(digest(figures))}"),
        ),
        proof=figures.proof,
        made_at=figures.made_at,
        sections=(
            _summary(figures),
            _use(figures),
            _findings(figures),
            _dues(figures),
            _reporting(figures),
            Section(
                key="standing",
                heading="Standing of the members",
                sheet=Sheet.STANDING,
                sentences=("Members appear by number; the secretary keeps the key.",),
                tables=standing_tables.standings(figures),
            ),
            Section(
                key="settlement",
                heading="Settlement",
                sheet=Sheet.SETTLEMENT,
                sentences=words.settlement(figures),
                tables=(use_tables.settlement(figures),),
            ),
            *(_resource(figures, advice) for advice in figures.advice),
            Section(
                key="next",
                heading="Next season",
                sheet=Sheet.NEXT_SEASON,
                sentences=words.next_season(figures),
                tables=(use_tables.next_season(figures), *use_tables.next_members(figures)),
            ),
            Section(
                key="cautions",
                heading="Cautions",
                sheet=Sheet.CAUTIONS,
                lists=(PointList(title="", points=figures.cautions),),
            ),
            Section(
                key="recompute",
                heading="How to recompute this report",
                sheet=Sheet.CAUTIONS,
                lists=(PointList(title="", points=words.recompute(figures)),),
            ),
            Section(
                key="every-finding",
                heading="Annex: every finding",
                sheet=Sheet.FINDING_LIST,
                tables=(detail_tables.findings(figures),),
            ),
            Section(
                key="every-case",
                heading="Annex: every case",
                sheet=Sheet.CASE_LIST,
                tables=(detail_tables.cases(figures),),
            ),
            _annex(figures),
        ),
    )


def _summary(figures: SeasonFigures) -> Section:
    return Section(
        key="summary",
        heading="In short",
        sheet=Sheet.SUMMARY,
        lists=(
            PointList(
                title="",
                points=(
                    *map(words.use, figures.resources),
                    words.findings(figures),
                    words.cases(figures),
                    words.dues(figures),
                    words.duties(figures),
                    words.reporting(figures),
                    words.inspections(figures),
                    *(advice_words.advice(figures, row) for row in figures.advice),
                    *words.next_season(figures),
                    "Amounts in sentences are rounded to whole units; the tables have them exact.",
                ),
            ),
        ),
    )


def _use(figures: SeasonFigures) -> Section:
    return Section(
        key="use",
        heading="Use of the resources",
        sheet=Sheet.SUMMARY,
        sentences=tuple(
            f"{words.use(resource)} {words.left(resource)} {words.window(resource)}"
            for resource in figures.resources
        ),
        charts=tuple(
            _take_chart(figures, resource, after=place)
            for place, resource in enumerate(figures.resources, start=1)
        ),
        tables=(use_tables.use(figures), *map(use_tables.zones, figures.resources)),
    )


def _take_chart(figures: SeasonFigures, resource: ResourceFigures, *, after: int) -> Chart:
    sentence = words.use(resource)
    return Chart(
        key=f"take-{resource.code}",
        title=f"Take of {resource.name} against the allowable",
        alt=sentence,
        svg=charts.take_svg(resource=resource, proof=figures.proof, description=sentence),
        after=after,
    )


def _findings(figures: SeasonFigures) -> Section:
    return Section(
        key="findings",
        heading="Findings and cases",
        sheet=Sheet.FINDINGS,
        sentences=(
            words.findings(figures),
            *words.tolerance(figures),
            words.cases(figures),
            *words.procedure(figures),
        ),
        tables=(
            case_tables.findings(figures),
            case_tables.case_steps(figures),
            case_tables.case_states(figures),
            case_tables.set_aside(figures),
            case_tables.case_days(figures),
        ),
    )


def _dues(figures: SeasonFigures) -> Section:
    return Section(
        key="dues",
        heading="Dues and duties",
        sheet=Sheet.DUES,
        sentences=(words.dues(figures), words.duties(figures)),
        tables=(
            duty_tables.dues(figures),
            duty_tables.instead_of_work(figures),
            duty_tables.restitution(figures),
            duty_tables.duties(figures),
        ),
    )


def _reporting(figures: SeasonFigures) -> Section:
    return Section(
        key="reporting",
        heading="Reporting and inspections",
        sheet=Sheet.REPORTING,
        sentences=(
            words.reporting(figures),
            words.inspections(figures),
            words.orders(figures),
        ),
        tables=(
            duty_tables.reporting(figures),
            duty_tables.inspections(figures),
            duty_tables.orders(figures),
        ),
    )


def _resource(figures: SeasonFigures, advice: Advice) -> Section:
    resource = figures.resource(advice.resource)
    section = Section(
        key=f"resource-{resource.code}",
        heading=f"The resource: {resource.name}",
        sheet=Sheet.ADVICE,
        sentences=(
            advice_words.advice(figures, advice),
            *advice_words.method(figures, advice),
        ),
        lists=tuple(
            PointList(
                title=title,
                points=tuple(advice_words.readable(figures, point) for point in points),
            )
            for title, points in (
                ("Bounds of the book that moved it", advice.bounds),
                ("Why", advice.reasons),
                ("What it does not know", advice.cautions),
            )
            if points
        ),
        tables=(
            resource_tables.proposal(advice, resource=resource),
            resource_tables.estimates(figures, advice),
            resource_tables.risk(advice, resource=resource),
        ),
    )
    if advice.stock is None:
        return section
    if advice.stock.runs < charts.MIN_RUNS:
        refusal = (
            f"The stock is not drawn: bands need {charts.MIN_RUNS} runs, and there are"
            f" {advice.stock.runs}."
        )
        return replace(section, sentences=(*section.sentences, refusal))
    sentence = advice_words.stock(advice, resource=resource)
    sentences = (*section.sentences, sentence)
    chart = Chart(
        key=f"stock-{resource.code}",
        title=f"Stock of {resource.name} by year",
        alt=sentence,
        svg=charts.stock_svg(
            name=resource.name,
            base=resource.base,
            unit=resource.unit,
            history=advice.stock,
            proof=figures.proof,
            description=sentence,
        ),
        after=len(sentences),
    )
    return replace(section, sentences=sentences, charts=(chart,))


def _annex(figures: SeasonFigures) -> Section:
    return Section(
        key="annex",
        heading="Annex: the numbers behind the charts",
        sheet=Sheet.SUMMARY,
        tables=(
            use_tables.allowable_steps(figures),
            use_tables.by_day(figures),
            *(
                resource_tables.stock(advice, resource=figures.resource(advice.resource))
                for advice in figures.advice
                if advice.stock is not None
            ),
            resource_tables.observations(figures),
        ),
    )
