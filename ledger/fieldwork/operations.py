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

CATCH, INDEX, SURVEY = KINDS = ("catch", "index", "survey")

# An index is a bare number: UCUM writes its unit so.
INDEX_UNIT = "1"


class UnknownObservation(LedgerError):
    """A reading is of a kind that no advice uses, or of a value that cannot be."""

    code: ClassVar[str] = "fieldwork.unknown_observation"
    message: ClassVar[str] = "Found {found}; accepted are {accepted}."


class NotAMonitor(LedgerError):
    """An inspection is recorded for somebody who does not hold the office."""

    code: ClassVar[str] = "fieldwork.not_a_monitor"
    message: ClassVar[str] = (
        "Found member {found} as the monitor on {day}; accepted are {accepted}."
    )


class NothingSeen(LedgerError):
    """An inspection tells of no resource, or of an amount below zero."""

    code: ClassVar[str] = "fieldwork.nothing_seen"
    message: ClassVar[str] = "Found {found}; accepted are amounts from zero upward, one or more."


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
    """Record readings of resources, one entry each, all or none.

    :raises UnknownObservation: if a kind is not one of ``KINDS``, a year lies ahead, or a value or
        an error is below zero.
    :raises ledger.commons.queries.UnknownResource: if a resource is not kept.
    :raises ledger.commons.operations.UnknownZone: if a survey names no zone of the resource, or
        another reading one that is not of the resource.
    :raises ledger.commons.queries.InstantWithoutOffset: if an instant has no offset.
    :raises governance.quantities.UnusableNumber: if a number is not finite, or far too long.
    :raises governance.quantities.UnitMismatch: if the unit does not measure what the kind asks.
    """
    kept = commons_queries.commons(commons_id=commons_id)
    return _append(commons_id, [_observation(kept, reading) for reading in readings], hand)


@transactions.required
def record_inspections(
    *, commons_id: int, inspections: Sequence[Inspection], hand: Hand
) -> tuple[Receipt, ...]:
    """Record inspections, one entry each, all or none.

    :raises NotAMonitor: if the monitor did not hold the office on the day.
    :raises NothingSeen: if no resource is told of, or an amount lies below zero.
    :raises ledger.commons.operations.UnknownMember: if nobody has the member's number.
    :raises ledger.commons.operations.UnknownZone: if the zone is of no resource that was seen.
    :raises ledger.commons.queries.UnknownResource: if a resource is not kept.
    :raises ledger.commons.queries.InstantWithoutOffset: if an instant has no offset.
    :raises governance.quantities.UnusableNumber: if a number is not finite, or far too long.
    :raises governance.quantities.UnitMismatch: if a unit cannot convert to the resource's base.
    """
    kept = commons_queries.commons(commons_id=commons_id)
    return _append(commons_id, [_inspection(kept, each) for each in inspections], hand)


def _observation(kept: commons_queries.CommonsRecord, reading: Reading) -> Draft:
    _check_reading(kept, reading)
    return Draft(
        kind=queries.OBSERVATION,
        occurred_at=reading.observed_at,
        day=kept.day_of(reading.observed_at),
        facts={
            "resource": reading.resource,
            "kind": reading.kind,
            "zone": reading.zone,
            "year": reading.year,
            "value": format(reading.value, "f"),
            "unit": reading.unit,
            "error": "" if reading.error is None else format(reading.error, "f"),
        },
        texts={"source": reading.source} if reading.source else {},
    )


def _check_reading(kept: commons_queries.CommonsRecord, reading: Reading) -> None:
    if reading.kind not in KINDS:
        raise UnknownObservation(found=f"the kind {reading.kind!r}", accepted=", ".join(KINDS))
    base = commons_queries.resource(commons_id=kept.commons_id, code=reading.resource).base
    for number in (reading.value, reading.error):
        if number is not None and quantities.exact(number) < 0:
            raise UnknownObservation(found=number, accepted="numbers from zero upward")
    measure = INDEX_UNIT if reading.kind == INDEX else base
    quantities.converted(Fraction(1), from_unit=reading.unit, to_unit=measure)
    if reading.zone or reading.kind == SURVEY:
        commons.check_zone(commons_id=kept.commons_id, resource=reading.resource, zone=reading.zone)
    observed = kept.day_of(reading.observed_at)
    if not 1 <= reading.year <= observed.year:
        raise UnknownObservation(
            found=f"the year {reading.year} in a reading of {observed}",
            accepted=f"the years up to {observed.year}",
        )


def _inspection(kept: commons_queries.CommonsRecord, inspection: Inspection) -> Draft:
    day = kept.day_of(inspection.seen_at)
    monitors = commons_queries.holders_of(commons_id=kept.commons_id, role="monitor", day=day)
    if inspection.monitor not in monitors:
        accepted = ", ".join(map(str, sorted(monitors))) or "nobody, for no one holds the office"
        raise NotAMonitor(found=inspection.monitor, day=day, accepted=accepted)
    commons.check_member(commons_id=kept.commons_id, member=inspection.member)
    seen = _seen(kept, inspection)
    return Draft(
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


def _seen(kept: commons_queries.CommonsRecord, inspection: Inspection) -> list[Fact]:
    if not inspection.seen:
        raise NothingSeen(found="no resource")
    seen: list[Fact] = []
    for resource, given, unit in inspection.seen:
        base = commons_queries.resource(commons_id=kept.commons_id, code=resource).base
        exact = quantities.converted(quantities.exact(given), from_unit=unit, to_unit=base)
        if exact < 0:
            raise NothingSeen(found=f"{given} {unit} of {resource}")
        amount = quantities.rounded(exact, quantities.Rounding.HALF_UP)
        seen.append({"resource": resource, "amount": amount})
    zones = commons_queries.zones(commons_id=kept.commons_id).values()
    seen_of = {resource for resource, _, _ in inspection.seen}
    accepted = [zone.code for zone in zones if zone.resource in seen_of]
    if inspection.zone not in accepted:
        raise commons.UnknownZone(
            found=inspection.zone,
            resource=" or ".join(sorted(seen_of)),
            accepted=", ".join(accepted) or "none",
        )
    return seen


def _append(commons_id: int, drafts: Sequence[Draft], hand: Hand) -> tuple[Receipt, ...]:
    return journal.append(
        commons_id=commons_id, drafts=drafts, by=hand.by, clock=hand.clock, chance=hand.chance
    )
