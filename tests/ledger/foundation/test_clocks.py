"""Time and chance at the edge."""

from datetime import UTC, datetime, timedelta

from ledger.foundation import clocks


def test_system_clock_is_aware_and_now() -> None:
    now = clocks.system_clock()
    assert now.utcoffset() == timedelta(0)
    assert abs(now - datetime.now(tz=UTC)) < timedelta(minutes=1)


def test_same_seed_same_bytes() -> None:
    one, other = clocks.seeded_chance(7), clocks.seeded_chance(7)
    assert [one(16) for _ in range(3)] == [other(16) for _ in range(3)]
    assert clocks.seeded_chance(8)(16) != clocks.seeded_chance(7)(16)


def test_system_chance_does_not_repeat() -> None:
    assert len(clocks.system_chance(16)) == 16
    assert clocks.system_chance(16) != clocks.system_chance(16)
