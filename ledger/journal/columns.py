"""Rows of the journal's tables, turned into records and into the hashes of its tree."""

import json
from collections import defaultdict
from collections.abc import Collection, Iterable, Iterator, Mapping
from dataclasses import dataclass
from datetime import date, datetime
from typing import Any

from django.db.models import Q

from ledger.journal import leaves, models, tree

TILE_LEVELS = 8
TILE_WIDTH = 1 << TILE_LEVELS
RANGE = 500


@dataclass(frozen=True, slots=True, kw_only=True)
class SealedText:
    """A free text and the salt of its commitment."""

    text: str
    salt: bytes


@dataclass(frozen=True, slots=True, kw_only=True)
class SealedEntry:
    """Every column of an entry, its postings and texts, as they stand."""

    number: int
    kind: str
    occurred_at: datetime
    recorded_at: datetime
    day: date
    by: int
    device: str
    key: str | None
    reverses: int | None
    subject: int | None
    facts_text: str
    commitments_text: str
    salt: bytes
    leaf_hash: bytes
    postings: tuple[leaves.Posting, ...]
    posting_days: frozenset[date]
    texts: dict[str, SealedText]

    @property
    def facts(self) -> dict[str, Any]:
        """Return the facts, whole numbers as numbers."""
        found: dict[str, Any] = json.loads(self.facts_text)
        return found

    def draft(self) -> leaves.Draft:
        """Return the draft that gives this entry.

        :raises MalformedDraft: if the columns hold what no draft can.
        :raises ValueError: if the facts are no JSON.
        """
        return leaves.Draft(
            kind=self.kind,
            occurred_at=self.occurred_at,
            day=self.day,
            facts=self.facts,
            postings=self.postings,
            texts={name: sealed.text for name, sealed in self.texts.items()},
            key=self.key,
            device=self.device,
            reverses=self.reverses,
            subject=self.subject,
        )

    @property
    def commitments(self) -> dict[str, str]:
        """Return what the leaf says of the texts, by name."""
        found: dict[str, str] = json.loads(self.commitments_text)
        return found

    def commit(self, texts: Mapping[str, str]) -> dict[str, str]:
        """Return commitments to texts under the salts of this entry's texts of the same names.

        A text of another name is left out, so that the commitments differ.
        """
        return {
            name: leaves.commitment(salt=self.texts[name].salt, text=text)
            for name, text in texts.items()
            if name in self.texts
        }

    def leaf(
        self, *, draft: leaves.Draft, commitments: Mapping[str, str], journal_id: bytes
    ) -> bytes:
        """Return the leaf that a draft gives under this entry's number, instant and salt."""
        return leaves.leaf_bytes(
            draft=draft,
            commitments=commitments,
            journal_id=journal_id,
            number=self.number,
            recorded_at=self.recorded_at,
            by=self.by,
            salt=self.salt,
        )

    def record(self, *, reversed_by: int | None) -> leaves.EntryRecord:
        """Return the entry as others read it."""
        return leaves.EntryRecord(
            number=self.number,
            kind=self.kind,
            occurred_at=self.occurred_at,
            recorded_at=self.recorded_at,
            day=self.day,
            by=self.by,
            device=self.device,
            key=self.key,
            reverses=self.reverses,
            reversed_by=reversed_by,
            subject=self.subject,
            facts=self.facts,
            postings=self.postings,
            texts={name: sealed.text for name, sealed in self.texts.items()},
        )


def sealed_entries(
    *,
    commons_id: int,
    after: int,
    up_to: int,
    kinds: Collection[str] | None = None,
    subject: int | None = None,
) -> Iterator[tuple[SealedEntry, ...]]:
    """Yield entries in order of number, some hundreds at a time, each part a short read."""
    while after < up_to:
        found = models.Entry.objects.filter(
            commons_id=commons_id, number__gt=after, number__lte=up_to
        )
        if kinds is not None:
            found = found.filter(kind__in=kinds)
        if subject is not None:
            found = found.filter(subject=subject)
        part = tuple(found.order_by("number")[:RANGE])
        if not part:
            return
        yield _sealed(commons_id, part)
        after = part[-1].number


def sealed_by_number(*, commons_id: int, numbers: Collection[int]) -> dict[int, SealedEntry]:
    """Return those of the numbered entries that exist."""
    wanted = sorted(set(numbers))
    found: dict[int, SealedEntry] = {}
    for first in range(0, len(wanted), RANGE):
        part = models.Entry.objects.filter(
            commons_id=commons_id, number__in=wanted[first : first + RANGE]
        )
        found |= {entry.number: entry for entry in _sealed(commons_id, tuple(part))}
    return found


