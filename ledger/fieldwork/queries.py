"""Observations and inspections as recorded."""

from dataclasses import dataclass
from datetime import date

from governance.facts import Observation
from governance.periods import DateRange
from ledger.fieldwork import columns
from ledger.journal import queries as journal

OBSERVATION = "observation"
INSPECTION = "inspection"


@dataclass(frozen=True, slots=True, kw_only=True)
class InspectionRecord:
    """A monitor's check of a take: what was seen, by resource in base units, beside which slip."""

    entry: int
    member: int
    monitor: int
    day: date
    zone: str
    seen: tuple[tuple[str, int], ...]
    slip: str


def observations(
    *, commons_id: int, resource: str, up_to: int | None = None
) -> tuple[Observation, ...]:
    """Return the readings of a resource, as known up to an entry number."""
    rows = journal.rows(commons_id=commons_id, kinds=(OBSERVATION,), up_to=up_to)
    found = columns.observations(rows)
    return tuple(reading for reading in found if reading.resource == resource)


def inspections(*, commons_id: int, during: DateRange) -> tuple[InspectionRecord, ...]:
    """Return the inspections of a range of days, in order of entry."""
    rows = journal.rows(
        commons_id=commons_id,
        kinds=(INSPECTION,),
        first_day=during.first,
        until_day=during.until,
    )
    return tuple(
        InspectionRecord(
            entry=row.number,
            member=row.subject,
            monitor=row.facts["monitor"],
            day=row.day,
            zone=row.facts["zone"],
            seen=tuple((each["resource"], each["amount"]) for each in row.facts["seen"]),
            slip=row.facts["slip"],
        )
        for row in rows
        if row.subject is not None
    )
