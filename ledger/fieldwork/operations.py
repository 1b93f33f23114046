"""The writers of observations and inspections."""

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from decimal import Decimal
from fractions import Fraction
from typing import ClassVar

from governance import quantities
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.fieldwork import queries
from ledger.foundation import transactions
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal.leaves import Draft, Fact, Receipt

KINDS = ("catch", "index", "survey")


class UnknownObservation(LedgerError):
    """A reading is of a kind that no advice uses, or lies below zero."""

    code: ClassVar[str] = "fieldwork.unknown_observation"
    message: ClassVar[str] = "Found {found}; accepted are {accepted}."


class NotAMonitor(LedgerError):
    """An inspection is recorded for somebody who does not hold the office."""

    code: ClassVar[str] = "fieldwork.not_a_monitor"
    message: ClassVar[str] = "Member {found} was not a monitor on {day}."


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """One reading of a resource, as given.

    ``kind`` is *catch* (a year's take), *index* (a relative measure of abundance, unit ``1``) or
    *survey* (the amount found on one zone, ``error`` its coefficient of variation).
    """

    resource: str
    kind: str
    year: int
    value: Decimal
    unit: str
    observed_at: datetime
    zone: str = ""
    error: Decimal | None = None
    source: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Inspection:
    """What a monitor saw of one member's take: (resource, amount as given, unit) for each."""

    member: int
    monitor: int
    seen_at: datetime
    zone: str
    seen: tuple[tuple[str, Decimal, str], ...]
    slip: str = ""
    remark: str = ""


@transactions.required
def record_observations(
    *, commons_id: int, readings: Sequence[Reading], hand: Hand
) -> tuple[Receipt, ...]:
    """Record readings of resources, one entry each.

    :raises UnknownObservation: if a kind is not one of ``KINDS``, or a value is below zero.
    :raises ledger.commons.queries.UnknownResource: if a resource is not kept.
    """
    kept = commons_queries.commons(commons_id=commons_id)
    drafts = []
    for reading in readings:
        commons_queries.resource(commons_id=commons_id, code=reading.resource)
        if reading.kind not in KINDS:
            raise UnknownObservation(found=f"the kind {reading.kind!r}", accepted=", ".join(KINDS))
        if reading.value < 0:
            raise UnknownObservation(found=reading.value, accepted="values from zero upward")
        drafts.append(
            Draft(
                kind=queries.OBSERVATION,
                occurred_at=reading.observed_at,
                day=kept.day_of(reading.observed_at),
                facts={
                    "resource": reading.resource,
                    "kind": reading.kind,
                    "zone": reading.zone,
                    "year": reading.year,
                    "value": format(reading.value, "f"),
                    "unit": quantities.unit(reading.unit).code,
                    "error": "" if reading.error is None else format(reading.error, "f"),
                },
                texts={"source": reading.source} if reading.source else {},
            )
        )
    return _append(commons_id, drafts, hand)


@transactions.required
def record_inspections(
    *, commons_id: int, inspections: Sequence[Inspection], hand: Hand
) -> tuple[Receipt, ...]:
    """Record inspections, one entry each.

    :raises NotAMonitor: if the monitor did not hold the office on the day.
    :raises ledger.commons.operations.UnknownMember: if nobody has the member's number.
    :raises ledger.commons.queries.UnknownResource: if a resource is not kept.
    """
    kept = commons_queries.commons(commons_id=commons_id)
    drafts = []
    for inspection in inspections:
        day = kept.day_of(inspection.seen_at)
        monitors = commons_queries.holders_of(commons_id=commons_id, role="monitor", day=day)
        if inspection.monitor not in monitors:
            raise NotAMonitor(found=inspection.monitor, day=day)
        commons.check_member(commons_id=commons_id, member=inspection.member)
        seen: list[Fact] = []
        for resource, given, unit in inspection.seen:
            base = commons_queries.resource(commons_id=commons_id, code=resource).base
            exact = quantities.converted(Fraction(given), from_unit=unit, to_unit=base)
            amount = quantities.rounded(exact, quantities.Rounding.HALF_UP)
            seen.append({"resource": resource, "amount": amount})
        drafts.append(
            Draft(
                kind=queries.INSPECTION,
                occurred_at=inspection.seen_at,
                day=day,
                subject=inspection.member,
                facts={
                    "monitor": inspection.monitor,
                    "zone": inspection.zone,
                    "seen": seen,
                    "slip": inspection.slip,
                },
                texts={"remark": inspection.remark} if inspection.remark else {},
            )
        )
    return _append(commons_id, drafts, hand)


def _append(commons_id: int, drafts: Sequence[Draft], hand: Hand) -> tuple[Receipt, ...]:
    return journal.append(
        commons_id=commons_id, drafts=drafts, by=hand.by, clock=hand.clock, chance=hand.chance
    )
