"""The only writers of the journal. Every operation requires a transaction."""

from collections import defaultdict
from collections.abc import Sequence
from datetime import date, datetime
from typing import ClassVar

from django.db import DataError, IntegrityError

from ledger.foundation import transactions
from ledger.foundation.clocks import Chance, Clock
from ledger.foundation.errors import LedgerError
from ledger.journal import columns, leaves, models, queries, tree, writing
from ledger.journal.leaves import Draft, Posting, Receipt

JOURNAL_ID_BYTES = 16


class JournalAlreadyOpen(LedgerError):
    """The commons has its journal already."""

    code: ClassVar[str] = "journal.already_open"
    message: ClassVar[str] = "Commons {commons_id} has its journal already."


class JournalStopped(LedgerError):
    """Posting is stopped because an invariant of the journal is broken."""

    code: ClassVar[str] = "journal.stopped"
    message: ClassVar[str] = "Posting to commons {commons_id} is stopped: {why}"


class UnbalancedEntry(LedgerError):
    """The postings of an entry do not sum to zero."""

    code: ClassVar[str] = "journal.unbalanced_entry"
    message: ClassVar[str] = "The postings of a {kind} leave {left} {unit} of {resource} over."


class AmountOutOfRange(LedgerError):
    """An amount, or what an account would hold, does not fit 64 bits."""

    code: ClassVar[str] = "journal.amount_out_of_range"
    message: ClassVar[str] = "An amount on {account} does not fit 64 bits."


class KeyReused(LedgerError):
    """An idempotency key came again with another content."""

    code: ClassVar[str] = "journal.key_reused"
    message: ClassVar[str] = "The key {key} stands for another entry: {number}."


class AlreadyReversed(LedgerError):
    """The entry was reversed before."""

    code: ClassVar[str] = "journal.already_reversed"
    message: ClassVar[str] = "Entry {number} was reversed before."


class EntryIsReversal(LedgerError):
    """A reversal cannot be reversed; the act is recorded anew instead."""

    code: ClassVar[str] = "journal.entry_is_reversal"
    message: ClassVar[str] = "Entry {number} is itself a reversal."


class NotOpposite(LedgerError):
    """The postings of a reversal are not the opposite of the original's."""

    code: ClassVar[str] = "journal.not_opposite"
    message: ClassVar[str] = "The postings are not the opposite of those of entry {number}."


@transactions.required
def open_journal(*, commons_id: int, clock: Clock, chance: Chance) -> None:
    """Open the journal of a commons: a head without entries and a random id, in every leaf.

    :raises JournalAlreadyOpen: if the commons has one.
    """
    if models.Head.objects.filter(pk=commons_id).exists():
        raise JournalAlreadyOpen(commons_id=commons_id)
    models.Head.objects.create(
        commons_id=commons_id,
        journal_id=chance(JOURNAL_ID_BYTES),
        size=0,
        root=tree.EMPTY_ROOT,
        edge=b"",
        recorded_at=clock(),
    )


@transactions.required
def hold(*, commons_id: int) -> None:
    """Take the lock on the head, so that nothing is appended until the transaction ends.

    :raises JournalNotOpen: if the commons has no journal.
    """
    head, _ = writing.lock(commons_id=commons_id, keys={})
    if head is None:
        raise queries.JournalNotOpen(commons_id=commons_id)


