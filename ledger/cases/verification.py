"""Cases and their events, held against the entries of the moves."""

from collections import Counter
from collections.abc import Callable, Iterator, Mapping
from datetime import date
from typing import Any

from governance.sanctions.moves import Move
from ledger.cases import models, writing
from ledger.journal import comparing
from ledger.journal import queries as journal
from ledger.journal.comparing import Row
from ledger.journal.leaves import EntryRecord
from ledger.journal.verification import Problem
from ledger.judgement import queries as judgement

_KINDS = tuple(writing.kind_of(move) for move in Move)


def problems(*, commons_id: int) -> tuple[Problem, ...]:
    """Return where cases and their events are not as the entries of the moves say.

    Every event is one entry's, in the order of the entries; a case is its first entry's. Every
    entry names the version of the finding that the case rested on, as that version stands kept.

    :raises ledger.journal.queries.JournalNotOpen: if the commons has no journal.
    """
    return (
        *comparing.against_entries(
            commons_id=commons_id,
            kinds=_KINDS,
            kept=lambda: (*_kept_cases(commons_id), *_kept_events(commons_id)),
            told=_telling(),
        ),
        *_resting(commons_id),
    )


def _kept_cases(commons_id: int) -> Iterator[Row]:
    first = dict(
        models.Event.objects.filter(commons_id=commons_id, place=1).values_list(
            "case", "entry_number"
        )
    )
    noted = {entry.facts["case"]: entry.number for entry in _notes(commons_id)}
    for row in models.Case.objects.filter(commons_id=commons_id):
        # A case without an event stands beside the entry that noted it, if one did.
        entry = noted.get(row.number, first.get(row.number, 0))
        yield _case(entry, row.number, finding=row.finding, ladder=row.ladder)


def _kept_events(commons_id: int) -> Iterator[Row]:
    for row in models.Event.objects.filter(commons_id=commons_id):
        details = row.details if isinstance(row.details, dict) else {"details": row.details}
        yield _event(
            row.entry_number,
            details,
            case=row.case,
            place=row.place,
            move=row.move,
            role=row.role,
            member=row.member,
            on=row.on,
            effects=row.effects,
            version=row.finding_version,
        )


def _telling() -> Callable[[EntryRecord], Iterator[Row]]:
    """Return what reads the rows off entries, counting the events of each case on the way."""
    places: Counter[int] = Counter()

    def told(entry: EntryRecord) -> Iterator[Row]:
        facts = entry.facts
        places[facts["case"]] += 1
        if entry.kind == writing.kind_of(Move.NOTE):
            yield _case(
                entry.number, facts["case"], finding=facts["finding"], ladder=facts["ladder"]
            )
        yield _event(
            entry.number,
            {name: fact for name, fact in facts.items() if name not in writing.NO_DETAILS},
            case=facts["case"],
            place=places[facts["case"]],
            move=next(move for move in Move if entry.kind == writing.kind_of(move)).value,
            role=facts["role"],
            member=facts["actor"],
            on=date.fromisoformat(facts["on"]),
            effects=facts["effects"],
            version=facts["version"],
        )

    return told


def _resting(commons_id: int) -> Iterator[Problem]:
    """Compare the versions of findings that entries name with those that are kept."""
    kept: Mapping[tuple[int, int], Mapping[str, object]] | None = None
    for entry in journal.entries(commons_id=commons_id, kinds=_KINDS):
        if kept is None:
            kept = judgement.version_facts(commons_id=commons_id)
        facts = entry.facts
        name = f"finding {facts['finding']}, version {facts['version']}, of case {facts['case']}"
        found = kept.get((facts["finding"], facts["version"]))
        if found is None:
            yield _problem(entry, f"{name}: its row is missing")
            continue
        expected = {each: facts[each] for each in ("clause", "edition", "inputs")}
        expected["subject"] = entry.subject
        for what in comparing.fields_that_differ(expected=expected, found=found):
            yield _problem(entry, f"{name}: {what}")


def _notes(commons_id: int) -> Iterator[EntryRecord]:
    return journal.entries(commons_id=commons_id, kinds=(writing.kind_of(Move.NOTE),))


def _problem(entry: EntryRecord, what: str) -> Problem:
    return Problem(invariant="findings", number=entry.number, what=what)


def _case(entry: int, number: int, **fields: Any) -> Row:
    return Row(table="cases", entry=entry, name=f"case {number}", fields=fields)


def _event(entry: int, details: Mapping[str, Any], **fields: Any) -> Row:
    return Row(
        table="case events",
        entry=entry,
        name="the event",
        fields={**fields, **details, "details": sorted(details)},
    )
