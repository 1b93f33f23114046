"""Observations and inspections as recorded, and as known at an entry."""

from dataclasses import replace
from datetime import date
from decimal import Decimal
from fractions import Fraction

import pytest

from governance.periods import DateRange
from ledger.fieldwork import operations, queries
from ledger.foundation.hands import Hand
from tests.ledger import builders
from tests.ledger.fieldwork.examples import CATCH, CHECK, INDEX, SURVEY


@pytest.mark.django_db
def test_observations_of_a_resource_as_known(hand: Hand) -> None:
    commons_id = builders.people(hand=hand)
    receipts = operations.record_observations(
        commons_id=commons_id, readings=[CATCH, SURVEY, INDEX], hand=hand
    )
    catch, survey, index = (receipt.number for receipt in receipts)

    def known(resource: str, up_to: int | None) -> list[int]:
        found = queries.observations(commons_id=commons_id, resource=resource, up_to=up_to)
        return [reading.entry for reading in found]

    assert [known("mullet", up_to) for up_to in (catch - 1, catch, survey, index, None)] == [
        [],
        [catch],
        [catch],
        [catch, index],
        [catch, index],
    ]
    (found,) = queries.observations(commons_id=commons_id, resource="clams")
    assert (found.kind, found.zone, found.year, found.unit) == ("survey", "mill_reach", 2026, "kg")
    assert (found.value, found.error) == (Fraction(1840), Fraction(18, 100))


@pytest.mark.django_db
def test_inspections_of_some_days(hand: Hand) -> None:
    commons_id = builders.people(hand=hand)
    days = (date(2026, 4, 11), date(2026, 4, 12), date(2026, 4, 13), date(2026, 4, 14))
    checks = [replace(CHECK, seen_at=builders.at(day)) for day in days]
    receipts = operations.record_inspections(
        commons_id=commons_id, inspections=[*checks, replace(CHECK, slip="")], hand=hand
    )
    during = DateRange(first=days[1], until=days[3])
    found = queries.inspections(commons_id=commons_id, during=during)
    assert [record.entry for record in found] == [receipts[at].number for at in (1, 2, 4)]
    assert found[0] == queries.InspectionRecord(
        entry=receipts[1].number,
        member=1,
        monitor=2,
        day=days[1],
        zone="outer_bay",
        seen=(("mullet", 43_001), ("clams", 0)),
        slip="A1",
    )
    assert found[2].slip == ""


@pytest.mark.django_db
def test_readings_keep_every_digit(hand: Hand) -> None:
    commons_id = builders.people(hand=hand)
    reading = replace(CATCH, value=Decimal("123456789012.123456789012"))
    operations.record_observations(commons_id=commons_id, readings=[reading], hand=hand)
    (found,) = queries.observations(commons_id=commons_id, resource="mullet")
    assert found.value == Fraction(123456789012123456789012, 10**12)
