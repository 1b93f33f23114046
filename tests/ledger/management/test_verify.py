"""``manage.py verify`` on a whole commons: what it says, what it stops, what it asks for."""

import os
import subprocess
import sys
from datetime import date
from pathlib import Path

import pytest
from django.core.management import CommandError, call_command

from ledger import settings
from ledger.foundation.clocks import Chance
from ledger.journal import operations
from tests.conftest import TickingClock
from tests.ledger import falsifying, scene
from tests.ledger.cases import walks


@pytest.fixture
def bay(db: None, ticking_clock: TickingClock, chance: Chance) -> scene.Scene:
    """The small commons, with a case walked to its fine."""
    bay = scene.opened(clock=ticking_clock, chance=chance)
    walks.noted(bay, date(2026, 3, 2))
    walks.final(bay, 1, date(2026, 3, 2))
    return bay


def _verified(capsys: pytest.CaptureFixture[str]) -> tuple[list[str], str]:
    """Verify what is broken, and return its lines and what it was about."""
    with pytest.raises(CommandError, match="Broken, and posting is stopped") as left:
        call_command("verify")
    assert left.value.returncode == 1
    told = capsys.readouterr()
    return told.out.splitlines(), told.err


def test_an_honest_season_is_sound(bay: scene.Scene, capsys: pytest.CaptureFixture[str]) -> None:
    call_command("verify")
    told = capsys.readouterr()
    assert told.out.endswith(": sound\n")
    assert "the findings against the entries" in told.err


def test_a_falsified_row_is_a_line_and_stops_posting(
    bay: scene.Scene, capsys: pytest.CaptureFixture[str]
) -> None:
    falsifying.falsify("UPDATE commons_member SET household = 1 WHERE number = 3")
    falsifying.falsify("UPDATE seasons_allowable SET amount = 5 WHERE entry_number = 13")
    lines, progress = _verified(capsys)
    assert lines[0].endswith(": broken")
    assert lines[1:] == [
        "  members entry 4: the member: household is 1; it should be 3",
        "  allowables entry 13: the allowable: amount is 5; it should be 1100000",
    ]
    assert "not judged anew" in progress
    with pytest.raises(operations.JournalStopped, match="members entry 4"):
        bay.lands("9", day=date(2026, 3, 20))

    falsifying.falsify("UPDATE commons_member SET household = 3 WHERE number = 3")
    falsifying.falsify("UPDATE seasons_allowable SET amount = 1100000 WHERE entry_number = 13")
    call_command("verify", "--resume")
    assert "sound; posting goes on" in capsys.readouterr().out
    bay.lands("9", day=date(2026, 3, 20))


def test_an_unreadable_edition_is_told_and_not_judged(
    bay: scene.Scene, capsys: pytest.CaptureFixture[str]
) -> None:
    falsifying.falsify("UPDATE bylaws_edition SET text = 'clauses: ['")
    lines, _ = _verified(capsys)
    assert [line[:33] for line in lines[1:]] == ["  bylaw editions entry 10: the edi"[:33]]


def test_a_falsified_finding(bay: scene.Scene, capsys: pytest.CaptureFixture[str]) -> None:
    falsifying.falsify("UPDATE judgement_findingversion SET breach = 1")
    lines, _ = _verified(capsys)
    assert lines[1:] == [
        "  findings entry 18: finding 1 (clause 3.2, household 5, from 2026-03-02):"
        " breach is 1; it should be 1000"
    ]


def test_a_broken_entry_bears_no_witness(
    bay: scene.Scene, capsys: pytest.CaptureFixture[str]
) -> None:
    falsifying.falsify("UPDATE journal_entry SET facts = 'no facts' WHERE number = 4")
    lines, progress = _verified(capsys)
    assert lines[1].startswith("  I2 (entries and tree give the head) entry 4: ")
    assert "so no table is compared" in progress


def test_a_wrong_balance_does_not_hide_a_wrong_row(
    bay: scene.Scene, capsys: pytest.CaptureFixture[str]
) -> None:
    falsifying.falsify(
        "UPDATE journal_balance SET amount = amount + 1 WHERE account = 'taken:clams-2026:5'"
    )
    falsifying.falsify("DELETE FROM commons_zone WHERE code = 'pier_sand'")
    lines, _ = _verified(capsys)
    assert lines[1].startswith("  I4 (balances are the sums of postings): the balance of taken:")
    assert lines[2] == "  zones entry 1: the zone pier_sand: its row is missing"


def test_a_commons_without_its_journal(
    bay: scene.Scene, capsys: pytest.CaptureFixture[str]
) -> None:
    falsifying.falsify("DELETE FROM journal_head")
    lines, _ = _verified(capsys)
    assert lines == [f"journal {bay.commons_id}: broken", "  The commons has no head of a journal."]


def test_an_unknown_journal(bay: scene.Scene) -> None:
    with pytest.raises(
        CommandError, match=rf"^Found the journal 99; accepted are {bay.commons_id}\.$"
    ):
        call_command("verify", "--journal", "99")


class TestProcess:
    """The command as a process of its own, the way a secretary runs it."""

    def test_no_book_yet(self, tmp_path: Path) -> None:
        path = tmp_path / "none.sqlite3"
        assert _said(f"sqlite:///{path}") == (
            f"CommandError: There is no book at {path} yet: run migrate first.\n"
        )
        assert not path.exists()

    def test_an_empty_file(self, tmp_path: Path) -> None:
        path = tmp_path / "empty.sqlite3"
        path.touch()
        said = _said(f"sqlite:///{path}")
        assert said == (
            "CommandError: The database has no tables yet, or old ones: run migrate first.\n"
        )

    def test_a_server_that_does_not_answer(self) -> None:
        said = _said("postgresql://nobody@127.0.0.1:1/none")
        assert said.startswith("CommandError: The database does not answer: ")
        assert said.count("\n") == 1


def _said(address: str) -> str:
    """Return what a failing run says."""
    done = subprocess.run(
        [sys.executable, "manage.py", "verify"],
        cwd=settings.ROOT,
        env=os.environ | {"STINTBOOK_DATABASE": address},
        capture_output=True,
        text=True,
        check=False,
    )
    assert (done.returncode, done.stdout) == (1, "")
    return done.stderr
