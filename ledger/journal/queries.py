"""What can be asked of a journal. Records come out, never rows."""

import json
from collections.abc import Collection, Iterable, Iterator
from datetime import UTC, date, datetime
from typing import ClassVar

from django.db.models import Exists, F, OuterRef, Q, Sum
from django.db.models.lookups import LessThanOrEqual

from ledger.foundation.errors import LedgerError
from ledger.journal import columns, models, tree
from ledger.journal.leaves import EntryRecord, HeadRecord, Row

# More than this many members are told apart here rather than in the statement.
SUBJECTS_MAX = 500


class JournalNotOpen(LedgerError):
    """The commons has no journal."""

    code: ClassVar[str] = "journal.not_open"
    message: ClassVar[str] = "Commons {commons_id} has no journal."


class EntryNotFound(LedgerError):
    """The journal has no entry of this number."""

    code: ClassVar[str] = "journal.entry_not_found"
    message: ClassVar[str] = "Commons {commons_id} has no entry {number}."


class SizeNotReached(LedgerError):
    """A proof was asked of a tree that the journal never had."""

    code: ClassVar[str] = "journal.size_not_reached"
    message: ClassVar[str] = "The journal of commons {commons_id} never had {size} entries."


def journals() -> tuple[int, ...]:
    """Return the commons that have a journal, in order."""
    return tuple(models.Head.objects.order_by("pk").values_list("pk", flat=True))


def head(*, commons_id: int) -> HeadRecord:
    """Return the head of a journal; of an empty one, with the instant it was opened.

    :raises JournalNotOpen: if the commons has none.
    """
    row = models.Head.objects.filter(pk=commons_id).first()
    if row is None:
        raise JournalNotOpen(commons_id=commons_id)
    return HeadRecord(size=row.size, root=bytes(row.root), recorded_at=row.recorded_at)


def why_stopped(*, commons_id: int) -> str:
    """Return why posting is stopped, or an empty text.

    :raises JournalNotOpen: if the commons has no journal.
    """
    row = models.Head.objects.filter(pk=commons_id).first()
    if row is None:
        raise JournalNotOpen(commons_id=commons_id)
    return row.broken


def head_at(*, commons_id: int, size: int) -> HeadRecord:
    """Return the head that the journal had when it held so many entries.

    :raises SizeNotReached: if it never held so many.
    """
    now = head(commons_id=commons_id)
    if not 0 <= size <= now.size:
        raise SizeNotReached(commons_id=commons_id, size=size)
    if size == now.size:
        return now
    read = columns.tree_reader(commons_id=commons_id, size=now.size)
    recorded_at = _recorded_at(commons_id, size) if size else now.recorded_at
    return HeadRecord(
        size=size,
        root=tree.root_of_edge(tree.edge_of_size(size=size, read=read)),
        recorded_at=recorded_at,
    )


def size_known_at(*, commons_id: int, at: datetime) -> int:
    """Return how many entries had been recorded by an instant.

    ``recorded_at`` never runs back, so the answer is found by halving: no index is kept for it.
    """
    low, high = 0, head(commons_id=commons_id).size
    while low < high:
        middle = (low + high + 1) // 2
        if _recorded_at(commons_id, middle) <= at:
            low = middle
        else:
            high = middle - 1
    return low


def proof_line(head: HeadRecord) -> str:
    """Return the line that prints a head on pages, receipts and reports."""
    digits = head.root.hex()
    at = head.recorded_at.astimezone(UTC)
    span = f"1–{head.size:,}" if head.size else "none"
    return f"entries {span} · head {digits[:4]} {digits[4:8]} · {at:%Y-%m-%d %H:%M} +00:00"


def entry(*, commons_id: int, number: int) -> EntryRecord:
    """Return one entry.

    :raises EntryNotFound: if the journal has none of this number.
    """
    sealed = _sealed(commons_id, number)
    size = head(commons_id=commons_id).size
    found = columns.reversals(commons_id=commons_id, numbers=(number,), up_to=size)
    return sealed.record(reversed_by=found.get(number))


def numbers_by_key(*, commons_id: int, device: str, keys: Collection[str]) -> dict[str, int]:
    """Return those of a device's keys that stand in the journal, with their entries' numbers."""
    found = models.Entry.objects.filter(commons_id=commons_id, device=device, key__in=keys)
    return dict(found.values_list("key", "number"))


def entries(
    *,
    commons_id: int,
    kinds: Collection[str] | None = None,
    after: int = 0,
    up_to: int | None = None,
    subject: int | None = None,
) -> Iterator[EntryRecord]:
    """Yield entries in order of number, as known when the journal ended at ``up_to``.

    Memory stays bounded. Without ``up_to`` the head of the first moment is the end.
    """
    if up_to is None:
        up_to = head(commons_id=commons_id).size
    for part in columns.sealed_entries(
        commons_id=commons_id, after=after, up_to=up_to, kinds=kinds, subject=subject
    ):
        reversed_by = columns.reversals(
            commons_id=commons_id, numbers=[sealed.number for sealed in part], up_to=up_to
        )
        for sealed in part:
            yield sealed.record(reversed_by=reversed_by.get(sealed.number))


