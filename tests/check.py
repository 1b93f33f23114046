"""The whole check in one command: ``python -m tests.check``.

Format, lint, types, imports, migrations, then the tests: on SQLite, and again on PostgreSQL where
STINTBOOK_TEST_POSTGRESQL names a server for tests. Stops at the first step that fails.
"""

import os
import shlex
import subprocess
import sys
from time import monotonic

_PYTHON = sys.executable
STEPS: tuple[tuple[str, ...], ...] = (
    (_PYTHON, "-m", "ruff", "format", "--check", "."),
    (_PYTHON, "-m", "ruff", "check", "."),
    (_PYTHON, "-m", "mypy", "governance", "ledger"),
    (_PYTHON, "-c", "from importlinter.cli import lint_imports_command; lint_imports_command()"),
    (_PYTHON, "manage.py", "makemigrations", "--check", "--dry-run"),
)


def main() -> int:
    """Run every step; return the exit code of the first that fails, or nought."""
    for step in STEPS:
        code = _run(step, {})
        if code:
            return code
    databases = ["sqlite"]
    if os.environ.get("STINTBOOK_TEST_POSTGRESQL"):
        databases.append("postgresql")
    else:
        print("STINTBOOK_TEST_POSTGRESQL names no server: the tests run on SQLite alone.")
    for database in databases:
        code = _run((_PYTHON, "-m", "pytest", "-q"), {"STINTBOOK_TEST_ON": database})
        if code:
            return code
    return 0


def _run(step: tuple[str, ...], variables: dict[str, str]) -> int:
    shown = shlex.join([*(f"{name}={value}" for name, value in variables.items()), *step[1:]])
    print(f"== {shown}", flush=True)
    started = monotonic()
    code = subprocess.run(step, env=os.environ | variables, check=False).returncode
    print(
        f"== {'ok' if code == 0 else f'failed ({code})'} in {monotonic() - started:.0f} s",
        flush=True,
    )
    return code


if __name__ == "__main__":
    sys.exit(main())
