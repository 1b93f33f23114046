"""Sealed rows: the model refuses, and so does the database."""

import pytest
from django.core.management import call_command
from django.db import DatabaseError, IntegrityError, connection, transaction

from ledger.foundation import appendonly, triggers
from ledger.journal.models import Tile
from tests.conftest import CommittingDatabase

SEALED = ("journal_entry", "journal_posting", "journal_tile")


def _tile(place: int = 0) -> Tile:
    return Tile(commons_id=1, level=0, place=place, hashes=b"h", root=b"r")


def _run(sql: str) -> None:
    with transaction.atomic(), connection.cursor() as cursor:
        cursor.execute(sql)


def _drop(name: str, table: str) -> None:
    _run(f"DROP TRIGGER {name}" + (f" ON {table}" if connection.vendor == "postgresql" else ""))


@pytest.mark.django_db
class TestModel:
    """Every way of Django's to change a row is refused."""

    def test_a_new_row_is_saved_once(self) -> None:
        tile = _tile()
        tile.save()
        with pytest.raises(appendonly.RowIsSealed):
            tile.save()
        with pytest.raises(appendonly.RowIsSealed):
            Tile.objects.get().save()

    def test_saving_never_overwrites(self) -> None:
        _tile().save()
        with pytest.raises(IntegrityError):
            _tile().save()

    def test_changes_and_deletions_are_refused(self) -> None:
        tile = Tile.objects.bulk_create([_tile()])[0]
        for refused in (
            lambda: tile.delete(),
            lambda: Tile.objects.update(root=b"x"),
            lambda: Tile.objects.filter(place=0).delete(),
            lambda: Tile.objects.bulk_update([tile], ["root"]),
            lambda: Tile.objects.update_or_create(place=0, root=b"x"),
            lambda: Tile.objects.bulk_create(
                [_tile()],
                update_conflicts=True,
                update_fields=["root"],
                unique_fields=["commons_id", "level", "place"],
            ),
        ):
            with pytest.raises(appendonly.RowIsSealed):
                refused()
        assert bytes(Tile.objects.get().root) == b"r"


class TestDatabase:
    """Plain SQL is refused too, on every sealed table."""

    @pytest.mark.django_db
    def test_plain_sql_is_refused(self) -> None:
        _tile().save()
        acts = ["UPDATE journal_tile SET level = 1", "DELETE FROM journal_tile"]
        if connection.vendor == "postgresql":
            acts += ["TRUNCATE journal_tile", "TRUNCATE journal_entry, journal_posting CASCADE"]
        else:
            acts.append(
                "REPLACE INTO journal_tile (commons_id, level, place, hashes, root)"
                " VALUES (1, 0, 0, 'x', 'x')"
            )
        for act in acts:
            with pytest.raises(IntegrityError, match="sealed"):
                _run(act)
        assert bytes(Tile.objects.get().root) == b"r"

    @pytest.mark.django_db
    def test_every_sealed_table_has_its_triggers(self) -> None:
        assert set(SEALED) <= set(triggers.sealed_tables(connection))
        assert triggers.missing_triggers(connection) == ()

    def test_a_migrate_puts_them_back(self, committing_db: CommittingDatabase) -> None:
        names = [
            name for name in triggers._definitions(connection) if name.startswith("journal_tile")
        ]
        assert len(names) == 2
        for name in names:
            _drop(name, "journal_tile")
        assert triggers.missing_triggers(connection) == tuple(names)
        call_command("migrate", "foundation", verbosity=0)
        assert triggers.missing_triggers(connection) == ()
        _tile().save()
        with pytest.raises(DatabaseError, match="sealed"):
            _run("UPDATE journal_tile SET level = 1")

    def test_a_changed_trigger_is_told_and_mended(self, committing_db: CommittingDatabase) -> None:
        if connection.vendor == "postgresql":
            _run("ALTER TABLE journal_tile DISABLE TRIGGER journal_tile_sealed_rows")
            changed = "journal_tile_sealed_rows"
        else:
            changed = "journal_tile_sealed_update"
            _drop(changed, "journal_tile")
            _run(f"CREATE TRIGGER {changed} BEFORE UPDATE ON journal_tile BEGIN SELECT 1; END")
        assert triggers.missing_triggers(connection) == (changed,)
        triggers.install_triggers(connection)
        assert triggers.missing_triggers(connection) == ()

    def test_a_hollow_function_is_told_and_mended(self, committing_db: CommittingDatabase) -> None:
        if connection.vendor != "postgresql":
            return  # SQLite has no functions of its own; its triggers are whole
        _run(
            "CREATE OR REPLACE FUNCTION stintbook_row_is_sealed() RETURNS trigger"
            " LANGUAGE plpgsql AS $$ BEGIN RETURN NEW; END $$"
        )
        assert triggers.missing_triggers(connection) == ("stintbook_row_is_sealed",)
        call_command("migrate", "foundation", verbosity=0)
        assert triggers.missing_triggers(connection) == ()

    def test_installing_twice_changes_nothing(self, committing_db: CommittingDatabase) -> None:
        triggers.install_triggers(connection)
        triggers.install_triggers(connection)
        assert triggers.missing_triggers(connection) == ()
