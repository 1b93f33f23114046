"""The invariants of a journal, recomputed from its rows: what `manage.py verify` runs.

I1 numbers without gap or repeat, in the order of time. I2 leaves, tiles, open edge and root give
the stored head. I3 postings sum to zero. I4 balances are the fold of postings. I5 nothing was
updated or deleted: the triggers stand, and an entry has at most one reversal, its opposite.
"""

from collections import defaultdict
from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass, field
from datetime import datetime

from django.db import connection
from django.db.models import F

from ledger.foundation import triggers
from ledger.journal import columns, leaves, models, queries, tree

Progress = Callable[[int, int], None]
"""Called with how many entries are done, and of how many."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Problem:
    """One broken invariant: which, at which entry if it is one entry's, and what differs."""

    invariant: str
    number: int | None
    what: str

    def __str__(self) -> str:
        place = "" if self.number is None else f" entry {self.number:,}:"
        return f"{self.invariant}{place} {self.what}"


def verify(*, commons_id: int, progress: Progress) -> tuple[Problem, ...]:
    """Return what is broken up to the head of this moment, the first entry first.

    Reads by ranges of numbers, each a short read; posting may go on meanwhile.

    :raises JournalNotOpen: if the commons has no journal.
    """
    head = models.Head.objects.filter(pk=commons_id).first()
    if head is None:
        raise queries.JournalNotOpen(commons_id=commons_id)
    pass_ = _Pass(head=head)
    for part in columns.sealed_entries(commons_id=commons_id, after=0, up_to=head.size):
        reversed_before = columns.reversed_entries(commons_id=commons_id, part=part)
        tiles = columns.tiles_over(commons_id=commons_id, part=part)
        for entry in part:
            pass_.take(entry, original=reversed_before.get(entry.reverses or 0), tiles=tiles)
        progress(part[-1].number, head.size)
    problems = [*pass_.problems, *pass_.at_the_end(), *_beyond(commons_id), *_missing_triggers()]
    return tuple(sorted(problems, key=_first_entry_first))


def _first_entry_first(problem: Problem) -> tuple[bool, int, str]:
    return problem.number is None, problem.number or 0, problem.invariant
