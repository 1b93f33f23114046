"""Readings and a check that the tests of fieldwork record."""

from dataclasses import replace
from datetime import date
from decimal import Decimal

from ledger.fieldwork import operations
from tests.ledger import builders

CATCH = operations.Reading(
    resource="mullet",
    kind="catch",
    year=2025,
    value=Decimal("61.5"),
    unit="t",
    observed_at=builders.at(date(2026, 1, 10)),
)
INDEX = replace(CATCH, kind="index", value=Decimal("0.873"), unit="1")
SURVEY = replace(
    CATCH,
    resource="clams",
    kind="survey",
    year=2026,
    value=Decimal("1840"),
    unit="kg",
    zone="mill_reach",
    error=Decimal("0.18"),
    source="transects of 10 January",
)
CHECK = operations.Inspection(
    member=1,
    monitor=builders.MONITOR,
    seen_at=builders.at(date(2026, 4, 12)),
    zone="outer_bay",
    seen=(("mullet", Decimal("43.0005"), "kg"), ("clams", Decimal("0"), "kg")),
    slip="A1",
    remark="weighed on the quay",
)
