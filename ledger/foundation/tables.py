"""Whether the tables of the database are those of this program."""

from django.db import connection
from django.db.migrations.executor import MigrationExecutor


def are_current() -> bool:
    """Return whether every migration of this program was applied."""
    executor = MigrationExecutor(connection)
    return not executor.migration_plan(executor.loader.graph.leaf_nodes())
