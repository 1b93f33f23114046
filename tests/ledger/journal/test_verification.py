"""Every tampering is told, with the entry that it touched."""

import os
import subprocess
import sys
from collections.abc import Callable
from typing import Any

import pytest
from django.core.management import CommandError, call_command
from django.db import connection, transaction
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ledger import settings as ledger_settings
from ledger.foundation import statements, triggers
from ledger.foundation.statements import Statement
from ledger.journal import columns, models, operations, queries, tree, verification
from ledger.journal.leaves import Receipt
from tests.conftest import CommittingDatabase
from tests.ledger.falsifying import falsify as _tamper
from tests.ledger.journal.conftest import COMMONS, Append
from tests.ledger.journal.drafts import draft, posting

ENTRIES = 300
REVERSAL = ENTRIES + 1


def _verify() -> tuple[verification.Problem, ...]:
    return verification.verify(commons_id=COMMONS, progress=lambda done, of: None)


def _found() -> tuple[str, int | None]:
    first = _verify()[0]
    return first.invariant, first.number


@pytest.fixture
def book(db: None, append: Append, reverse: Callable[..., Receipt]) -> None:
    """A journal of a complete tile and more, whose entry 2 is reversed by the last."""
    append(
        *(
            draft(at, texts={"note": f"slip {at}"}, key=f"k{at}", device="phone")
            for at in range(1, ENTRIES + 1)
        )
    )
    reverse(2)


def test_a_sound_journal(book: None) -> None:
    seen: list[tuple[int, int]] = []
    problems = verification.verify(
        commons_id=COMMONS, progress=lambda done, of: seen.append((done, of))
    )
    assert problems == ()
    assert seen[-1] == (REVERSAL, REVERSAL)


@pytest.mark.django_db
def test_an_empty_journal_is_sound(append: Append) -> None:
    append()
    assert _verify() == ()


@pytest.mark.django_db
def test_no_journal() -> None:
    with pytest.raises(queries.JournalNotOpen):
        _verify()


@pytest.mark.parametrize("number", [1, 128, 256, 257, 300])
@pytest.mark.parametrize(
    ("column", "value"),
    [
        ("kind", "contribution"),
        ("occurred_at", "2026-03-01 13:00:00"),
        ("recorded_by", 9),
        ("device", "other"),
        ("key", "other"),
        ("subject", 18),
        ("facts", '{"amount":1,"gear":"GNS"}'),
        ("facts", '{"amount":"1","gear":"GN"}'),
        ("facts", '{"amount":1, "gear":"GN"}'),
        ("facts", "no facts"),
        ("commitments", "{}"),
        ("salt", b"0123456789abcdef"),
        ("leaf_hash", bytes(32)),
    ],
)
def test_a_changed_column_of_an_entry(book: None, number: int, column: str, value: object) -> None:
    _tamper(f"UPDATE journal_entry SET {column} = %s WHERE number = {number}", value)
    problems = _verify()
    assert (problems[0].invariant, problems[0].number) == ("I2", number)
    assert {problem.number for problem in problems} <= {number, 257, None}


def test_a_changed_day_or_instant(book: None) -> None:
    _tamper("UPDATE journal_entry SET day = '2026-03-02' WHERE number = 5")
    assert _found() == ("I2", 5)
    _tamper("UPDATE journal_entry SET recorded_at = '2026-02-01 09:00:00' WHERE number = 4")
    assert {("I1", 4), ("I2", 4)} <= {(one.invariant, one.number) for one in _verify()}


@pytest.mark.parametrize(
    ("sql", "found"),
    [
        ("UPDATE journal_posting SET amount = amount + 1 WHERE number = 7 AND line = 0", "I3"),
        ("UPDATE journal_posting SET amount = amount * 2 WHERE number = 7", "I2"),
        ("UPDATE journal_posting SET account = 'x' WHERE number = 7 AND line = 0", "I2"),
        ("UPDATE journal_posting SET resource = 'x' WHERE number = 7", "I2"),
        ("UPDATE journal_posting SET unit = 'kg' WHERE number = 7", "I2"),
        ("UPDATE journal_posting SET day = '2026-04-01' WHERE number = 7 AND line = 1", "I5"),
        ("DELETE FROM journal_posting WHERE number = 7", "I2"),
        ("DELETE FROM journal_posting WHERE number = 7 AND line = 1", "I3"),
        ("UPDATE journal_text SET text = 'no slip' WHERE number = 7", "I5"),
        ("UPDATE journal_text SET salt = text_salt WHERE number = 7", "I5"),
        ("DELETE FROM journal_text WHERE number = 7", "I5"),
    ],
)
def test_changed_parts_of_an_entry(book: None, sql: str, found: str) -> None:
    _tamper(sql.replace("text_salt", _one_byte()))
    problems = _verify()
    assert problems[0].number == 7
    assert found in {problem.invariant for problem in problems if problem.number == 7}


