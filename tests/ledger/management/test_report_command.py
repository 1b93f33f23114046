"""``manage.py report`` and how ``manage.py demo`` starts: what they refuse, in what words."""

import io
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

import pytest
from django.conf import LazySettings
from django.core.management import CommandError, call_command
from django.db import IntegrityError

from ledger.commons import queries as commons
from ledger.foundation.clocks import seeded_chance
from ledger.management import playing, scenario
from ledger.management.commands import demo
from ledger.reports import collecting
from tests.conftest import TickingClock
from tests.ledger import builders

pytestmark = pytest.mark.django_db


@pytest.fixture
def slug() -> str:
    """The short name of a commons whose season is open."""
    clock = TickingClock(datetime(2026, 3, 1, 9, 0, tzinfo=UTC))
    found = builders.opened(hand=builders.hand(clock=clock, chance=seeded_chance(7)))
    return commons.commons(commons_id=found).slug


@pytest.fixture
def blocked(tmp_path: Path) -> Path:
    """A folder that cannot be made, for a file stands where its parent would."""
    (tmp_path / "file").write_text("")
    return tmp_path / "file" / "below"


def _report(**options: Any) -> None:
    call_command("report", stdout=io.StringIO(), stderr=io.StringIO(), **options)


def test_an_unknown_commons_is_refused_with_those_that_are_known(slug: str) -> None:
    with pytest.raises(CommandError, match=f"Found the commons 'nowhere'; accepted are {slug}"):
        _report(commons="nowhere", season="2026-03-01")


def test_a_season_that_is_no_day_is_refused(slug: str) -> None:
    with pytest.raises(CommandError, match="accepted is its first day, such as 2026-03-01"):
        _report(commons=slug, season="2026")


def test_a_day_that_no_season_begins_on_is_refused(slug: str, tmp_path: Path) -> None:
    with pytest.raises(CommandError, match="No season begins on 1999-03-01; seasons begin on 20"):
        _report(commons=slug, season="1999-03-01", output=str(tmp_path))


def test_a_folder_that_takes_no_file_is_refused_before_anything_is_computed(
    slug: str, blocked: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    asked: list[object] = []
    monkeypatch.setattr(collecting, "season_figures", lambda **given: asked.append(given))
    with pytest.raises(CommandError, match=r"Nothing can be written into the folder .*below: "):
        _report(commons=slug, season="2026-03-01", output=str(blocked))
    assert asked == []


def test_a_demo_that_cannot_write_its_report_is_not_played(
    blocked: Path, settings: LazySettings
) -> None:
    settings.OUTPUT = blocked
    with pytest.raises(CommandError, match=r"Nothing can be written into the folder .*below: "):
        call_command("demo", stdout=io.StringIO(), stderr=io.StringIO())
    assert commons.every_commons() == ()


def test_a_demo_gives_way_to_one_that_took_its_name(monkeypatch: pytest.MonkeyPatch) -> None:
    story = scenario.read(folder=demo.FOLDER)
    first, _ = demo.begun(story)
    free = demo.free_slug
    # What this run saw a moment ago, before the other one founded its commons.
    seen = iter([first])
    monkeypatch.setattr(demo, "free_slug", lambda: next(seen, "") or free())
    second, play = demo.begun(story)
    assert (first, second) == ("tarrin-bay-demo-1", "tarrin-bay-demo-2")
    assert commons.commons_named(slug=second).commons_id == play.commons_id


def test_a_demo_that_is_overtaken_for_ever_says_so(monkeypatch: pytest.MonkeyPatch) -> None:
    def overtaken(**given: object) -> None:
        raise IntegrityError

    monkeypatch.setattr(playing, "begin", overtaken)
    with pytest.raises(CommandError, match="Other demos are being started just now"):
        demo.begun(scenario.read(folder=demo.FOLDER))