@transactions.required
def append(
    *, commons_id: int, drafts: Sequence[Draft], by: int, clock: Clock, chance: Chance
) -> tuple[Receipt, ...]:
    """Append entries in one go and return their receipts in the order of the drafts.

    A draft whose (device, key) stands in the journal with the same content is not appended again:
    its receipt is that of the standing entry. All drafts stand or none.

    :param by: the number of the account or member who acts; 0 is the book itself.
    :raises JournalNotOpen: if the commons has no journal.
    :raises JournalStopped: if posting is stopped.
    :raises UnbalancedEntry: if postings do not sum to zero per resource and unit.
    :raises AmountOutOfRange: if an amount or a balance passes 64 bits.
    :raises KeyReused: if a key stands for another content.
    :raises EntryNotFound: if a draft reverses an entry that does not stand.
    :raises AlreadyReversed: if it reverses one that was reversed before.
    :raises EntryIsReversal: if it reverses a reversal.
    :raises NotOpposite: if its postings are not the opposite of the original's.
    """
    leaves.check_number("by", by)
    for draft in drafts:
        _check_postings(draft)
    head, standing = writing.lock(commons_id=commons_id, keys=_keys(drafts))
    if head is None:
        raise queries.JournalNotOpen(commons_id=commons_id)
    if head.broken:
        raise JournalStopped(commons_id=commons_id, why=head.broken)
    replayed = _replayed(head, standing, drafts)
    fresh, repeated = _fresh(head, drafts, replayed)
    _check_reversals(head, fresh)
    recorded_at = max(clock(), head.recorded_at)
    sealed = writing.seal(head=head, drafts=fresh, by=by, recorded_at=recorded_at, chance=chance)
    grown = head
    if sealed:
        grown = _write(head, sealed, by, recorded_at)
    appended = {one.number: one for one in sealed}
    receipts = []
    numbers = iter(appended)
    for place in range(len(drafts)):
        if place in replayed:
            old = replayed[place]
            receipts.append(_receipt(grown, old.number, old.leaf_hash, old.recorded_at, True))
        else:
            is_repeated = place in repeated
            number = repeated[place] if is_repeated else next(numbers)
            leaf_hash = appended[number].leaf_hash
            receipts.append(_receipt(grown, number, leaf_hash, recorded_at, is_repeated))
    return tuple(receipts)


@transactions.required
def reverse(
    *,
    commons_id: int,
    number: int,
    reason: str,
    by: int,
    occurred_at: datetime,
    day: date,
    clock: Clock,
    chance: Chance,
    key: str | None = None,
) -> Receipt:
    """Append the opposite of an entry, leaving the original untouched.

    :raises EntryNotFound: if the entry does not stand.
    :raises AlreadyReversed: if it was reversed before.
    :raises EntryIsReversal: if it is itself a reversal.
    """
    original = queries.entry(commons_id=commons_id, number=number)
    draft = Draft(
        kind="reversal",
        occurred_at=occurred_at,
        day=day,
        facts={"reverses_kind": original.kind},
        postings=opposite(original.postings),
        texts={"reason": reason},
        key=key,
        reverses=number,
        subject=original.subject,
    )
    (receipt,) = append(commons_id=commons_id, drafts=(draft,), by=by, clock=clock, chance=chance)
    return receipt


def opposite(postings: Sequence[Posting]) -> tuple[Posting, ...]:
    """Return postings that undo others, line by line."""
    return tuple(
        Posting(account=one.account, resource=one.resource, unit=one.unit, amount=-one.amount)
        for one in postings
    )


@transactions.required
def stop(*, commons_id: int, why: str) -> None:
    """Stop posting to a journal until it is resumed; reading goes on.

    :raises JournalNotOpen: if the commons has none.
    """
    _set_broken(commons_id, why)


@transactions.required
def resume(*, commons_id: int) -> None:
    """Let posting go on, after the journal was mended and verified.

    :raises JournalNotOpen: if the commons has none.
    """
    _set_broken(commons_id, "")


def _set_broken(commons_id: int, why: str) -> None:
    if not models.Head.objects.filter(pk=commons_id).update(broken=why):
        raise queries.JournalNotOpen(commons_id=commons_id)


def _check_postings(draft: Draft) -> None:
    sums: defaultdict[tuple[str, str], int] = defaultdict(int)
    for posting in draft.postings:
        amount = posting.amount
        if type(amount) is not int or not leaves.AMOUNT_MIN < amount <= leaves.AMOUNT_MAX:
            # The least 64-bit number has no opposite, so it could not be reversed.
            raise AmountOutOfRange(account=posting.account, amount=amount)
        sums[posting.resource, posting.unit] += amount
    for (resource, unit), left in sums.items():
        if left:
            raise UnbalancedEntry(kind=draft.kind, resource=resource, unit=unit, left=left)


