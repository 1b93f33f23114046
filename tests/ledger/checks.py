"""What the tests of every slice ask of an act: that it is one entry, or that it left no trace."""

from collections import defaultdict
from collections.abc import Iterator
from contextlib import contextmanager

import pytest
from django.apps import apps
from django.db import IntegrityError, connection, models, transaction

from governance.errors import StintbookError
from ledger.foundation import appendonly
from ledger.journal import queries as journal
from ledger.journal.leaves import EntryRecord

Line = tuple[str, str, str, int]


@contextmanager
def appends(commons_id: int, *, count: int = 1) -> Iterator[list[EntryRecord]]:
    """Demand that so many entries are appended, each balanced, and that the head moves.

    The entries stand in the list once the block is left.
    """
    before = journal.head(commons_id=commons_id)
    found: list[EntryRecord] = []
    yield found
    after = journal.head(commons_id=commons_id)
    assert after.size == before.size + count
    assert after.root != before.root
    found += journal.entries(commons_id=commons_id, after=before.size)
    for entry in found:
        sums: defaultdict[tuple[str, str], int] = defaultdict(int)
        for posting in entry.postings:
            sums[posting.resource, posting.unit] += posting.amount
        assert not any(sums.values()), f"entry {entry.number} leaves {dict(sums)} over"


@contextmanager
def refuses(error: type[StintbookError], *words: object) -> Iterator[None]:
    """Demand that an act is refused in these words, and that it wrote nothing at all.

    No savepoint is rolled back here: the act itself has to look before it writes.
    """
    before = _standing()
    with pytest.raises(error) as caught:
        yield
    for word in words:
        assert str(word) in str(caught.value)
    assert _standing() == before


@contextmanager
def violates(constraint: str) -> Iterator[None]:
    """Demand that the database refuses a row by a constraint of this name."""
    with pytest.raises(IntegrityError) as caught, transaction.atomic():
        yield
    if constraint in str(caught.value):
        return
    # SQLite names the columns of a unique constraint, and not the constraint.
    model, (broken,) = _constrained(constraint)
    assert connection.vendor == "sqlite"
    assert isinstance(broken, models.UniqueConstraint)
    columns = {field.name: field.column for field in model._meta.concrete_fields}
    columns |= {field.attname: field.column for field in model._meta.concrete_fields}
    named = ", ".join(f"{model._meta.db_table}.{columns[name]}" for name in broken.fields)
    assert str(caught.value) == f"UNIQUE constraint failed: {named}"


def constraints_of(app: str) -> set[str]:
    """Return the names of all the constraints of a slice's tables."""
    return {
        constraint.name
        for model in apps.get_app_config(app).get_models()
        for constraint in model._meta.constraints
    }


def sealed_of(app: str) -> list[type[models.Model]]:
    """Return the models of a slice whose rows are written once."""
    return [
        model
        for model in apps.get_app_config(app).get_models()
        if issubclass(model, appendonly.AppendOnlyModel)
    ]


def assert_sealed(model: type[models.Model]) -> None:
    """Demand that the rows of a table cannot be changed or removed, by the model or by SQL."""
    manager = model._default_manager
    row = manager.first()
    assert row is not None, "a sealed table without a row proves nothing"
    before = list(manager.values())
    for act in (row.save, row.delete, manager.all().delete, lambda: manager.update(commons_id=0)):
        with pytest.raises(appendonly.RowIsSealed, match=model._meta.db_table):
            act()
    table = model._meta.db_table
    # PostgreSQL truncates no table whose rows of this transaction still wait for their checks.
    connection.check_constraints()
    statements = [f"UPDATE {table} SET commons_id = commons_id", f"DELETE FROM {table}"]
    if connection.vendor == "postgresql":
        statements.append(f"TRUNCATE {table}")
    for statement in statements:
        with (
            pytest.raises(IntegrityError, match="sealed"),
            transaction.atomic(),
            connection.cursor() as cursor,
        ):
            cursor.execute(statement)
    assert list(manager.values()) == before


def lines(entry: EntryRecord) -> list[Line]:
    """Return an entry's postings as (account, resource, unit, amount)."""
    return [(one.account, one.resource, one.unit, one.amount) for one in entry.postings]


def _standing() -> dict[str, object]:
    """Return how many rows every table of the book holds, and every head."""
    found: dict[str, object] = {
        model._meta.label: model._default_manager.count()
        for model in apps.get_models()
        if model.__module__.startswith("ledger.")
    }
    for commons_id in journal.journals():
        found[f"head of {commons_id}"] = journal.head(commons_id=commons_id)
    return found


def _constrained(name: str) -> tuple[type[models.Model], list[models.BaseConstraint]]:
    return next(
        (model, [each])
        for model in apps.get_models()
        for each in model._meta.constraints
        if each.name == name
    )
