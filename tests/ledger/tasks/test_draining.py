"""Promised work: done once, in order of its day; a failure leaves nothing and rings again."""

import threading
from collections.abc import Callable
from datetime import UTC, datetime, timedelta

import pytest
from django.db import connection, transaction

from ledger.commons import operations as commons
from ledger.foundation import locks, outbox
from ledger.foundation.clocks import Chance, seeded_chance
from ledger.foundation.hands import Hand
from ledger.foundation.models import Job
from ledger.foundation.outbox import DueJob
from ledger.journal import queries as journal
from ledger.tasks import draining, handlers
from tests.conftest import CommittingDatabase, TickingClock
from tests.ledger import builders

NOON = datetime(2026, 3, 2, 12, 0, tzinfo=UTC)
HOUR = timedelta(hours=1)


def promise(
    commons_id: int, clock: TickingClock, *, kind: str = "test", key: str = "1", at: datetime = NOON
) -> Job:
    with transaction.atomic():
        outbox.enqueue(
            commons_id=commons_id, kind=kind, key=key, due_at=at, payload={}, clock=clock
        )
    return Job.objects.get(commons_id=commons_id, kind=kind, key=key)


def writes(job: DueJob, hand: Hand) -> str:
    """Leave an entry behind, as work does."""
    commons.enter(commons_id=job.commons_id, kind="test", facts={"key": job.key}, hand=hand)
    return "written"


def written(commons_id: int) -> list[str]:
    return [each.facts["key"] for each in journal.entries(commons_id=commons_id, kinds=("test",))]


@pytest.fixture
def does(monkeypatch: pytest.MonkeyPatch) -> Callable[[handlers.Handler], None]:
    """Say what jobs of the kind *test* do."""

    def doing(handler: handlers.Handler) -> None:
        monkeypatch.setitem(handlers.HANDLERS, "test", handler)

    return doing


@pytest.fixture
def commons_id(db: None, hand: Hand, ticking_clock: TickingClock) -> int:
    made = builders.people(hand=hand)
    ticking_clock.set(NOON)
    return made


def drained(clock: TickingClock, chance: Chance) -> list[draining.Drained]:
    return list(draining.drain(clock=clock, chance=chance))


Does = Callable[[handlers.Handler], None]