def _keys(drafts: Sequence[Draft]) -> dict[str, set[str]]:
    found: defaultdict[str, set[str]] = defaultdict(set)
    for draft in drafts:
        if draft.key is not None:
            found[draft.device].add(draft.key)
    return found


def _replayed(
    head: writing.LockedHead,
    standing: dict[tuple[str, str], int],
    drafts: Sequence[Draft],
) -> dict[int, columns.SealedEntry]:
    """Return, by place of the draft, the standing entries that drafts ask for again."""
    if not standing:
        return {}
    known = columns.sealed_by_number(commons_id=head.commons_id, numbers=standing.values())
    found = {}
    for place, draft in enumerate(drafts):
        number = None if draft.key is None else standing.get((draft.device, draft.key))
        if number is None:
            continue
        entry = known[number]
        leaf = entry.leaf(
            draft=draft, commitments=entry.commit(draft.texts), journal_id=head.journal_id
        )
        # The same content under the same number, instant and salts is the same leaf.
        if tree.leaf_hash(leaf) != entry.leaf_hash or set(draft.texts) != set(entry.texts):
            raise KeyReused(key=draft.key, device=draft.device, number=number)
        found[place] = entry
    return found


def _fresh(
    head: writing.LockedHead, drafts: Sequence[Draft], replayed: dict[int, columns.SealedEntry]
) -> tuple[list[Draft], dict[int, int]]:
    """Return the drafts to append, and the numbers of those that came twice in this call."""
    fresh: list[Draft] = []
    numbers: dict[tuple[str, str], int] = {}
    repeated = {}
    for place, draft in enumerate(drafts):
        if place in replayed:
            continue
        name = None if draft.key is None else (draft.device, draft.key)
        if name in numbers:
            number = numbers[name]
            if fresh[number - head.size - 1] != draft:
                raise KeyReused(key=draft.key, device=draft.device, number=number)
            repeated[place] = number
            continue
        fresh.append(draft)
        if name is not None:
            numbers[name] = head.size + len(fresh)
    return fresh, repeated


def _check_reversals(head: writing.LockedHead, drafts: Sequence[Draft]) -> None:
    wanted = [draft.reverses for draft in drafts if draft.reverses is not None]
    if not wanted:
        return
    originals = columns.sealed_by_number(commons_id=head.commons_id, numbers=wanted)
    # The unique constraint on `reverses` guards the same rule.
    done = set(columns.reversals(commons_id=head.commons_id, numbers=wanted, up_to=head.size))
    for draft in drafts:
        number = draft.reverses
        if number is None:
            continue
        if number not in originals:
            raise queries.EntryNotFound(commons_id=head.commons_id, number=number)
        if originals[number].reverses is not None:
            raise EntryIsReversal(commons_id=head.commons_id, number=number)
        if number in done:
            raise AlreadyReversed(commons_id=head.commons_id, number=number)
        if draft.postings != opposite(originals[number].postings):
            raise NotOpposite(commons_id=head.commons_id, number=number)
        done.add(number)


def _write(
    head: writing.LockedHead,
    sealed: Sequence[writing.SealedDraft],
    by: int,
    recorded_at: datetime,
) -> writing.LockedHead:
    for (account, _, _), amount in writing.fold([one.draft for one in sealed]).items():
        if not leaves.AMOUNT_MIN <= amount <= leaves.AMOUNT_MAX:
            raise AmountOutOfRange(account=account, amount=amount)
    try:
        return writing.write(head=head, sealed=sealed, by=by, recorded_at=recorded_at)
    except (DataError, IntegrityError) as error:
        # PostgreSQL refuses the sum itself, SQLite by the constraint on balances.
        if "bigint out of range" in str(error) or "balance_within_64_bits" in str(error):
            raise AmountOutOfRange(account="an account", amount=None) from error
        raise


def _receipt(
    head: writing.LockedHead, number: int, leaf_hash: bytes, recorded_at: datetime, replayed: bool
) -> Receipt:
    return Receipt(
        commons_id=head.commons_id,
        number=number,
        leaf_hash=leaf_hash,
        size=head.size,
        root=head.root,
        recorded_at=recorded_at,
        replayed=replayed,
    )