def newest(
    *,
    commons_id: int,
    below: int,
    limit: int,
    kind: str | None = None,
    subject: int | None = None,
    own: int | None = None,
) -> list[EntryRecord]:
    """Return the last entries numbered below a number, newest first.

    :param subject: only those about this member.
    :param own: only those about this member or about nobody.
    """
    found = models.Entry.objects.filter(commons_id=commons_id, number__lt=below)
    if kind is not None:
        found = found.filter(kind=kind)
    if subject is not None:
        found = found.filter(subject=subject)
    if own is not None:
        found = found.filter(Q(subject=own) | Q(subject__isnull=True))
    numbers = list(found.order_by("-number").values_list("number", flat=True)[:limit])
    sealed = columns.sealed_by_number(commons_id=commons_id, numbers=numbers)
    size = head(commons_id=commons_id).size
    reversed_by = columns.reversals(commons_id=commons_id, numbers=numbers, up_to=size)
    return [sealed[number].record(reversed_by=reversed_by.get(number)) for number in numbers]


def rows(
    *,
    commons_id: int,
    kinds: Collection[str],
    up_to: int | None = None,
    subjects: Collection[int] | None = None,
    first_day: date | None = None,
    until_day: date | None = None,
) -> list[Row]:
    """Return the entries of some kinds that stand, in order of number, by one statement.

    Reversals and what they reverse are left out, as known when the journal ended at ``up_to``: a
    reversal numbered above it does not count. Postings and texts are not read.

    :param until_day: the first day that no longer belongs.
    """
    found = models.Entry.objects.filter(
        commons_id=commons_id, kind__in=kinds, reverses__isnull=True
    )
    reversal = models.Entry.objects.filter(commons_id=commons_id, reverses=OuterRef("number"))
    if up_to is not None:
        found = found.filter(number__lte=up_to)
        # The sum is there so that a planner without statistics looks reversals up by what they
        # reverse, and does not read every number up to the last for every entry.
        reversal = reversal.filter(LessThanOrEqual(F("number") + 0, up_to))
    if first_day is not None:
        found = found.filter(day__gte=first_day)
    if until_day is not None:
        found = found.filter(day__lt=until_day)
    if subjects is not None and len(subjects) <= SUBJECTS_MAX:
        found, subjects = found.filter(subject__in=subjects), None
    wanted = None if subjects is None else frozenset(subjects)
    return [
        Row(number, kind, subject, day, occurred_at, recorded_at, json.loads(facts))
        for number, kind, subject, day, occurred_at, recorded_at, facts in found.exclude(
            Exists(reversal)
        )
        .order_by("number")
        .values_list("number", "kind", "subject", "day", "occurred_at", "recorded_at", "facts")
        if wanted is None or subject in wanted
    ]


def kinds_and_subjects(
    *,
    commons_id: int,
    after: int = 0,
    up_to: int,
    kinds: Collection[str] | None = None,
    first_day: date | None = None,
    until_day: date | None = None,
) -> frozenset[tuple[str, int | None]]:
    """Return which kinds of entry are about whom, each pair once, without reading the entries.

    Reversals count like other entries.

    :param until_day: the first day that no longer belongs.
    """
    found = models.Entry.objects.filter(commons_id=commons_id, number__gt=after, number__lte=up_to)
    if kinds is not None:
        found = found.filter(kind__in=kinds)
    if first_day is not None:
        found = found.filter(day__gte=first_day)
    if until_day is not None:
        found = found.filter(day__lt=until_day)
    return frozenset(found.values_list("kind", "subject").distinct())


def texts(*, commons_id: int, numbers: Collection[int]) -> dict[int, dict[str, str]]:
    """Return the free texts of some entries by number and name; an erased text is left out."""
    wanted = sorted(set(numbers))
    found: dict[int, dict[str, str]] = {}
    for first in range(0, len(wanted), columns.RANGE):
        part = models.Text.objects.filter(
            commons_id=commons_id, number__in=wanted[first : first + columns.RANGE]
        )
        for number, name, text in part.values_list("number", "name", "text"):
            found.setdefault(number, {})[name] = text
    return found


def balance(*, commons_id: int, account: str, resource: str, unit: str) -> int:
    """Return what stands on an account now; nought where nothing was ever posted."""
    amount = (
        models.Balance.objects.filter(
            commons_id=commons_id, account=account, resource=resource, unit=unit
        )
        .values_list("amount", flat=True)
        .first()
    )
    return amount or 0


