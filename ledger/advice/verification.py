"""The advice as kept, held against the entries that sealed its digest."""

from collections.abc import Iterator
from typing import Any

from pydantic import ValidationError

from ledger.advice import columns, models
from ledger.journal import comparing
from ledger.journal.comparing import Row
from ledger.journal.leaves import EntryRecord
from ledger.journal.verification import Problem


def problems(*, commons_id: int) -> tuple[Problem, ...]:
    """Return where an advice is not as its entry says: its inputs, its digest, or the whole of it.

    :raises ledger.journal.queries.JournalNotOpen: if the commons has no journal.
    """
    return comparing.against_entries(
        commons_id=commons_id, kinds=("advice_made",), kept=lambda: _kept(commons_id), told=_told
    )


def _kept(commons_id: int) -> Iterator[Row]:
    for row in models.AdviceMade.objects.filter(commons_id=commons_id):
        yield _row(
            row.entry_number,
            season=row.season,
            resource=row.resource,
            seed=row.seed,
            known_up_to=row.known_up_to,
            digest=row.digest,
            digest_of_result=_digest(row.result),
        )


def _told(entry: EntryRecord) -> Iterator[Row]:
    facts = entry.facts
    named = ("season", "resource", "seed", "known_up_to", "digest")
    fields = {name: facts[name] for name in named}
    yield _row(entry.number, **fields, digest_of_result=facts["digest"])


def _digest(kept: Any) -> str:
    """Return the digest of an advice as it reads: databases write one number in several ways."""
    try:
        return columns.digest(columns.plain(columns.advice(kept)))
    except ValidationError:
        return "none: it is no advice"


def _row(entry: int, *, digest_of_result: str, **fields: Any) -> Row:
    fields["the digest of the result"] = digest_of_result
    return Row(table="advice", entry=entry, name="the advice", fields=fields)