def reversals(*, commons_id: int, numbers: Collection[int], up_to: int) -> dict[int, int]:
    """Return, of entries reversed by one numbered up to a head, the number of the reversal."""
    wanted = sorted(set(numbers))
    found: dict[int, int] = {}
    for first in range(0, len(wanted), RANGE):
        part = models.Entry.objects.filter(
            commons_id=commons_id, reverses__in=wanted[first : first + RANGE], number__lte=up_to
        )
        for reversed_number, number in part.values_list("reverses", "number"):
            if reversed_number is not None:
                found[reversed_number] = number
    return found


def tree_reader(*, commons_id: int, size: int) -> tree.Read:
    """Return a reader of perfect subtrees among the first ``size`` entries.

    A complete tile is one row; of the incomplete one on the right, the hashes come from the
    entries or from the roots of the tiles below. At most 256 hashes are read for a level of tiles.
    """
    known: dict[tuple[int, int], tuple[bytes, ...]] = {}

    def read(level: int, index: int) -> bytes:
        tile_level, rise = divmod(level, TILE_LEVELS)
        place, offset = divmod(index << rise, TILE_WIDTH)
        if (tile_level, place) not in known:
            known[tile_level, place] = _tile(commons_id, size, tile_level, place)
        return tree.root_of_leaves(known[tile_level, place][offset : offset + (1 << rise)])

    return read


def tile_hashes(hashes: bytes) -> tuple[bytes, ...]:
    """Return the hashes of a tile one by one."""
    return tuple(
        hashes[start : start + tree.HASH_BYTES] for start in range(0, len(hashes), tree.HASH_BYTES)
    )


def level_hashes(*, commons_id: int, level: int, first: int, stop: int) -> tuple[bytes, ...]:
    """Return hashes of a level of tiles by index, from entries or from roots of tiles below."""
    if level == 0:
        return tuple(
            bytes(value)
            for value in models.Entry.objects.filter(
                commons_id=commons_id, number__gt=first, number__lte=stop
            )
            .order_by("number")
            .values_list("leaf_hash", flat=True)
        )
    return tuple(
        bytes(value)
        for value in models.Tile.objects.filter(
            commons_id=commons_id, level=level - 1, place__gte=first, place__lt=stop
        )
        .order_by("place")
        .values_list("root", flat=True)
    )


def _tile(commons_id: int, size: int, level: int, place: int) -> tuple[bytes, ...]:
    count = size >> level * TILE_LEVELS
    first, stop = place * TILE_WIDTH, (place + 1) * TILE_WIDTH
    if stop <= count:
        tile = models.Tile.objects.get(commons_id=commons_id, level=level, place=place)
        return tile_hashes(bytes(tile.hashes))
    return level_hashes(commons_id=commons_id, level=level, first=first, stop=count)


def _sealed(commons_id: int, entries: Iterable[models.Entry]) -> tuple[SealedEntry, ...]:
    entries = tuple(entries)
    numbered = _numbered([entry.number for entry in entries])
    postings: defaultdict[int, list[leaves.Posting]] = defaultdict(list)
    days: defaultdict[int, set[date]] = defaultdict(set)
    for number, account, resource, unit, amount, day in (
        models.Posting.objects.filter(numbered, commons_id=commons_id)
        .order_by("number", "line")
        .values_list("number", "account", "resource", "unit", "amount", "day")
    ):
        days[number].add(day)
        postings[number].append(
            leaves.Posting(account=account, resource=resource, unit=unit, amount=amount)
        )
    texts: defaultdict[int, dict[str, SealedText]] = defaultdict(dict)
    for number, name, text, salt in (
        models.Text.objects.filter(numbered, commons_id=commons_id)
        .order_by("number", "name")
        .values_list("number", "name", "text", "salt")
    ):
        texts[number][name] = SealedText(text=text, salt=bytes(salt))
    return tuple(
        SealedEntry(
            number=entry.number,
            kind=entry.kind,
            occurred_at=entry.occurred_at,
            recorded_at=entry.recorded_at,
            day=entry.day,
            by=entry.by,
            device=entry.device,
            key=entry.key or None,
            reverses=entry.reverses,
            subject=entry.subject,
            facts_text=entry.facts,
            commitments_text=entry.commitments,
            salt=bytes(entry.salt),
            leaf_hash=bytes(entry.leaf_hash),
            postings=tuple(postings[entry.number]),
            posting_days=frozenset(days[entry.number]),
            texts=texts[entry.number],
        )
        for entry in entries
    )


def _numbered(numbers: list[int]) -> Q:
    """Return the condition on these numbers: as a range where they have no gap, which is faster."""
    if not numbers or max(numbers) - min(numbers) >= len(numbers):
        return Q(number__in=numbers)
    return Q(number__gte=min(numbers), number__lte=max(numbers))
