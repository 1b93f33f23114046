"""``python -m tests.bench``: measure the program against its baselines, both in the same run."""

import argparse
import importlib
import os
import sys

import django

from tests.bench import rounds

BENCHES = (
    "posting",
    "posting_batch",
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
    found: list[rounds.Measurement] = []
    for name in chosen.names or BENCHES:
        print(f"measuring {name} …", file=sys.stderr, flush=True)
        # Imported by name: a bench that uses the book can be loaded only after Django is set up.
        found.append(importlib.import_module(f"tests.bench.{name}").measure(size=chosen.size))
    print(rounds.as_json(found) if chosen.json else rounds.as_table(found))
    return 0 if all(one.holds for one in found) else 1


if __name__ == "__main__":
    os.environ.setdefault("DJANGO_SETTINGS_MODULE", "ledger.settings")
    django.setup()
    sys.exit(main())
