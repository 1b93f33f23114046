"""Observations and inspections: one entry each, and what they refuse."""

from collections.abc import Mapping
from dataclasses import replace
from datetime import UTC, date, datetime
from decimal import Decimal
from typing import Any

import pytest

from governance import quantities
from governance.errors import StintbookError
from governance.periods import DateRange
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.fieldwork import operations
from ledger.foundation import transactions
from ledger.foundation.hands import Hand
from tests.ledger import builders, checks
from tests.ledger.fieldwork.examples import CATCH, CHECK, INDEX, SURVEY


@pytest.fixture
def commons_id(hand: Hand) -> int:
    """A commons with its people; member 2 is its monitor from 1 March 2026."""
    return builders.people(hand=hand)


@pytest.mark.parametrize(
    "operation", [operations.record_observations, operations.record_inspections]
)
def test_outside_a_transaction_nothing_is_written(operation: Any) -> None:
    with pytest.raises(transactions.NoTransaction, match=operation.__name__):
        operation()


@pytest.mark.django_db
class TestRecordObservations:
    """Catches, indices and surveys, as given."""

    def test_one_entry_for_each_reading(self, commons_id: int, hand: Hand) -> None:
        with checks.appends(commons_id, count=3) as entries:
            operations.record_observations(
                commons_id=commons_id, readings=[CATCH, INDEX, SURVEY], hand=hand
            )
        assert {entry.kind for entry in entries} == {"observation"}
        assert {entry.day for entry in entries} == {date(2026, 1, 10)}
        assert [entry.facts for entry in entries] == [
            {
                "resource": "mullet",
                "kind": "catch",
                "zone": "",
                "year": 2025,
                "value": "61.5",
                "unit": "t",
                "error": "",
            },
            {
                "resource": "mullet",
                "kind": "index",
                "zone": "",
                "year": 2025,
                "value": "0.873",
                "unit": "1",
                "error": "",
            },
            {
                "resource": "clams",
                "kind": "survey",
                "zone": "mill_reach",
                "year": 2026,
                "value": "1840",
                "unit": "kg",
                "error": "0.18",
            },
        ]
        assert [entry.texts for entry in entries] == [
            {},
            {},
            {"source": "transects of 10 January"},
        ]

    def test_a_value_is_kept_as_a_plain_decimal(self, commons_id: int, hand: Hand) -> None:
        reading = replace(CATCH, value=Decimal("1.5E+3"), error=Decimal("1E-3"))
        with checks.appends(commons_id) as entries:
            operations.record_observations(commons_id=commons_id, readings=[reading], hand=hand)
        assert (entries[0].facts["value"], entries[0].facts["error"]) == ("1500", "0.001")

    def test_nothing_found_is_a_reading(self, commons_id: int, hand: Hand) -> None:
        with checks.appends(commons_id):
            operations.record_observations(
                commons_id=commons_id, readings=[replace(SURVEY, value=Decimal(0))], hand=hand
            )

    @pytest.mark.parametrize(
        ("reading", "changes", "error", "words"),
        [
            (
                CATCH,
                {"kind": "guess"},
                operations.UnknownObservation,
                ("the kind 'guess'", "catch, index, survey"),
            ),
            (
                CATCH,
                {"value": Decimal(-1)},
                operations.UnknownObservation,
                ("Found -1", "from zero upward"),
            ),
            (
                SURVEY,
                {"error": Decimal("-0.1")},
                operations.UnknownObservation,
                ("Found -0.1", "from zero upward"),
            ),
            (
                CATCH,
                {"year": 2027},
                operations.UnknownObservation,
                ("the year 2027 in a reading of 2026-01-10", "up to 2026"),
            ),
            (
                CATCH,
                {"year": 0},
                operations.UnknownObservation,
                ("the year 0 in a reading of 2026-01-10", "up to 2026"),
            ),
            (CATCH, {"value": Decimal("NaN")}, quantities.UnusableNumber, ("NaN", "12 digits")),
            (INDEX, {"value": Decimal("sNaN")}, quantities.UnusableNumber, ("NaN", "12 digits")),
            (
                CATCH,
                {"value": Decimal("Infinity")},
                quantities.UnusableNumber,
                ("Infinity", "12 digits"),
            ),
            (
                CATCH,
                {"value": Decimal("1E+400000")},
                quantities.UnusableNumber,
                ("1e+400000", "12 digits"),
            ),
            (SURVEY, {"error": Decimal("NaN")}, quantities.UnusableNumber, ("NaN", "12 digits")),
            (
                CATCH,
                {"resource": "eels"},
                commons_queries.UnknownResource,
                ("'eels'", "clams, mullet"),
            ),
            (CATCH, {"unit": "h"}, quantities.UnitMismatch, ("'h'", "'g'")),
            (CATCH, {"unit": "1"}, quantities.UnitMismatch, ("'1'", "'g'")),
            (INDEX, {"unit": "kg"}, quantities.UnitMismatch, ("'kg'", "'1'")),
            (CATCH, {"unit": "bucket"}, quantities.UnknownUnit, ("'bucket'", "kg")),
            (
                SURVEY,
                {"zone": ""},
                commons.UnknownZone,
                ("'' of clams", "mill_reach, pier_sand"),
            ),
            (
                SURVEY,
                {"zone": "outer_bay"},
                commons.UnknownZone,
                ("'outer_bay' of clams", "mill_reach, pier_sand"),
            ),
            (
                CATCH,
                {"zone": "mill_reach"},
                commons.UnknownZone,
                ("'mill_reach' of mullet", "inner_flats, outer_bay"),
            ),
            (
                CATCH,
                {"observed_at": datetime(2026, 1, 10)},  # noqa: DTZ001 (the mistake itself)
                commons_queries.InstantWithoutOffset,
                ("2026-01-10T00:00:00;", "offset"),
            ),
        ],
    )
    def test_one_that_is_refused_keeps_all_out(
        self,
        reading: operations.Reading,
        changes: Mapping[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        commons_id: int,
        hand: Hand,
    ) -> None:
        readings = [INDEX, replace(reading, **changes), SURVEY]
        with checks.refuses(error, *words):
            operations.record_observations(commons_id=commons_id, readings=readings, hand=hand)


@pytest.mark.django_db
class TestRecordInspections:
    """Monitors, and nobody else, check a take."""

    def test_one_entry(self, commons_id: int, hand: Hand) -> None:
        with checks.appends(commons_id) as entries:
            operations.record_inspections(commons_id=commons_id, inspections=[CHECK], hand=hand)
        (entry,) = entries
        assert (entry.kind, entry.subject, entry.day) == ("inspection", 1, date(2026, 4, 12))
        # 43.0005 kg are 43,000.5 g, rounded half up.
        assert entry.facts == {
            "monitor": 2,
            "zone": "outer_bay",
            "seen": [
                {"resource": "mullet", "amount": 43_001},
                {"resource": "clams", "amount": 0},
            ],
            "slip": "A1",
        }
        assert entry.texts == {"remark": "weighed on the quay"}

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            ({"monitor": 1}, operations.NotAMonitor, ("member 1 ", "2026-04-12", "are 2.")),
            ({"monitor": 77}, operations.NotAMonitor, ("member 77 ", "2026-04-12", "are 2.")),
            (
                {"seen_at": datetime(2026, 2, 28, 12, tzinfo=UTC)},
                operations.NotAMonitor,
                ("member 2 ", "2026-02-28", "nobody"),
            ),
            ({"member": 77}, commons.UnknownMember, ("77", "admitted")),
            ({"seen": ()}, operations.NothingSeen, ("no resource", "one or more")),
            (
                {"seen": (("mullet", Decimal("-1"), "kg"),)},
                operations.NothingSeen,
                ("-1 kg of mullet", "zero upward"),
            ),
            (
                {"seen": (("mullet", Decimal("NaN"), "kg"),)},
                quantities.UnusableNumber,
                ("NaN", "12 digits"),
            ),
            (
                {"seen": (("mullet", Decimal("-Infinity"), "kg"),)},
                quantities.UnusableNumber,
                ("-Infinity", "12 digits"),
            ),
            (
                {"seen": (("eels", Decimal(1), "kg"),)},
                commons_queries.UnknownResource,
                ("'eels'", "clams, mullet"),
            ),
            (
                {"seen": (("mullet", Decimal(1), "L"),)},
                quantities.UnitMismatch,
                ("'L'", "'g'"),
            ),
            (
                {"zone": "north_pole"},
                commons.UnknownZone,
                ("'north_pole' of clams or mullet", "inner_flats, mill_reach, outer_bay"),
            ),
            (
                {"zone": "mill_reach", "seen": (("mullet", Decimal(1), "kg"),)},
                commons.UnknownZone,
                ("'mill_reach' of mullet", "inner_flats, outer_bay"),
            ),
            (
                {"seen_at": datetime(2026, 4, 12)},  # noqa: DTZ001 (the mistake itself)
                commons_queries.InstantWithoutOffset,
                ("2026-04-12T00:00:00;", "offset"),
            ),
        ],
    )
    def test_one_that_is_refused_keeps_all_out(
        self,
        changes: Mapping[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        commons_id: int,
        hand: Hand,
    ) -> None:
        inspections = [CHECK, replace(CHECK, **changes)]
        with checks.refuses(error, *words):
            operations.record_inspections(commons_id=commons_id, inspections=inspections, hand=hand)

    def test_the_office_counts_on_the_day_of_the_check(self, commons_id: int, hand: Hand) -> None:
        may = DateRange(first=date(2026, 5, 1), until=date(2026, 6, 1))
        commons.give_role(commons_id=commons_id, member=4, role="monitor", during=may, hand=hand)
        by_4 = replace(CHECK, monitor=4)
        with checks.refuses(operations.NotAMonitor, "member 4 ", "2026-04-30", "are 2."):
            operations.record_inspections(
                commons_id=commons_id,
                inspections=[replace(by_4, seen_at=builders.at(date(2026, 4, 30)))],
                hand=hand,
            )
        with checks.appends(commons_id):
            operations.record_inspections(
                commons_id=commons_id,
                inspections=[replace(by_4, seen_at=builders.at(date(2026, 5, 31)))],
                hand=hand,
            )
