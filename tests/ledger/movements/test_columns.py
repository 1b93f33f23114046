"""Entries of movements turned into the columns that the rules read."""

from datetime import UTC, date, datetime
from typing import Any

from ledger.journal.leaves import Row
from ledger.movements import columns

NOON = datetime(2026, 3, 2, 12, tzinfo=UTC)
# Seconds from 1970 to 2026-03-02 12:00 UTC: 20,514 days and a half.
NOON_MICROSECONDS = (20_514 * 86_400 + 43_200) * 1_000_000


def _row(number: int, facts: dict[str, Any], *, member: int = 1) -> Row:
    return Row(number, "kind", member, date(2026, 3, 2), NOON, NOON, facts)


def _slip(number: int, *lines: tuple[str, str, int], member: int = 1) -> Row:
    facts = {
        "handed_in": "2026-03-02T12:00:01.500000+00:00",
        "lines": [
            {"resource": resource, "zone": zone, "amount": amount}
            for resource, zone, amount in lines
        ],
    }
    return _row(number, facts, member=member)


def test_a_row_for_each_line_of_the_resource() -> None:
    rows = [
        _slip(11, ("mullet", "outer_bay", 500), ("clams", "pier_sand", 40), member=3),
        _slip(12, ("mullet", "inner_flats", 7), ("mullet", "outer_bay", 2**40)),
    ]
    found = columns.withdrawals(rows=rows, resource="mullet", base="g")
    assert (found.resource, found.base) == ("mullet", "g")
    assert found.entry.tolist() == [11, 12, 12]
    assert found.member.tolist() == [3, 1, 1]
    assert found.amount.tolist() == [500, 7, 2**40]
    assert [found.zones[zone] for zone in found.zone] == ["outer_bay", "inner_flats", "outer_bay"]
    assert found.day.tolist() == [20_514] * 3
    assert found.instant.tolist() == [NOON_MICROSECONDS] * 3
    assert found.reported.tolist() == [NOON_MICROSECONDS + 1_500_000] * 3


def test_no_rows_are_empty_columns() -> None:
    takes = columns.withdrawals(rows=[], resource="mullet", base="g")
    assert (len(takes), takes.zones, takes.amount.dtype.name) == (0, (), "int64")
    given = columns.contributions(rows=[], kind="work", base="min", amount_of=lambda _: 0)
    assert (given.amount.tolist(), given.duties) == ([], ())


def test_before_1970_instants_are_below_zero() -> None:
    early = datetime(1969, 12, 31, 23, 59, 59, 999_999, tzinfo=UTC)
    row = _slip(1, ("mullet", "outer_bay", 5))._replace(occurred_at=early, day=early.date())
    found = columns.withdrawals(rows=[row], resource="mullet", base="g")
    assert (found.instant.tolist(), found.day.tolist()) == ([-1], [-1])


def test_contributions_name_their_duties() -> None:
    rows = [
        _row(21, {"clause": "6.1", "minutes": 200}),
        _row(22, {"clause": "6.2", "minutes": 30}, member=4),
        _row(23, {"clause": "6.1", "minutes": 60}),
    ]
    found = columns.contributions(
        rows=rows, kind="work", base="min", amount_of=lambda facts: int(facts["minutes"])
    )
    assert (found.kind, found.base) == ("work", "min")
    assert found.entry.tolist() == [21, 22, 23]
    assert found.member.tolist() == [1, 4, 1]
    assert found.amount.tolist() == [200, 30, 60]
    assert [found.duties[duty] for duty in found.duty] == ["6.1", "6.2", "6.1"]
