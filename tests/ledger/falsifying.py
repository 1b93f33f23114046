"""What only somebody at the database can do: change sealed rows behind the back of the triggers."""

from collections.abc import Iterable

from django.db import connection

from ledger.foundation import statements, triggers
from ledger.foundation.statements import Statement
from ledger.journal.verification import Problem


def falsify(sql: str, *values: object) -> None:
    """Drop the triggers, change rows, and put the triggers back, so that nothing shows."""
    # PostgreSQL alters no table whose rows of this transaction still wait for their checks.
    connection.check_constraints()
    with connection.cursor() as cursor:
        for name in triggers._definitions(connection):
            if connection.vendor != "postgresql":
                cursor.execute(f"DROP TRIGGER {name}")
            elif name.endswith("_rows"):
                cursor.execute(
                    f"ALTER TABLE {name.removesuffix('_sealed_rows')} DISABLE TRIGGER {name}"
                )
    statements.run(Statement(sql=sql, values=values))
    connection.check_constraints()
    triggers.install_triggers(connection)
    assert triggers.missing_triggers(connection) == ()


def told(problems: Iterable[Problem]) -> set[tuple[str, int | None]]:
    """Return which tables, or invariants, are said to be broken at which entries."""
    return {(problem.invariant, problem.number) for problem in problems}
