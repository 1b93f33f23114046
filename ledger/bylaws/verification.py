"""The adopted editions, held against the entries that adopted them."""

import hashlib
from collections.abc import Iterator
from datetime import date

from ledger.bylaws import models
from ledger.journal import comparing
from ledger.journal.comparing import Row
from ledger.journal.leaves import EntryRecord
from ledger.journal.verification import Problem


def problems(*, commons_id: int) -> tuple[Problem, ...]:
    """Return where editions are not as adopted: number, first day, digest, or the text itself.

    A text is held against the digest that its entry seals: SHA-256 of its UTF-8, in hex.

    :raises ledger.journal.queries.JournalNotOpen: if the commons has no journal.
    """
    return comparing.against_entries(
        commons_id=commons_id,
        kinds=("edition_adopted",),
        kept=lambda: _kept(commons_id),
        told=_told,
    )


def _kept(commons_id: int) -> Iterator[Row]:
    for row in models.Edition.objects.filter(commons_id=commons_id):
        yield _row(
            row.entry_number,
            number=row.number,
            in_force_from=row.in_force_from,
            digest=row.digest,
            digest_of_text=hashlib.sha256(row.text.encode()).hexdigest(),
        )


def _told(entry: EntryRecord) -> Iterator[Row]:
    facts = entry.facts
    yield _row(
        entry.number,
        number=facts["edition"],
        in_force_from=date.fromisoformat(facts["from"]),
        digest=facts["digest"],
        digest_of_text=facts["digest"],
    )


def _row(entry: int, *, number: int, in_force_from: date, digest: str, digest_of_text: str) -> Row:
    fields = {
        "number": number,
        "first day in force": in_force_from,
        "digest": digest,
        "the digest of the text": digest_of_text,
    }
    return Row(table="bylaw editions", entry=entry, name="the edition", fields=fields)