def balances(
    *, commons_id: int, prefix: str, up_to: int | None = None
) -> dict[tuple[str, str, str], int]:
    """Return what stands on the accounts that begin so, by (account, resource, unit).

    With ``up_to`` as known at that entry, from the postings; without, now, from the balances.
    """
    if up_to is None:
        standing: Iterable[tuple[str, str, str, int]] = models.Balance.objects.filter(
            commons_id=commons_id, account__startswith=prefix
        ).values_list("account", "resource", "unit", "amount")
    else:
        standing = (
            models.Posting.objects.filter(
                commons_id=commons_id, account__startswith=prefix, number__lte=up_to
            )
            .values_list("account", "resource", "unit")
            .annotate(total=Sum("amount"))
        )
    # SQLite compares beginnings without regard to case; the exact comparison is made here.
    return {
        (account, resource, unit): int(amount)
        for account, resource, unit, amount in sorted(standing)
        if account.startswith(prefix)
    }


def total(*, commons_id: int, prefix: str, resource: str, unit: str) -> int:
    """Return the sum over the accounts that begin so, added up by the database."""
    found = models.Balance.objects.filter(
        commons_id=commons_id,
        account__gte=prefix,
        account__lt=_after(prefix),
        resource=resource,
        unit=unit,
    )
    return int(found.aggregate(total=Sum("amount"))["total"] or 0)


def totals_by_day(
    *, commons_id: int, prefix: str, resource: str, unit: str
) -> tuple[tuple[date, int], ...]:
    """Return what the accounts that begin so gained on each day, added up by the database."""
    found = models.Posting.objects.filter(
        commons_id=commons_id,
        account__gte=prefix,
        account__lt=_after(prefix),
        resource=resource,
        unit=unit,
    )
    by_day = found.order_by("day").values_list("day").annotate(total=Sum("amount"))
    return tuple((day, int(total)) for day, total in by_day if total)


def _after(prefix: str) -> str:
    """Return the first text that comes after all that begin with a prefix, sign by sign."""
    return prefix[:-1] + chr(ord(prefix[-1]) + 1)


def balance_as_of(
    *,
    commons_id: int,
    account: str,
    resource: str,
    unit: str,
    day: date | None = None,
    up_to: int | None = None,
) -> int:
    """Return the sum of an account's postings to the end of a day, as known at a head.

    :param up_to: the number of the last entry known.
    """
    found = models.Posting.objects.filter(
        commons_id=commons_id, account=account, resource=resource, unit=unit
    )
    if day is not None:
        found = found.filter(day__lte=day)
    if up_to is not None:
        found = found.filter(number__lte=up_to)
    return int(found.aggregate(total=Sum("amount"))["total"] or 0)


def inclusion_proof(*, commons_id: int, number: int, size: int | None = None) -> tuple[bytes, ...]:
    """Return the audit path of an entry in the tree of the first ``size`` entries, or of all.

    The index of the leaf is ``number - 1``.

    :raises EntryNotFound: if that tree does not hold the entry.
    :raises SizeNotReached: if the journal never had so many entries.
    """
    size, read = _tree(commons_id, size)
    if not 1 <= number <= size:
        raise EntryNotFound(commons_id=commons_id, number=number)
    return tree.inclusion_proof(index=number - 1, size=size, read=read)


def consistency_proof(
    *, commons_id: int, old_size: int, size: int | None = None
) -> tuple[bytes, ...]:
    """Return the proof that the tree of ``old_size`` entries is a prefix of a later one.

    :raises SizeNotReached: if the journal never had so many entries.
    """
    size, read = _tree(commons_id, size)
    if not 0 <= old_size <= size:
        raise SizeNotReached(commons_id=commons_id, size=old_size)
    return tree.consistency_proof(old_size=old_size, size=size, read=read)


def receipt_leaf(*, commons_id: int, number: int) -> bytes:
    """Return the canonical bytes of an entry's leaf, salt included: for its own receipt only.

    :raises EntryNotFound: if the journal has no entry of this number.
    """
    sealed = _sealed(commons_id, number)
    journal_id = models.Head.objects.values_list("journal_id", flat=True).get(pk=commons_id)
    return sealed.leaf(
        draft=sealed.draft(), commitments=sealed.commitments, journal_id=bytes(journal_id)
    )


def _sealed(commons_id: int, number: int) -> columns.SealedEntry:
    found = columns.sealed_by_number(commons_id=commons_id, numbers=(number,))
    if number not in found:
        raise EntryNotFound(commons_id=commons_id, number=number)
    return found[number]


def _recorded_at(commons_id: int, number: int) -> datetime:
    return models.Entry.objects.values_list("recorded_at", flat=True).get(
        commons_id=commons_id, number=number
    )


def _tree(commons_id: int, size: int | None) -> tuple[int, tree.Read]:
    now = head(commons_id=commons_id).size
    if size is not None and not 0 <= size <= now:
        raise SizeNotReached(commons_id=commons_id, size=size)
    return now if size is None else size, columns.tree_reader(commons_id=commons_id, size=now)