def _one_byte() -> str:
    return "'\\x00'::bytea" if connection.vendor == "postgresql" else "x'00'"


def test_an_added_text(book: None) -> None:
    _tamper(
        "INSERT INTO journal_text (commons_id, number, name, text, salt)"
        " VALUES (1, 7, 'b', 'c', %s)",
        b"s",
    )
    assert _found() == ("I5", 7)


@pytest.mark.parametrize(("number", "named"), [(1, 1), (9, 9), (REVERSAL, REVERSAL)])
def test_a_deleted_entry(book: None, number: int, named: int) -> None:
    _tamper(f"DELETE FROM journal_entry WHERE number = {number}")
    assert _found() == ("I1", named)


def test_rows_past_the_head(book: None) -> None:
    _tamper("UPDATE journal_head SET size = size - 1")
    assert {(one.invariant, one.number) for one in _verify()} >= {("I1", REVERSAL), ("I2", None)}


@pytest.mark.parametrize(
    "sql",
    [
        "UPDATE journal_head SET root = %s",
        "UPDATE journal_head SET edge = %s",
    ],
)
def test_a_changed_head(book: None, sql: str) -> None:
    _tamper(sql, bytes(32))
    assert {problem.invariant for problem in _verify()} == {"I2"}


def test_a_journal_broken_throughout_is_given_up(
    book: None, append: Append, monkeypatch: pytest.MonkeyPatch
) -> None:
    append(*(draft(at) for at in range(1, 900)))
    _tamper("UPDATE journal_head SET journal_id = %s", bytes(16))
    assert len(_verify()) > 1_000
    monkeypatch.setattr(verification, "_PROBLEMS_MAX", 100)
    assert 100 <= len(_verify()) <= columns.RANGE


def test_a_head_of_another_journal(book: None) -> None:
    _tamper("UPDATE journal_head SET journal_id = %s", bytes(16))
    assert _found() == ("I2", 1)


@pytest.mark.parametrize(
    ("sql", "number"),
    [
        ("UPDATE journal_tile SET root = %s", 1),
        ("UPDATE journal_tile SET hashes = %s", 1),
        ("DELETE FROM journal_tile WHERE root <> %s", 1),
        (
            "INSERT INTO journal_tile (commons_id, level, place, hashes, root)"
            " SELECT commons_id, 1, 0, hashes, %s FROM journal_tile",
            None,
        ),
    ],
)
def test_changed_tiles(book: None, sql: str, number: int | None) -> None:
    _tamper(sql, bytes(32))
    assert _found() == ("I2", number)


def test_a_tile_that_holds_one_other_hash(book: None) -> None:
    hashes = bytearray(bytes(models.Tile.objects.get().hashes))
    hashes[32 * 99] ^= 1
    _tamper("UPDATE journal_tile SET hashes = %s", bytes(hashes))
    assert _found() == ("I2", 100)


def test_an_entry_sealed_anew_in_the_open_tile(book: None) -> None:
    """Somebody who computes the leaf hash again is told by the tree."""
    _tamper("UPDATE journal_entry SET subject = 1 WHERE number = 290")
    leaf = queries.receipt_leaf(commons_id=COMMONS, number=290)
    _tamper("UPDATE journal_entry SET leaf_hash = %s WHERE number = 290", tree.leaf_hash(leaf))
    first = _verify()[0]
    # The head's edge of 301 entries: 1–256, 257–288, 289–296, 297–300, 301.
    assert (first.invariant, first.number) == ("I2", 289)
    assert "entries 289–296" in first.what


@pytest.mark.parametrize(
    "sql",
    [
        "UPDATE journal_balance SET amount = amount + 1 WHERE account = 'pool:mullet'",
        "DELETE FROM journal_balance WHERE account = 'pool:mullet'",
        "INSERT INTO journal_balance (commons_id, account, resource, unit, amount)"
        " VALUES (1, 'pool:made up', 'mullet', 'g', 5)",
    ],
)
def test_changed_balances(book: None, sql: str) -> None:
    _tamper(sql)
    (problem,) = _verify()
    assert (problem.invariant, problem.number) == ("I4", None)
    assert "pool:m" in problem.what


@pytest.mark.parametrize("reverses", [3, None, 290])
def test_a_changed_reversal(book: None, reverses: int | None) -> None:
    _tamper(f"UPDATE journal_entry SET reverses = %s WHERE number = {REVERSAL}", reverses)
    assert ("I2", REVERSAL) in {(one.invariant, one.number) for one in _verify()}


def test_a_second_reversal(book: None) -> None:
    _tamper("DROP INDEX journal_entry_one_reversal")
    _tamper("UPDATE journal_entry SET reverses = 2 WHERE number = 300")
    told = [one.what for one in _verify() if one.invariant == "I5"]
    assert "it is not the opposite of entry 2" in told
    assert "it reverses entry 2 a second time" in told


