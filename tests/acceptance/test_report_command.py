"""``manage.py report``: whoever makes it again at the same head comes to the same figures."""

import io
from pathlib import Path

import pypdf
from django.core.management import call_command

from ledger.commons import queries as commons
from ledger.reports import words
from ledger.reports.figures import digest
from tests.acceptance.played import PlayedSeason


def test_the_same_head_gives_the_same_proof_line_and_digest(
    season: PlayedSeason, tmp_path: Path
) -> None:
    slug = commons.commons(commons_id=season.commons_id).slug
    recipe = next(point for point in words.recompute(season.figures) if "manage.py report" in point)
    # The command is run as the report itself tells its reader to.
    typed = recipe.split("manage.py ")[1].split("”")[0].replace("SLUG", slug)
    said = io.StringIO()
    call_command(*typed.split(), "--output", str(tmp_path), stdout=said, no_color=True)

    lines = said.getvalue().splitlines()
    assert lines[:2] == [season.figures.proof, f"figures {digest(season.figures)}"]
    assert lines[2] == str(tmp_path)
    assert sorted(path.name for path in tmp_path.iterdir()) == sorted(lines[3].split())
    for name in lines[3].split():
        assert (tmp_path / name).stat().st_size > 10_000
    for sheet in pypdf.PdfReader(tmp_path / "report.pdf").pages:
        assert season.figures.proof in sheet.extract_text()
        assert "Invented demo: no real commons, no real people" in sheet.extract_text()


def test_the_columns_of_the_standing_sum_to_the_totals_of_use_and_settlement(
    season: PlayedSeason,
) -> None:
    for of in season.figures.resources:
        held = [
            each
            for row in season.figures.standings
            for each in row.holdings
            if each.resource == of.code
        ]
        settled = of.settlement
        assert sum(each.allotment for each in held) == of.allotted
        assert sum(each.carried_in for each in held) == of.carried_in
        assert sum(each.given_back for each in held) == settled.given_back > 0
        assert sum(each.taken for each in held) == of.taken - settled.after_close
        assert sum(each.left for each in held) == (
            settled.carried + settled.unclaimed - settled.owed
        )
    for after in season.figures.next_season:
        of = season.figures.resource(after.resource)
        assert (after.carried_in, after.owed) == (of.settlement.carried, of.settlement.owed)