class TestDone:
    def test_once_though_drained_twice(
        self, commons_id: int, does: Does, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        does(writes)
        promise(commons_id, ticking_clock)
        (done,) = drained(ticking_clock, chance)
        assert (done.outcome, done.failed) == ("written", False)
        assert drained(ticking_clock, chance) == []
        assert written(commons_id) == ["1"]
        job = Job.objects.get(kind="test")
        assert (job.done_at, job.outcome, job.attempts) == (NOON, "written", 1)

    def test_not_a_moment_early(
        self, commons_id: int, does: Does, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        does(writes)
        promise(commons_id, ticking_clock, at=NOON + timedelta(microseconds=1))
        assert drained(ticking_clock, chance) == []
        ticking_clock.advance(microseconds=1)
        assert len(drained(ticking_clock, chance)) == 1

    def test_in_order_of_day_though_promised_meanwhile(
        self, commons_id: int, does: Does, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        """The first job promises one that is due before the second."""

        def promises(job: DueJob, hand: Hand) -> str:
            if job.key == "first":
                at = NOON - 2 * HOUR
                promise(job.commons_id, ticking_clock, key="between", at=at)
            return writes(job, hand)

        does(promises)
        promise(commons_id, ticking_clock, key="last", at=NOON - HOUR)
        promise(commons_id, ticking_clock, key="first", at=NOON - 3 * HOUR)
        assert [each.job.key for each in drained(ticking_clock, chance)] == [
            "first",
            "between",
            "last",
        ]

    def test_of_one_commons_alone_where_it_is_named(
        self, commons_id: int, does: Does, hand: Hand, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        does(writes)
        other = builders.people(hand=hand, slug="other-bank")
        promise(commons_id, ticking_clock)
        promise(other, ticking_clock)
        mine = draining.drain(clock=ticking_clock, chance=chance, commons_id=other)
        assert [each.job.commons_id for each in mine] == [other]
        assert written(commons_id) == []

    def test_by_the_books_own_hand(
        self, commons_id: int, does: Does, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        does(writes)
        promise(commons_id, ticking_clock)
        drained(ticking_clock, chance)
        (entry,) = journal.entries(commons_id=commons_id, kinds=("test",))
        assert entry.by == 0


class TestFailed:
    def test_it_leaves_nothing_and_rings_again_an_hour_later(
        self,
        commons_id: int,
        does: Does,
        ticking_clock: TickingClock,
        chance: Chance,
        caplog: pytest.LogCaptureFixture,
    ) -> None:
        fails = True

        def breaks(job: DueJob, hand: Hand) -> str:
            writes(job, hand)
            if fails:
                raise RuntimeError("the ink ran out")
            return "written"

        does(breaks)
        promise(commons_id, ticking_clock)
        size = journal.head(commons_id=commons_id).size
        (first,) = drained(ticking_clock, chance)
        assert first.failed
        assert "the ink ran out" in first.outcome
        assert "the ink ran out" in caplog.text
        assert journal.head(commons_id=commons_id).size == size
        job = Job.objects.get(kind="test")
        assert (job.done_at, job.attempts, job.due_at) == (None, 1, NOON + HOUR)
        assert "the ink ran out" in job.last_error

        ticking_clock.set(NOON + HOUR)
        drained(ticking_clock, chance)
        job.refresh_from_db()
        # Patience grows with every failure.
        assert (job.attempts, job.due_at) == (2, NOON + 3 * HOUR)

        fails = False
        ticking_clock.set(NOON + 3 * HOUR)
        (last,) = drained(ticking_clock, chance)
        assert not last.failed
        assert written(commons_id) == ["1"]

    def test_it_does_not_hold_up_the_others(
        self, commons_id: int, does: Does, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        def breaks(job: DueJob, hand: Hand) -> str:
            if job.key == "bad":
                raise RuntimeError("no")
            return writes(job, hand)

        does(breaks)
        promise(commons_id, ticking_clock, key="bad", at=NOON - HOUR)
        promise(commons_id, ticking_clock, key="good")
        assert [each.failed for each in drained(ticking_clock, chance)] == [True, False]

    def test_a_kind_that_nothing_does_fails_in_words(
        self, commons_id: int, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        promise(commons_id, ticking_clock, kind="knit")
        (done,) = drained(ticking_clock, chance)
        assert done.failed
        job = Job.objects.get(kind="knit")
        assert job.done_at is None
        assert "'knit'" in job.last_error
        assert "accepted are judge" in job.last_error

    def test_a_job_done_by_another_after_its_failure_stays_done(
        self,
        commons_id: int,
        does: Does,
        ticking_clock: TickingClock,
        chance: Chance,
        monkeypatch: pytest.MonkeyPatch,
    ) -> None:
        """Between the failure and its note the row is free, and another may come first."""
        promised = promise(commons_id, ticking_clock)

        def breaks(job: DueJob, hand: Hand) -> str:
            raise RuntimeError("no")

        def another(*_: object) -> None:
            with transaction.atomic():
                outbox.mark_done(job_id=promised.pk, outcome="elsewhere", at=NOON)

        does(breaks)
        monkeypatch.setattr(draining.logger, "exception", another)
        (done,) = drained(ticking_clock, chance)
        assert (done.outcome, done.failed) == ("done by another", False)
        promised.refresh_from_db()
        assert (promised.outcome, promised.attempts) == ("elsewhere", 1)


class TestParked:
    def test_what_brought_one_worker_after_the_other_down_lets_the_others_go_on(
        self, commons_id: int, does: Does, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        """A process that ends leaves no exception behind: only its counted beginnings."""
        does(writes)
        bad = promise(commons_id, ticking_clock, key="bad", at=NOON - HOUR)
        promise(commons_id, ticking_clock, key="good")
        for _ in range(5):
            with transaction.atomic():
                outbox.begin(job_id=bad.pk, at=NOON)
        assert [each.job.key for each in drained(ticking_clock, chance)] == ["good"]
        (parked,) = outbox.parked(commons_id=commons_id)
        assert (parked.job.key, parked.job.attempts) == ("bad", 5)
        assert written(commons_id) == ["good"]

    def test_a_job_that_somebody_has_in_hand_is_left_to_them(
        self, committing_db: CommittingDatabase, does: Does, ticking_clock: TickingClock
    ) -> None:
        """Work of long duration is not begun anew, nor counted, beside the one who does it."""
        made = builders.people(hand=builders.hand(clock=ticking_clock, chance=seeded_chance(1)))
        ticking_clock.set(NOON)
        does(writes)
        in_hand = promise(made, ticking_clock, key="in hand", at=NOON - HOUR)
        promise(made, ticking_clock, key="free")
        found: list[str] = []

        def another() -> None:
            try:
                drain = draining.drain(clock=ticking_clock, chance=seeded_chance(2))
                found.extend(each.job.key for each in drain)
            finally:
                connection.close()

        with locks.held(name="job", key=in_hand.pk):
            thread = threading.Thread(target=another)
            thread.start()
            thread.join()
        assert found == ["free"]
        in_hand.refresh_from_db()
        assert in_hand.attempts == 0


def test_a_clock_that_is_set_back_doubles_nothing_and_no_entry_runs_back(
    commons_id: int, does: Does, ticking_clock: TickingClock, chance: Chance
) -> None:
    does(writes)
    promise(commons_id, ticking_clock, key="before")
    drained(ticking_clock, chance)
    ticking_clock.set(NOON - HOUR)
    promise(commons_id, ticking_clock, key="before")
    promise(commons_id, ticking_clock, key="not yet")
    promise(commons_id, ticking_clock, key="meanwhile", at=NOON - HOUR)
    assert [each.job.key for each in drained(ticking_clock, chance)] == ["meanwhile"]
    ticking_clock.set(NOON)
    assert [each.job.key for each in drained(ticking_clock, chance)] == ["not yet"]
    assert written(commons_id) == ["before", "meanwhile", "not yet"]
    entries = journal.entries(commons_id=commons_id, kinds=("test",))
    times = [each.recorded_at for each in entries]
    assert times == sorted(times)
    assert times[0] == NOON


def test_two_workers_at_once_do_a_job_once(
    committing_db: CommittingDatabase, does: Does, ticking_clock: TickingClock
) -> None:
    hand = builders.hand(clock=ticking_clock, chance=seeded_chance(1))
    made = builders.people(hand=hand)
    ticking_clock.set(NOON)
    does(writes)
    for key in range(12):
        promise(made, ticking_clock, key=str(key))
    start = threading.Barrier(2)
    outcomes: list[draining.Drained] = []

    def works(seed: int) -> None:
        try:
            start.wait()
            found = draining.drain(clock=ticking_clock, chance=seeded_chance(seed))
            outcomes.extend(found)
        finally:
            connection.close()

    workers = [threading.Thread(target=works, args=(seed,)) for seed in (2, 3)]
    for worker in workers:
        worker.start()
    for worker in workers:
        worker.join()
    assert not [each for each in outcomes if each.failed]
    assert sorted(written(made), key=int) == [str(key) for key in range(12)]


def test_every_kind_that_a_season_and_its_cases_promise_is_done_by_something(
    db: None, hand: Hand
) -> None:
    commons_id = builders.opened(hand=hand)
    promised = set(Job.objects.filter(commons_id=commons_id).values_list("kind", flat=True))
    assert promised == {"assess_duties", "judge", "close_season", "advise"}
    assert promised | {"hear_findings", "case_deadline"} == set(handlers.HANDLERS)


def test_duties_are_assessed_as_the_season_begins(
    db: None, hand: Hand, ticking_clock: TickingClock, chance: Chance
) -> None:
    commons_id = builders.opened(hand=hand)
    done = draining.drain(clock=ticking_clock, chance=chance, commons_id=commons_id)
    outcomes = {each.job.kind: each.outcome for each in done}
    assert outcomes["assess_duties"].startswith("assessed by entry")


def test_an_allowable_that_was_adopted_needs_no_advice(
    db: None, hand: Hand, ticking_clock: TickingClock, chance: Chance
) -> None:
    commons_id = builders.opened(hand=hand)
    done = draining.drain(clock=ticking_clock, chance=chance, commons_id=commons_id)
    advised = [each.outcome for each in done if each.job.kind == "advise"]
    assert len(advised) == 2
    assert all(each.startswith("no longer due") for each in advised)