def test_a_missing_trigger(book: None) -> None:
    name = next(name for name in triggers._definitions(connection) if name.startswith("journal_t"))
    table = " ON journal_tile" if connection.vendor == "postgresql" else ""
    statements.run(Statement(sql=f"DROP TRIGGER {name}{table}", values=()))
    (problem,) = _verify()
    assert (problem.invariant, problem.number) == ("I5", None)
    assert name in problem.what


def test_posting_after_the_head_was_read_is_not_a_fault(book: None, append: Append) -> None:
    """The head is fixed first; what is appended meanwhile belongs to the next verification."""

    def append_once(done: int, of: int) -> None:
        if done == of:
            append(draft(5, member=77), draft(6))

    assert verification.verify(commons_id=COMMONS, progress=append_once) == ()


@settings(max_examples=12, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(data=st.data())
def test_any_flipped_bit_of_a_leaf_hash_or_salt_is_told(book: None, data: st.DataObject) -> None:
    number = data.draw(st.integers(1, REVERSAL))
    column = data.draw(st.sampled_from(["leaf_hash", "salt"]))
    entry = models.Entry.objects.get(commons_id=COMMONS, number=number)
    value = bytearray(bytes(getattr(entry, column)))
    value[data.draw(st.integers(0, len(value) - 1))] ^= 1 << data.draw(st.integers(0, 7))
    with transaction.atomic():
        _tamper(f"UPDATE journal_entry SET {column} = %s WHERE number = {number}", bytes(value))
        assert _found() == ("I2", number)
        transaction.set_rollback(True)


class TestCommand:
    """``manage.py verify``: a line a journal, and a broken one is stopped."""

    def test_sound(self, book: None, append: Append, capsys: Any) -> None:
        append(draft(), commons_id=2)
        call_command("verify")
        told = capsys.readouterr()
        lines = told.out.splitlines()
        assert len(lines) == 2
        assert lines[0].startswith("journal 1: entries 1–301 · head ")
        assert all(line.endswith(": sound") for line in lines)
        assert "journal 1: 301 of 301 entries" in told.err

    def test_one_journal_only(self, book: None, append: Append, capsys: Any) -> None:
        append(draft(), commons_id=2)
        call_command("verify", "--journal", "2")
        assert capsys.readouterr().out.startswith("journal 2: entries 1–1 ")

    @pytest.mark.django_db
    def test_none(self, capsys: Any) -> None:
        call_command("verify")
        assert capsys.readouterr().out == "No journal to verify.\n"

    def test_broken_is_stopped_named_and_resumed_when_mended(
        self, book: None, append: Append, capsys: Any
    ) -> None:
        append(draft(), commons_id=2)
        _tamper("UPDATE journal_entry SET subject = 18 WHERE commons_id = 1 AND number = 12")
        with pytest.raises(CommandError, match=r"posting is stopped: journal 1$") as left:
            call_command("verify")
        assert left.value.returncode == 1
        first, problem, second = capsys.readouterr().out.splitlines()
        assert first.endswith(": broken")
        assert problem.startswith(
            "  I2 (entries and tree give the head) entry 12: its columns do not give the leaf hash"
        )
        assert second.endswith("sound")
        with pytest.raises(operations.JournalStopped):
            append(draft())
        append(draft(), commons_id=2)

        _tamper("UPDATE journal_entry SET subject = 17 WHERE commons_id = 1 AND number = 12")
        call_command("verify")
        assert "posting is still stopped (I2 entry 12:" in capsys.readouterr().out
        call_command("verify", "--resume")
        assert "sound; posting goes on" in capsys.readouterr().out
        append(draft())


@pytest.mark.django_db
def test_the_opposite_is_checked_line_by_line(append: Append) -> None:
    lines = (posting("a", 1), posting("b", -1))
    append(draft(postings=lines))
    append(draft(postings=operations.opposite(lines), reverses=1, kind="reversal"))
    _tamper("UPDATE journal_posting SET account = 'c' WHERE number = 2 AND line = 0")
    told = [(one.invariant, one.number, one.what) for one in _verify()]
    assert ("I5", 2, "it is not the opposite of entry 1") in told


class TestProcess:
    """The command as a process of its own, the way a secretary runs it."""

    def test_exit_code_and_line(self, committing_db: CommittingDatabase, append: Append) -> None:
        append(*(draft(at) for at in range(1, 4)))
        sound = _run_verify(committing_db)
        assert (sound.returncode, sound.stdout.endswith(": sound\n")) == (0, True)
        _tamper("UPDATE journal_posting SET amount = 9 WHERE number = 3 AND line = 0")
        broken = _run_verify(committing_db)
        assert broken.returncode == 1
        assert "  I2 (entries and tree give the head) entry 3: " in broken.stdout
        assert queries.why_stopped(commons_id=COMMONS).startswith("I2 entry 3:")


def _run_verify(database: CommittingDatabase) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "manage.py", "verify"],
        cwd=ledger_settings.ROOT,
        env=os.environ | {"STINTBOOK_DATABASE": database.address},
        capture_output=True,
        text=True,
        check=False,
    )
