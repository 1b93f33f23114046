"""The whole check in one command: ``python -m tests.check``.

Format, lint, types, imports, migrations, then the tests: on SQLite, and beside it on PostgreSQL
where STINTBOOK_TEST_POSTGRESQL names a server for tests. Stops at the first step that fails; the
two runs of the tests are both brought to their end.
"""

import os
import shlex
import subprocess
import sys
import tempfile
from time import monotonic
from typing import IO

_PYTHON = sys.executable
STEPS: tuple[tuple[str, ...], ...] = (
    (_PYTHON, "-m", "ruff", "format", "--check", "."),
    (_PYTHON, "-m", "ruff", "check", "."),
    (_PYTHON, "-m", "mypy", "governance", "ledger"),
    (_PYTHON, "-c", "from importlinter.cli import lint_imports_command; lint_imports_command()"),
    (_PYTHON, "manage.py", "makemigrations", "--check", "--dry-run"),
)
TESTS = (_PYTHON, "-m", "pytest", "-q")


def main() -> int:
    """Run every step; return the exit code of the first that fails, or nought."""
    for step in STEPS:
        code = _run(step)
        if code:
            return code
    databases = ["sqlite"]
    if os.environ.get("STINTBOOK_TEST_POSTGRESQL"):
        databases.append("postgresql")
    else:
        print("STINTBOOK_TEST_POSTGRESQL names no server: the tests run on SQLite alone.")
    return _test(databases)


def _run(step: tuple[str, ...]) -> int:
    print(f"== {shlex.join(step[1:])}", flush=True)
    started = monotonic()
    code = subprocess.run(step, check=False).returncode
    _say_ending(code, started)
    return code


def _test(databases: list[str]) -> int:
    """Run the tests on each database at the same time; print one account after the other."""
    started = monotonic()
    runs = [_begun(database) for database in databases]
    codes = []
    for database, process, account in runs:
        codes.append(process.wait())
        print(f"== STINTBOOK_TEST_ON={database} {shlex.join(TESTS[1:])}", flush=True)
        account.seek(0)
        sys.stdout.write(account.read())
        account.close()
        _say_ending(codes[-1], started)
    return next((code for code in codes if code), 0)


def _begun(database: str) -> tuple[str, subprocess.Popen[bytes], IO[str]]:
    account = tempfile.TemporaryFile("w+", encoding="utf-8")
    process = subprocess.Popen(
        TESTS,
        env=os.environ | {"STINTBOOK_TEST_ON": database},
        stdout=account,
        stderr=subprocess.STDOUT,
    )
    return database, process, account


def _say_ending(code: int, started: float) -> None:
    ending = "ok" if code == 0 else f"failed ({code})"
    print(f"== {ending} in {monotonic() - started:.0f} s", flush=True)


if __name__ == "__main__":
    sys.exit(main())
