"""``python -m tests.bench``: measure the program against its baselines, both in the same run."""

import argparse
import importlib
import json
import os
import subprocess
import sys

import django

from tests.bench import rounds

BENCHES = (
    "posting",
    "posting_batch",
    "http",
    "standing_page",
    "season_page",
    "judging",
    "projection",
    "projection_bent",
)
SIZES = ("small", "full")


def main() -> int:
    """Run the chosen benches; return 1 if one misses its bound."""
    parser = argparse.ArgumentParser(prog="python -m tests.bench", description=__doc__)
    parser.add_argument("names", nargs="*", metavar="NAME", help=f"of {', '.join(BENCHES)}; or all")
    parser.add_argument("--size", choices=SIZES, default="small")
    parser.add_argument("--json", action="store_true", help="print a list of objects")
    chosen = parser.parse_args()
    unknown = sorted(set(chosen.names) - set(BENCHES))
    if unknown:
        parser.error(f"no bench is called {', '.join(unknown)}")
    names = chosen.names or list(BENCHES)
    if len(names) == 1:
        found = [_measured(names[0], size=chosen.size)]
    else:
        found = [_measured_apart(name, size=chosen.size) for name in names]
    print(rounds.as_json(found) if chosen.json else rounds.as_table(found))
    return 0 if all(one.holds for one in found) else 1


def _measured(name: str, *, size: str) -> rounds.Measurement:
    print(f"measuring {name} …", file=sys.stderr, flush=True)
    # Imported by name: a bench that uses the book can be loaded only after Django is set up.
    found: rounds.Measurement = importlib.import_module(f"tests.bench.{name}").measure(size=size)
    return found


def _measured_apart(name: str, *, size: str) -> rounds.Measurement:
    """Measure in a process of its own.

    What one bench leaves behind changes the next: in one process, after the judging of a million
    takes, the projection came to 1.1 of its baseline's speed; in a process of its own, to 3.2.
    """
    command = (sys.executable, "-m", "tests.bench", name, "--size", size, "--json")
    answer = subprocess.run(command, stdout=subprocess.PIPE, check=False, text=True)
    return rounds.Measurement(**json.loads(answer.stdout)[0])


if __name__ == "__main__":
    os.environ.setdefault("DJANGO_SETTINGS_MODULE", "ledger.settings")
    django.setup()
    sys.exit(main())
