"""The triggers by which the database itself keeps append-only rows from change.

They are put in place after every migrate, because SQLite rebuilds an altered table without its
triggers. Models say by ``rows_are_sealed`` that their tables get them: this module is loaded before
any model can be.
"""

from django.apps import apps
from django.db.backends.base.base import BaseDatabaseWrapper


def sealed_tables(connection: BaseDatabaseWrapper) -> tuple[str, ...]:
    """Return the tables of append-only models that stand in a database, in order of name."""
    standing = set(connection.introspection.table_names())
    return tuple(
        sorted(
            model._meta.db_table
            for model in apps.get_models()
            if getattr(model, "rows_are_sealed", False) and model._meta.db_table in standing
        )
    )


def install_triggers(connection: BaseDatabaseWrapper) -> None:
    """Put every trigger in place that is missing or differs; leave the others alone."""
    missing = set(missing_triggers(connection))
    if not missing:
        return
    with connection.cursor() as cursor:
        for name, statements in _definitions(connection).items():
            if name in missing:
                for statement in statements:
                    cursor.execute(statement)


def missing_triggers(connection: BaseDatabaseWrapper) -> tuple[str, ...]:
    """Return the names of triggers that are absent, switched off or not as written here."""
    standing = _standing(connection)
    return tuple(
        name
        for name, statements in _definitions(connection).items()
        if standing.get(name) != _fingerprint(connection, name, statements)
    )


# SQLite: one trigger for each act; its text stands in sqlite_master as it was written.
# PostgreSQL: one function for all, and two triggers a table. They raise an integrity error on
# both, so that callers see one class of error.

_FUNCTION = "stintbook_row_is_sealed"
_FUNCTION_BODY = """
BEGIN
    RAISE EXCEPTION 'rows of % are sealed; % is refused', TG_TABLE_NAME, TG_OP
        USING ERRCODE = 'restrict_violation';
END
"""


def _definitions(connection: BaseDatabaseWrapper) -> dict[str, tuple[str, ...]]:
    tables = sealed_tables(connection)
    if connection.vendor == "postgresql":
        return _postgresql_definitions(tables)
    return _sqlite_definitions(tables)


def _sqlite_definitions(tables: tuple[str, ...]) -> dict[str, tuple[str, ...]]:
    found: dict[str, tuple[str, ...]] = {}
    for table in tables:
        for act in ("UPDATE", "DELETE"):
            name = f"{table}_sealed_{act.lower()}"
            found[name] = (
                f'DROP TRIGGER IF EXISTS "{name}"',
                f'CREATE TRIGGER "{name}" BEFORE {act} ON "{table}" BEGIN SELECT RAISE(ABORT,'
                f" 'rows of {table} are sealed; {act} is refused'); END",
            )
    return found


def _postgresql_definitions(tables: tuple[str, ...]) -> dict[str, tuple[str, ...]]:
    found: dict[str, tuple[str, ...]] = {}
    if tables:
        found[_FUNCTION] = (
            f"CREATE OR REPLACE FUNCTION {_FUNCTION}() RETURNS trigger LANGUAGE plpgsql AS"
            f" $body${_FUNCTION_BODY}$body$",
        )
    for table in tables:
        for name, event, each in (
            (f"{table}_sealed_rows", "DELETE OR UPDATE", "ROW"),
            (f"{table}_sealed_table", "TRUNCATE", "STATEMENT"),
        ):
            found[name] = (
                f'CREATE OR REPLACE TRIGGER {name} BEFORE {event} ON "{table}"'
                f" FOR EACH {each} EXECUTE FUNCTION {_FUNCTION}()",
                f'ALTER TABLE "{table}" ENABLE TRIGGER {name}',
            )
    return found


def _fingerprint(connection: BaseDatabaseWrapper, name: str, statements: tuple[str, ...]) -> str:
    if connection.vendor != "postgresql":
        return statements[-1]
    if name == _FUNCTION:
        return _FUNCTION_BODY
    return "O " + statements[0].replace("CREATE OR REPLACE", "CREATE").replace('"', "")


def _standing(connection: BaseDatabaseWrapper) -> dict[str, str]:
    with connection.cursor() as cursor:
        if connection.vendor != "postgresql":
            cursor.execute("SELECT name, sql FROM sqlite_master WHERE type = 'trigger'")
            return dict(cursor.fetchall())
        # "O" is a trigger that fires in ordinary sessions; "D" one that was switched off.
        cursor.execute(
            "SELECT tgname, tgenabled::text || ' ' || pg_get_triggerdef(pg_trigger.oid, true)"
            " FROM pg_trigger JOIN pg_class ON pg_class.oid = tgrelid"
            " WHERE NOT tgisinternal AND relnamespace = current_schema()::regnamespace"
            " UNION ALL SELECT proname, prosrc FROM pg_proc"
            " WHERE proname = %s AND pronamespace = current_schema()::regnamespace",
            [_FUNCTION],
        )
        return dict(cursor.fetchall())
