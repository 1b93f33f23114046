"""The invariants of a journal, recomputed from its rows: what ``manage.py verify`` runs.

I1 numbers without gap or repeat, in the order of time. I2 leaves, tiles, open edge and root give
the stored head. I3 postings sum to zero. I4 balances are the fold of postings. I5 nothing was
updated or deleted: the triggers stand, and an entry has at most one reversal, its opposite.
"""

from collections import defaultdict
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime
from typing import Any

from django.db import connection
from django.db.models import F, IntegerField, Max, Value

from ledger.foundation import triggers
from ledger.journal import columns, leaves, models, queries, tree

Progress = Callable[[int, int], None]
"""Called with how many entries are done, and of how many."""

_TILE_LEVELS_MAX = 8
# A journal that is broken throughout is not told entry by entry.
_PROBLEMS_MAX = 1_000


MEANINGS = {
    "I1": "entries are numbered without gap, in the order of time",
    "I2": "entries and tree give the head",
    "I3": "postings sum to zero",
    "I4": "balances are the sums of postings",
    "I5": "nothing sealed was changed",
}
"""Each invariant of a journal in words."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Problem:
    """One broken invariant: which, at which entry if it is one entry's, and what differs.

    ``invariant`` is a code of ``MEANINGS``, or the plain name of a table beside the entries.
    """

    invariant: str
    number: int | None
    what: str

    def __str__(self) -> str:
        place = ":" if self.number is None else f" entry {self.number:,}:"
        return f"{self.invariant}{place} {self.what}"


def verify(*, commons_id: int, progress: Progress) -> tuple[Problem, ...]:
    """Return what is broken up to the head of this moment, the first entry first.

    Reads by ranges of numbers, each a short read; posting may go on meanwhile. Gives up when it has
    found a thousand problems.

    :raises JournalNotOpen: if the commons has no journal.
    """
    head = models.Head.objects.filter(pk=commons_id).first()
    if head is None:
        raise queries.JournalNotOpen(commons_id=commons_id)
    reading = _Reading(head)
    for part in columns.sealed_entries(commons_id=commons_id, after=0, up_to=head.size):
        originals = columns.sealed_by_number(
            commons_id=commons_id,
            numbers=[entry.reverses for entry in part if entry.reverses is not None],
        )
        for entry in part:
            reading.take(entry, originals)
        progress(part[-1].number, head.size)
        if len(reading.problems) >= _PROBLEMS_MAX:
            return _in_order(reading.problems)
    reading.finish()
    return _in_order([*reading.problems, *_beyond_the_head(commons_id), *_triggers()])


def _in_order(problems: list[Problem]) -> tuple[Problem, ...]:
    return tuple(
        sorted(problems, key=lambda one: (one.number is None, one.number or 0, one.invariant))
    )


class _Reading:
    """What one pass over the entries carries along."""

    def __init__(self, head: models.Head) -> None:
        self.head = head
        self.problems: list[Problem] = []
        self.next_number = 1
        self.recorded_at: datetime | None = None
        self.sums: defaultdict[tuple[str, str, str], int] = defaultdict(int)
        self.reversed: set[int] = set()
        self.tree = _Tree(head)

    def take(
        self, entry: columns.SealedEntry, originals: Mapping[int, columns.SealedEntry]
    ) -> None:
        """Check the next entry and add it to the sums and the tree."""
        self._note(_order(entry, self.next_number, self.recorded_at))
        if entry.number != self.next_number:
            self.tree.is_whole = False
        self.next_number = entry.number + 1
        self.recorded_at = entry.recorded_at
        derived = _derived(entry, bytes(self.head.journal_id))
        self._note(self.tree.take(entry, derived))
        self._note(_texts(entry))
        self._note(_postings(entry))
        if entry.reverses is not None:
            self._note(_reversal(entry, originals.get(entry.reverses), self.reversed))
            self.reversed.add(entry.reverses)
        for posting in entry.postings:
            self.sums[posting.account, posting.resource, posting.unit] += posting.amount

    def finish(self) -> None:
        """Compare with the head, the edge and the balances."""
        size = self.head.size
        if self.next_number <= size:
            self.tree.is_whole = False
            self._note(_missing(self.next_number, size))
        elif size and self.recorded_at != self.head.recorded_at:
            self._note(_one("I1", size, "the head was recorded at another instant"))
        self._note(self.tree.finish())
        self._note(_balances(self.head.commons_id, size, self.sums))

    def _note(self, problems: Iterator[Problem]) -> None:
        self.problems.extend(problems)


class _Tree:
    """The tree recomputed from stored leaf hashes, against tiles, open edge and root."""

    def __init__(self, head: models.Head) -> None:
        self.head = head
        self.is_whole = True
        self.leaves: list[bytes] = []
        self.doubtful: dict[int, bytes | None] = {}
        self.told: set[int] = set()
        self.levels: list[list[bytes]] = [[] for _ in range(_TILE_LEVELS_MAX + 1)]
        self.places = [0] * (_TILE_LEVELS_MAX + 1)

    def take(self, entry: columns.SealedEntry, derived: bytes | None) -> Iterator[Problem]:
        """Add an entry; say what is wrong with it as soon as its tile is complete."""
        if derived != entry.leaf_hash:
            self.doubtful[entry.number] = derived
        self.leaves.append(entry.leaf_hash)
        if self.is_whole and len(self.leaves) == columns.TILE_WIDTH:
            yield from self._complete(0, self.leaves)
            self.leaves = []
        elif not self.is_whole:
            yield from self._doubts({})

    def finish(self) -> Iterator[Problem]:
        """Compare the incomplete tiles with the open edge and the root of the head."""
        yield from self._doubts({})
        if not self.is_whole:
            return
        size, edge = self.head.size, columns.tile_hashes(bytes(self.head.edge))
        found = tree.edge_of_size(size=size, read=self._read)
        start = 0
        for level in reversed(range(size.bit_length())):
            if size >> level & 1:
                place = bin(size >> level).count("1") - 1
                stop = start + (1 << level)
                differs = place >= len(edge) or edge[place] != found[place]
                if differs and not self._is_told(start, stop):
                    span = f"entries {start + 1:,}–{stop:,}"
                    yield from _one("I2", start + 1, f"{span} do not give the head's open edge")
                start = stop
        if len(edge) != len(found) or tree.root_of_edge(found) != bytes(self.head.root):
            yield from _one("I2", None, "the tree's root is not the head's")

    def _read(self, level: int, index: int) -> bytes:
        tile_level, rise = divmod(level, columns.TILE_LEVELS)
        hashes = self.levels[tile_level] if tile_level else self.leaves
        start = (index << rise) % columns.TILE_WIDTH
        return tree.root_of_leaves(hashes[start : start + (1 << rise)])

    def _complete(self, level: int, hashes: list[bytes]) -> Iterator[Problem]:
        """Compare a complete tile with its row, and hand its root to the level above."""
        place = self.places[level]
        self.places[level] += 1
        root = tree.root_of_leaves(hashes)
        row = models.Tile.objects.filter(
            commons_id=self.head.commons_id, level=level, place=place
        ).first()
        first = (place << (level + 1) * columns.TILE_LEVELS) + 1
        stored = () if row is None else columns.tile_hashes(bytes(row.hashes))
        if level == 0:
            yield from self._doubts(dict(enumerate(stored, start=first)))
        width = columns.TILE_WIDTH**level
        if row is None:
            yield from _one("I2", first, f"tile {level}/{place} is missing")
        elif stored != tuple(hashes) or bytes(row.root) != root:
            pairs = enumerate(zip(stored, hashes, strict=False))
            at = next((at for at, (one, other) in pairs if one != other), 0) * width
            if not self._is_told(first - 1 + at, first - 1 + at + width):
                self.told.add(first + at)
                yield from _one("I2", first + at, f"tile {level}/{place} holds other hashes")
        upper = self.levels[level + 1]
        upper.append(root)
        if len(upper) == columns.TILE_WIDTH:
            yield from self._complete(level + 1, list(upper))
            upper.clear()

    def _doubts(self, sealed: Mapping[int, bytes]) -> Iterator[Problem]:
        """Say of entries whose columns do not give their leaf hash which of the two moved."""
        for number, derived in self.doubtful.items():
            self.told.add(number)
            yield from _one("I2", number, _what_moved(derived, sealed.get(number)))
        self.doubtful = {}

    def _is_told(self, after: int, up_to: int) -> bool:
        """Return whether a nearer cause was named among some entries."""
        return any(after < number <= up_to for number in self.told)


def _what_moved(derived: bytes | None, sealed: bytes | None) -> str:
    if derived is not None and derived == sealed:
        return "its stored leaf hash is not the one its columns and its tile give"
    return "its columns do not give the leaf hash under which it was sealed"


def _one(invariant: str, number: int | None, what: str) -> Iterator[Problem]:
    yield Problem(invariant=invariant, number=number, what=what)


def _missing(first: int, last: int) -> Iterator[Problem]:
    span = "it is missing" if first == last else f"it and all up to {last:,} are missing"
    yield from _one("I1", first, span)


def _order(
    entry: columns.SealedEntry, expected: int, recorded_at: datetime | None
) -> Iterator[Problem]:
    if entry.number > expected:
        yield from _missing(expected, entry.number - 1)
    if recorded_at is not None and entry.recorded_at < recorded_at:
        yield from _one("I1", entry.number, "it was recorded before the entry before it")


def _derived(entry: columns.SealedEntry, journal_id: bytes) -> bytes | None:
    """Return the leaf hash that the columns give, or None if they give no leaf."""
    try:
        draft, commitments = entry.draft(), entry.commitments
        if leaves.facts_text(draft.facts) != entry.facts_text:
            return None
        leaf = entry.leaf(draft=draft, commitments=commitments, journal_id=journal_id)
    except (ValueError, AttributeError, leaves.MalformedDraft):
        return None
    return tree.leaf_hash(leaf)


def _texts(entry: columns.SealedEntry) -> Iterator[Problem]:
    try:
        sealed = entry.commitments
    except ValueError:
        return  # told by the leaf hash
    texts = {name: one.text for name, one in entry.texts.items()}
    found = entry.commit(texts)
    for name in sorted(sealed.keys() | found.keys()):
        if name not in found:
            yield from _one("I5", entry.number, f"its text {name!r} is missing")
        elif sealed.get(name) != found[name]:
            yield from _one("I5", entry.number, f"its text {name!r} is not the sealed one")


def _postings(entry: columns.SealedEntry) -> Iterator[Problem]:
    sums: defaultdict[tuple[str, str], int] = defaultdict(int)
    for posting in entry.postings:
        sums[posting.resource, posting.unit] += posting.amount
    for (resource, unit), left in sorted(sums.items()):
        if left:
            what = f"its postings leave {left:,} {unit} of {resource} over"
            yield from _one("I3", entry.number, what)
    if entry.posting_days - {entry.day}:
        yield from _one("I5", entry.number, "a posting of it carries another day")


def _reversal(
    entry: columns.SealedEntry, original: columns.SealedEntry | None, reversed_before: set[int]
) -> Iterator[Problem]:
    number = entry.number
    if original is None or original.number >= number:
        yield from _one("I5", number, f"it reverses entry {entry.reverses:,}, not one before it")
        return
    if entry.reverses in reversed_before:
        yield from _one("I5", number, f"it reverses entry {original.number:,} a second time")
    if original.reverses is not None:
        yield from _one("I5", number, f"it reverses a reversal, entry {original.number:,}")
    opposite = tuple(
        (one.account, one.resource, one.unit, -one.amount) for one in original.postings
    )
    if opposite != tuple(
        (one.account, one.resource, one.unit, one.amount) for one in entry.postings
    ):
        yield from _one("I5", number, f"it is not the opposite of entry {original.number:,}")


def _balances(
    commons_id: int, size: int, sums: Mapping[tuple[str, str, str], int]
) -> Iterator[Problem]:
    """Compare balances, less what was posted after the head, with the fold up to the head."""
    left = defaultdict(int, sums)
    names = ("account", "resource", "unit", "amount", "sign")
    stored = models.Balance.objects.filter(commons_id=commons_id)
    later = models.Posting.objects.filter(commons_id=commons_id, number__gt=size)
    # One statement is one snapshot, whoever posts meanwhile.
    rows: Any = (
        stored.annotate(sign=_sign(-1))
        .values_list(*names)
        .union(later.annotate(sign=_sign(1)).values_list(*names), all=True)
    )
    for account, resource, unit, amount, sign in rows:
        left[account, resource, unit] += sign * amount
    for (account, resource, unit), amount in sorted(left.items()):
        if amount:
            what = f"the balance of {account} is {-amount:+,} {unit} of {resource} off its postings"
            yield from _one("I4", None, what)


def _sign(sign: int) -> Value:
    return Value(sign, output_field=IntegerField())


def _beyond_the_head(commons_id: int) -> Iterator[Problem]:
    """Find rows numbered past the head; the head is read after them, so that it covers them."""
    last = {
        name: model.objects.filter(commons_id=commons_id).aggregate(last=Max("number"))["last"]
        for name, model in (
            ("an entry", models.Entry),
            ("a posting", models.Posting),
            ("a text", models.Text),
        )
    }
    tiles = list(
        models.Tile.objects.filter(commons_id=commons_id)
        .values_list("level")
        .annotate(last=Max(F("place")))
    )
    size = queries.head(commons_id=commons_id).size
    for name, number in last.items():
        if number is not None and number > size:
            yield from _one("I1", number, f"{name} of this number stands past the head")
    for level, place in tiles:
        if place >= size >> (level + 1) * columns.TILE_LEVELS:
            yield from _one("I2", None, f"tile {level}/{place} stands past the head")


def _triggers() -> Iterator[Problem]:
    for name in triggers.missing_triggers(connection):
        yield from _one("I5", None, f"the trigger {name} is missing or was changed")
