"""The statements that append: few, in plain SQL, the same on both databases."""

from collections import defaultdict
from collections.abc import Collection, Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from typing import Any

from django.db import connection
from django.db.backends.base.operations import BaseDatabaseOperations

from ledger.foundation import statements
from ledger.foundation.clocks import Chance
from ledger.foundation.statements import Statement
from ledger.journal import columns, leaves, models, tree

_KEYS_A_STATEMENT = 500

_ENTRY_COLUMNS = (
    "commons_id number kind occurred_at recorded_at day recorded_by device key reverses subject"
    " facts commitments salt leaf_hash"
).split()
_POSTING_COLUMNS = "commons_id number line account resource unit amount day".split()
_BALANCE_COLUMNS = "commons_id account resource unit amount".split()
_TEXT_COLUMNS = "commons_id number name text salt".split()

Accounts = Mapping[tuple[str, str, str], int]
"""Amounts by (account, resource, unit)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class LockedHead:
    """The head row of a journal, held against every other writer until the transaction ends."""

    commons_id: int
    journal_id: bytes
    size: int
    root: bytes
    edge: tree.Edge
    recorded_at: datetime
    broken: str


@dataclass(frozen=True, slots=True, kw_only=True)
class SealedDraft:
    """A draft with its number, salts and leaf hash."""

    draft: leaves.Draft
    number: int
    salt: bytes
    text_salts: Mapping[str, bytes]
    commitments: Mapping[str, str]
    leaf_hash: bytes


def lock(
    *, commons_id: int, keys: Mapping[str, Collection[str]]
) -> tuple[LockedHead | None, dict[tuple[str, str], int]]:
    """Lock a head and return it with the numbers of entries that stand under (device, key).

    The keys are looked up by statements of their own after the lock, so that they see what the
    writer before this one committed.
    """
    row = statements.run(
        Statement(
            sql="SELECT journal_id, size, root, edge, recorded_at, broken FROM journal_head"
            f" WHERE commons_id = %s {_for_update()}",
            values=[commons_id],
        )
    ).fetchone()
    standing: dict[tuple[str, str], int] = {}
    for device, wanted in keys.items():
        for part in _parts(sorted(wanted)):
            standing |= _standing(commons_id, device, part)
    return (None if row is None else _head(commons_id, row)), standing


def seal(
    *,
    head: LockedHead,
    drafts: Sequence[leaves.Draft],
    by: int,
    recorded_at: datetime,
    chance: Chance,
) -> tuple[SealedDraft, ...]:
    """Give drafts the numbers after the head, salts, and the hashes of their leaves."""
    return tuple(
        _seal(head.journal_id, head.size + place, draft, by, recorded_at, chance)
        for place, draft in enumerate(drafts, start=1)
    )


def fold(drafts: Sequence[leaves.Draft]) -> Accounts:
    """Return what drafts add to each account."""
    sums: defaultdict[tuple[str, str, str], int] = defaultdict(int)
    for draft in drafts:
        for posting in draft.postings:
            sums[posting.account, posting.resource, posting.unit] += posting.amount
    return sums


def write(
    *, head: LockedHead, sealed: Sequence[SealedDraft], by: int, recorded_at: datetime
) -> LockedHead:
    """Insert sealed drafts with all that hangs on them and return the head as it then stands."""
    hashes = [one.leaf_hash for one in sealed]
    edge = tree.extend(edge=head.edge, size=head.size, leaves=hashes)
    grown = LockedHead(
        commons_id=head.commons_id,
        journal_id=head.journal_id,
        size=head.size + len(sealed),
        root=tree.root_of_edge(edge),
        edge=edge,
        recorded_at=recorded_at,
        broken=head.broken,
    )
    at = connection.ops.adapt_datetimefield_value(recorded_at)
    update = Statement(
        sql="UPDATE journal_head SET size = %s, root = %s, edge = %s, recorded_at = %s"
        " WHERE commons_id = %s",
        values=[grown.size, grown.root, b"".join(edge), at, head.commons_id],
    )
    insertions = _insertions(head.commons_id, sealed, by, at)
    statements.run_together(statements=[*insertions, update])
    _write_tiles(head, hashes)
    return grown


def _standing(commons_id: int, device: str, keys: Sequence[str]) -> dict[tuple[str, str], int]:
    answer = statements.run(
        Statement(
            # That a key is not empty is said again so that the partial index can serve.
            sql="SELECT key, number FROM journal_entry WHERE commons_id = %s AND device = %s"
            f" AND NOT key = '' AND key IN ({', '.join(['%s'] * len(keys))})",
            values=[commons_id, device, *keys],
        )
    )
    return {(device, key): number for key, number in answer.fetchall()}


def _insertions(
    commons_id: int, sealed: Sequence[SealedDraft], by: int, recorded_at: Any
) -> Iterator[Statement]:
    # Looked up once: the way to a connection's parts is long.
    ops = connection.ops
    yield from statements.insertions(
        table="journal_entry",
        columns=_ENTRY_COLUMNS,
        rows=[_entry_row(ops, commons_id, one, by, recorded_at) for one in sealed],
    )
    yield from statements.insertions(
        table="journal_posting",
        columns=_POSTING_COLUMNS,
        rows=[row for one in sealed for row in _posting_rows(ops, commons_id, one)],
    )
    sums = fold([one.draft for one in sealed])
    yield from statements.insertions(
        table="journal_balance",
        columns=_BALANCE_COLUMNS,
        rows=[(commons_id, *names, amount) for names, amount in sorted(sums.items())],
        conflict="ON CONFLICT (commons_id, account, resource, unit)"
        " DO UPDATE SET amount = journal_balance.amount + excluded.amount",
    )
    yield from statements.insertions(
        table="journal_text",
        columns=_TEXT_COLUMNS,
        rows=[
            (commons_id, one.number, name, text, one.text_salts[name])
            for one in sealed
            for name, text in one.draft.texts.items()
        ],
    )


def _posting_rows(
    ops: BaseDatabaseOperations, commons_id: int, one: SealedDraft
) -> Iterator[tuple[Any, ...]]:
    day = ops.adapt_datefield_value(one.draft.day)
    for line, posting in enumerate(one.draft.postings):
        yield (
            *(commons_id, one.number, line, posting.account, posting.resource, posting.unit),
            *(posting.amount, day),
        )


def _entry_row(
    ops: BaseDatabaseOperations, commons_id: int, one: SealedDraft, by: int, recorded_at: Any
) -> tuple[Any, ...]:
    draft = one.draft
    return (
        commons_id,
        one.number,
        draft.kind,
        ops.adapt_datetimefield_value(draft.occurred_at),
        recorded_at,
        ops.adapt_datefield_value(draft.day),
        by,
        draft.device,
        draft.key or "",
        draft.reverses,
        draft.subject,
        leaves.facts_text(draft.facts),
        leaves.canonical(one.commitments).decode(),
        one.salt,
        one.leaf_hash,
    )


def _seal(
    journal_id: bytes,
    number: int,
    draft: leaves.Draft,
    by: int,
    recorded_at: datetime,
    chance: Chance,
) -> SealedDraft:
    salt = chance(leaves.SALT_BYTES)
    text_salts = {name: chance(leaves.SALT_BYTES) for name in draft.texts}
    commitments = {
        name: leaves.commitment(salt=text_salts[name], text=text)
        for name, text in draft.texts.items()
    }
    leaf = leaves.leaf_bytes(
        draft=draft,
        commitments=commitments,
        journal_id=journal_id,
        number=number,
        recorded_at=recorded_at,
        by=by,
        salt=salt,
    )
    return SealedDraft(
        draft=draft,
        number=number,
        salt=salt,
        text_salts=text_salts,
        commitments=commitments,
        leaf_hash=tree.leaf_hash(leaf),
    )


def _write_tiles(head: LockedHead, hashes: Sequence[bytes]) -> None:
    """Write the tiles that new hashes complete, level above level."""
    fresh = tuple(hashes)
    count = head.size
    level = 0
    tiles = []
    while (count + len(fresh)) // columns.TILE_WIDTH > count // columns.TILE_WIDTH:
        place = count // columns.TILE_WIDTH
        known = columns.level_hashes(
            commons_id=head.commons_id,
            level=level,
            first=place * columns.TILE_WIDTH,
            stop=count,
        )
        complete = _complete(known + fresh)
        roots = tuple(tree.root_of_leaves(part) for part in complete)
        tiles += [
            models.Tile(
                commons_id=head.commons_id,
                level=level,
                place=place + step,
                hashes=b"".join(part),
                root=root,
            )
            for step, (part, root) in enumerate(zip(complete, roots, strict=True))
        ]
        count, fresh, level = place, roots, level + 1
    models.Tile.objects.bulk_create(tiles)


def _complete(hashes: Sequence[bytes]) -> tuple[Sequence[bytes], ...]:
    whole = len(hashes) // columns.TILE_WIDTH * columns.TILE_WIDTH
    return tuple(
        hashes[start : start + columns.TILE_WIDTH] for start in range(0, whole, columns.TILE_WIDTH)
    )


def _head(commons_id: int, row: Sequence[Any]) -> LockedHead:
    journal_id, size, root, edge, recorded_at, broken = row
    return LockedHead(
        commons_id=commons_id,
        journal_id=bytes(journal_id),
        size=size,
        root=bytes(root),
        edge=columns.tile_hashes(bytes(edge)),
        # SQLite gives instants of plain statements without their zone, which is UTC.
        recorded_at=recorded_at.replace(tzinfo=recorded_at.tzinfo or UTC),
        broken=broken,
    )


def _parts(keys: Sequence[str]) -> list[Sequence[str]]:
    return [
        keys[first : first + _KEYS_A_STATEMENT] for first in range(0, len(keys), _KEYS_A_STATEMENT)
    ]


def _for_update() -> str:
    return connection.ops.for_update_sql() if connection.features.has_select_for_update else ""
