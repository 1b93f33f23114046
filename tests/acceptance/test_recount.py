"""I11: every figure of the season report, recounted from the entries alone by other hands."""

import json
from collections.abc import Iterator
from datetime import date
from pathlib import Path
from typing import Any

import pytest

from ledger.journal import queries as journal
from ledger.journal.leaves import EntryRecord
from ledger.reports.figures import SeasonFigures
from tests.acceptance import played, recount
from tests.acceptance.played import PlayedSeason

ZONE_CODES = {zone["name"]: zone["code"] for zone in played.page("commons.yaml")["zones"]}
HOUSEHOLD_CLAUSES = frozenset(
    clause["id"]
    for clause in played.page("bylaws.yaml")["clauses"]
    if clause["what"].get("counted_by") == "household"
)


@pytest.fixture
def lines(season: PlayedSeason, tmp_path: Path) -> list[str]:
    """The journal as anybody may export it: a line of JSON for each entry."""
    export = tmp_path / "entries.jsonl"
    with export.open("w", encoding="utf-8") as sheet:
        for entry in journal.entries(commons_id=season.commons_id):
            sheet.write(json.dumps(_plain(entry)) + "\n")
    return export.read_text(encoding="utf-8").splitlines()


def test_every_figure_recounts(season: PlayedSeason, lines: list[str]) -> None:
    recounted = recount.recount(
        lines, first=played.FIRST.isoformat(), household_clauses=HOUSEHOLD_CLAUSES
    )
    reported = {name: value for name, value in _flat(season.figures) if value not in (0, None, [])}
    assert len(reported) > 1_100
    assert _differences(reported, recounted) == {}


def test_a_figure_that_is_off_by_one_gram_shows(season: PlayedSeason, lines: list[str]) -> None:
    at, changed = next(
        (at, entry)
        for at, line in enumerate(lines)
        if (entry := json.loads(line))["kind"] == "withdrawal"
    )
    changed["facts"]["lines"][0]["amount"] += 1
    lines[at] = json.dumps(changed)
    recounted = recount.recount(
        lines, first=played.FIRST.isoformat(), household_clauses=HOUSEHOLD_CLAUSES
    )
    taken = changed["facts"]["lines"][0]
    assert set(_differences(dict(_flat(season.figures)), recounted)) >= {
        f"{taken['resource']}.taken",
        f"{taken['resource']}.day.{changed['day']}",
        f"{taken['resource']}.zone.{taken['zone']}.taken",
        f"member.{changed['subject']}.{taken['resource']}.taken",
    }


def _plain(entry: EntryRecord) -> dict[str, Any]:
    return {
        "number": entry.number,
        "kind": entry.kind,
        "day": entry.day.isoformat(),
        "occurred_at": entry.occurred_at.isoformat(),
        "subject": entry.subject,
        "facts": entry.facts,
        "texts": entry.texts,
        "reverses": entry.reverses,
        "reversed_by": entry.reversed_by,
        "postings": [
            {"account": posting.account, "amount": posting.amount} for posting in entry.postings
        ],
    }


def _differences(reported: dict[str, Any], recounted: dict[str, Any]) -> dict[str, Any]:
    """Return the figures that differ, by name: (reported, recounted)."""
    return {
        name: (reported.get(name, 0), recounted.get(name, 0))
        for name in sorted({*reported, *recounted})
        if reported.get(name, 0) != recounted.get(name, 0)
    }


def _flat(figures: SeasonFigures) -> Iterator[tuple[str, Any]]:
    """Yield every figure of the report by the name that the recount gives it."""
    for of in figures.resources:
        for field in (
            *("allowable", "reserve", "allotted", "carried_in", "taken", "left"),
            *("slips", "members_took", "members_entitled"),
        ):
            yield f"{of.code}.{field}", getattr(of, field)
        for each in of.daily:
            yield f"{of.code}.day.{each.day}", each.amount
        for zone in of.zones:
            yield f"{of.code}.zone.{ZONE_CODES[zone.zone]}.slips", zone.slips
            yield f"{of.code}.zone.{ZONE_CODES[zone.zone]}.taken", zone.taken
        for field in ("given_back", "carried", "unclaimed", "owed", "after_close"):
            yield f"{of.code}.settlement.{field}", getattr(of.settlement, field)
    for next_ in figures.next_season:
        yield f"{next_.resource}.next.adopted_on", next_.adopted_on.isoformat()
        for field in ("allowable", "reserve", "allotted"):
            yield f"{next_.resource}.next.{field}", getattr(next_, field)
        for share in next_.holdings:
            for field in ("allotment", "carried_in", "owed", "given_back"):
                name = f"member.{share.member}.{next_.resource}.next.{field}"
                yield name, getattr(share, field)
    for field in ("slips", "within_24", "within_48", "later", "median_hours"):
        yield f"reporting.{field}", getattr(figures.reporting, field)
    for row in figures.inspections:
        for field in ("slips", "checked", "differences"):
            yield f"inspections.{row.member_class}.{field}", getattr(row, field)
    for due in figures.dues:
        for field in ("count", "charged", "paid", "open"):
            yield f"dues.{due.kind}.{field}", getattr(due, field)
    for given in figures.restitution:
        yield f"restitution.{given.resource}.count", given.count
        yield f"restitution.{given.resource}.given", given.amount
    assert figures.duties is not None
    for field in ("owed", "rendered", "replaced", "short", "members_short"):
        yield f"duties.{field}", getattr(figures.duties, field)
    for found in figures.findings:
        for field in ("found", "withdrawn", "standing"):
            yield f"findings.{found.clause}.{field}", getattr(found, field)
    for state in figures.cases.states:
        yield f"cases.{state.label}", state.count
    for case in figures.case_details:
        for field in ("state", "finding", "step", "amount"):
            yield f"case.{case.number}.{field}", getattr(case, field)
        for field in ("told_on", "decided_on", "final_on"):
            day: date | None = getattr(case, field)
            yield f"case.{case.number}.{field}", None if day is None else day.isoformat()
    yield from _flat_standings(figures)
    for order in figures.orders:
        name = f"order.{order.resource}.{order.from_day}.{order.until}"
        yield name, sorted(ZONE_CODES[zone] for zone in order.zones)
    for seen in figures.observations:
        zone_code = ZONE_CODES.get(seen.zone, "")
        yield f"observation.{seen.resource}.{seen.kind}.{zone_code}.{seen.year}", seen.value


def _flat_standings(figures: SeasonFigures) -> Iterator[tuple[str, Any]]:
    for row in figures.standings:
        own = f"member.{row.member}"
        for held in row.holdings:
            for field in ("allotment", "carried_in", "given_back", "taken", "left"):
                yield f"{own}.{held.resource}.{field}", getattr(held, field)
        for field in ("duty_owed", "duty_rendered", "duty_short", "dues_owed", "open_cases"):
            yield f"{own}.{field}", getattr(row, field)
