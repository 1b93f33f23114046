"""Appending, replaying, reversing and stopping."""

import threading
from collections.abc import Callable
from datetime import timedelta
from typing import Any

import pytest
from django.db import IntegrityError, connections, transaction

from ledger.foundation import clocks, transactions
from ledger.foundation.clocks import Chance
from ledger.journal import models, operations, queries, tree, verification
from ledger.journal.leaves import AMOUNT_MAX, MalformedDraft, Receipt
from tests.conftest import CommittingDatabase, TickingClock
from tests.ledger.journal.conftest import COMMONS, Append
from tests.ledger.journal.drafts import DAY, NOON, draft, posting

Reverse = Callable[..., Receipt]


def _pool() -> int:
    return queries.balance(commons_id=COMMONS, account="pool:mullet", resource="mullet", unit="g")


def _sound() -> bool:
    return verification.verify(commons_id=COMMONS, progress=lambda done, of: None) == ()


@pytest.mark.django_db
class TestAppend:
    """Entries get numbers, one instant, balances and a place in the tree."""

    def test_numbers_receipts_and_balances(
        self, append: Append, ticking_clock: TickingClock
    ) -> None:
        first, second = append(draft(500), draft(700, member=18), by=9)
        (third,) = append(draft(1))
        assert [first.number, second.number, third.number] == [1, 2, 3]
        assert (first.size, second.size, third.size) == (2, 2, 3)
        assert first.root == second.root != third.root
        assert first.recorded_at == second.recorded_at == ticking_clock()
        assert not first.replayed
        assert _pool() == -1201
        assert queries.entry(commons_id=COMMONS, number=1).by == 9
        assert _sound()

    def test_the_leaf_hash_is_that_of_the_receipts_leaf(self, append: Append) -> None:
        (receipt,) = append(draft(texts={"note": "a word"}))
        leaf = queries.receipt_leaf(commons_id=COMMONS, number=1)
        assert tree.leaf_hash(leaf) == receipt.leaf_hash == receipt.root

    def test_an_entry_without_postings(self, append: Append) -> None:
        append(draft(kind="share", postings=(), facts={"share": [1, 42]}))
        entry = queries.entry(commons_id=COMMONS, number=1)
        assert (entry.postings, entry.facts) == ((), {"share": [1, 42]})

    def test_nothing_to_append_leaves_the_head(self, append: Append) -> None:
        append(draft())
        before = queries.head(commons_id=COMMONS)
        assert append() == ()
        assert queries.head(commons_id=COMMONS) == before

    def test_recorded_at_never_runs_back(self, append: Append, ticking_clock: TickingClock) -> None:
        (first,) = append(draft())
        ticking_clock.advance(hours=-2)
        (second,) = append(draft())
        assert second.recorded_at == first.recorded_at
        ticking_clock.advance(hours=3)
        (third,) = append(draft())
        assert third.recorded_at == first.recorded_at + timedelta(hours=1)

    def test_journals_are_apart(self, append: Append) -> None:
        append(draft(1), draft(2))
        (other,) = append(draft(2), commons_id=2)
        assert other.number == 1
        assert queries.balances(commons_id=2, prefix="pool") == {("pool:mullet", "mullet", "g"): -2}
        first = queries.receipt_leaf(commons_id=COMMONS, number=1)
        assert first[:100] != queries.receipt_leaf(commons_id=2, number=1)[:100]

    def test_the_same_chance_and_clock_give_the_same_head(
        self, ticking_clock: TickingClock
    ) -> None:
        for commons_id in (1, 2):
            same = clocks.seeded_chance(5)
            operations.open_journal(commons_id=commons_id, clock=ticking_clock, chance=same)
            operations.append(
                commons_id=commons_id,
                drafts=[draft(at, texts={"n": "x"}) for at in range(3)],
                by=0,
                clock=ticking_clock,
                chance=same,
            )
        assert queries.head(commons_id=1) == queries.head(commons_id=2)

    @pytest.mark.parametrize(
        "left",
        [
            (posting("a", 5), posting("b", -4)),
            (posting("a", 5), posting("b", -5, resource="clams")),
            (posting("a", 5), posting("b", -5, unit="kg")),
            (posting("a", 1),),
        ],
    )
    def test_postings_that_leave_something_over_are_refused(
        self, append: Append, left: tuple[Any, ...]
    ) -> None:
        append()
        with pytest.raises(operations.UnbalancedEntry):
            append(draft(1), draft(postings=left))
        assert queries.head(commons_id=COMMONS).size == 0

    def test_several_resources_in_one_entry(self, append: Append) -> None:
        both = (posting("a", 5), posting("b", -5), posting("a", 7, resource="clams"))
        append(draft(postings=(*both, posting("c", -7, resource="clams"))))
        assert queries.balances(commons_id=COMMONS, prefix="a") == {
            ("a", "clams", "g"): 7,
            ("a", "mullet", "g"): 5,
        }

    @pytest.mark.parametrize("amount", [2**63, -(2**63), 1.0, True])
    def test_what_is_no_64_bit_amount_is_refused(self, append: Append, amount: Any) -> None:
        append()
        with pytest.raises(operations.AmountOutOfRange):
            append(draft(postings=(posting("a", amount), posting("b", -amount))))

    @pytest.mark.parametrize("in_one_call", [True, False])
    def test_a_balance_past_64_bits_is_refused(self, append: Append, in_one_call: bool) -> None:
        full = draft(AMOUNT_MAX)
        append(full)
        with pytest.raises(operations.AmountOutOfRange):
            append(draft(1), draft(1)) if in_one_call else append(draft(1))
        assert _pool() == -AMOUNT_MAX

    def test_who_acts_is_a_number(self, append: Append) -> None:
        append()
        with pytest.raises(MalformedDraft):
            append(draft(), by=-1)

    def test_a_commons_without_journal_is_refused(
        self, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        with pytest.raises(queries.JournalNotOpen):
            operations.append(
                commons_id=77, drafts=[draft()], by=0, clock=ticking_clock, chance=chance
            )

    def test_a_journal_opens_once(
        self, append: Append, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        append()
        with pytest.raises(operations.JournalAlreadyOpen):
            operations.open_journal(commons_id=COMMONS, clock=ticking_clock, chance=chance)


@pytest.mark.django_db
class TestKeys:
    """One key, one entry, for ever."""

    def test_the_same_again_is_answered_by_the_standing_entry(
        self, append: Append, ticking_clock: TickingClock
    ) -> None:
        given = draft(key="k", device="phone", texts={"note": "at dawn"})
        (first,) = append(given, by=4)
        ticking_clock.advance(days=90)
        again, fresh = append(given, draft(3), by=5)
        assert (again.number, again.leaf_hash, again.recorded_at, again.replayed) == (
            1,
            first.leaf_hash,
            first.recorded_at,
            True,
        )
        assert (again.size, again.root) == (fresh.size, fresh.root)
        assert (fresh.number, fresh.replayed) == (2, False)
        assert _pool() == -503

    @pytest.mark.parametrize(
        "changes",
        [
            {"amount": 501},
            {"member": 18},
            {"facts": {"gear": "GNS", "amount": 500}},
            {"facts": {"gear": "GN", "amount": "500"}},
            {"texts": {"note": "at dusk"}},
            {"texts": {}},
            {"texts": {"note": "at dawn", "more": "x"}},
            {"occurred_at": NOON + timedelta(microseconds=1)},
            {"day": DAY + timedelta(days=1)},
            {"kind": "contribution"},
        ],
    )
    def test_another_content_under_the_key_is_refused(
        self, append: Append, changes: dict[str, Any]
    ) -> None:
        named: dict[str, Any] = {"key": "k", "device": "phone"}
        append(draft(**named, texts={"note": "at dawn"}))
        with pytest.raises(operations.KeyReused) as refused:
            append(draft(**named, **({"texts": {"note": "at dawn"}} | changes)))
        assert refused.value.facts["number"] == 1

    def test_a_key_belongs_to_its_device_and_commons(self, append: Append) -> None:
        numbers = [
            append(draft(1, key="k", device=device), commons_id=commons)[0].number
            for device, commons in (("a", 1), ("b", 1), ("", 1), ("a", 2))
        ]
        assert numbers == [1, 2, 3, 1]

    def test_the_same_key_twice_in_one_call(self, append: Append) -> None:
        given = draft(key="k")
        first, again, other = append(given, given, draft(2))
        assert [first.number, again.number, other.number] == [1, 1, 2]
        assert [first.replayed, again.replayed] == [False, True]
        with pytest.raises(operations.KeyReused):
            append(draft(1, key="n"), draft(2, key="n"))

    def test_more_keys_than_one_statement_asks_for(self, append: Append) -> None:
        given = [draft(at + 1, key=f"k{at}") for at in range(1100)]
        append(*given)
        again = append(*given)
        assert all(receipt.replayed for receipt in again)
        assert [receipt.number for receipt in again] == list(range(1, 1101))

    def test_the_database_holds_the_rule_too(self, append: Append) -> None:
        append(draft(key="k"))
        copy = models.Entry.objects.get(commons_id=COMMONS, number=1)
        copy.number, copy._state.adding = 2, True
        with pytest.raises(IntegrityError):
            copy.save()


@pytest.mark.django_db
class TestReverse:
    """An entry is undone once, by its opposite."""

    def test_the_opposite_is_appended_and_the_original_stays(
        self, append: Append, reverse: Reverse
    ) -> None:
        append(draft(500), draft(20))
        receipt = reverse(1)
        original, opposite = (
            queries.entry(commons_id=COMMONS, number=number) for number in (1, receipt.number)
        )
        assert (original.reversed_by, original.reverses) == (3, None)
        assert (opposite.kind, opposite.reverses, opposite.subject) == ("reversal", 1, 17)
        assert opposite.facts == {"reverses_kind": "withdrawal"}
        assert opposite.texts == {"reason": "weighed twice"}
        assert opposite.postings == operations.opposite(original.postings)
        assert _pool() == -20
        assert _sound()

    def test_a_second_reversal_is_refused(self, append: Append, reverse: Reverse) -> None:
        append(draft())
        reverse(1)
        with pytest.raises(operations.AlreadyReversed):
            reverse(1)

    def test_two_reversals_in_one_call_are_refused(self, append: Append) -> None:
        append(draft())
        undo = draft(postings=operations.opposite(draft().postings), reverses=1)
        with pytest.raises(operations.AlreadyReversed):
            append(undo, undo)

    def test_a_reversal_is_not_reversed(self, append: Append, reverse: Reverse) -> None:
        append(draft())
        reverse(1)
        with pytest.raises(operations.EntryIsReversal):
            reverse(2)

    def test_what_does_not_stand_is_not_reversed(self, append: Append, reverse: Reverse) -> None:
        append(draft())
        with pytest.raises(queries.EntryNotFound):
            reverse(2)
        with pytest.raises(queries.EntryNotFound):
            append(draft(), draft(reverses=2, postings=operations.opposite(draft().postings)))

    def test_other_postings_than_the_opposite_are_refused(self, append: Append) -> None:
        append(draft(500))
        with pytest.raises(operations.NotOpposite):
            append(draft(500, reverses=1))
        with pytest.raises(operations.NotOpposite):
            append(draft(reverses=1, postings=()))

    def test_the_same_key_again_is_no_second_reversal(
        self, append: Append, reverse: Reverse
    ) -> None:
        append(draft())
        first, again = reverse(1, key="undo"), reverse(1, key="undo")
        assert (first.number, again.number, again.replayed) == (2, 2, True)

    def test_the_database_holds_the_rule_too(self, append: Append, reverse: Reverse) -> None:
        append(draft())
        reverse(1)
        copy = models.Entry.objects.get(commons_id=COMMONS, number=2)
        copy.number, copy._state.adding = 3, True
        with pytest.raises(IntegrityError):
            copy.save()


@pytest.mark.django_db
class TestConstraints:
    """Each named constraint of the tables refuses."""

    @pytest.mark.parametrize(
        "changes", [{"number": 0}, {"number": 5, "reverses": 5}, {"number": 5, "reverses": 9}]
    )
    def test_entries(self, append: Append, changes: dict[str, int]) -> None:
        append(draft())
        copy = models.Entry.objects.get(commons_id=COMMONS, number=1)
        copy._state.adding = True
        for name, value in changes.items():
            setattr(copy, name, value)
        with pytest.raises(IntegrityError):
            copy.save()

    def test_a_number_is_taken_once(self, append: Append) -> None:
        append(draft())
        copy = models.Entry.objects.get(commons_id=COMMONS, number=1)
        copy._state.adding = True
        with pytest.raises(IntegrityError):
            copy.save()

    def test_a_head_has_no_negative_size(self, append: Append) -> None:
        append()
        with pytest.raises(IntegrityError):
            models.Head.objects.update(size=-1)


class TestTransactions:
    """Appending needs a transaction, and writers wait for one another."""

    def test_outside_a_transaction_is_refused(
        self, committing_db: CommittingDatabase, ticking_clock: TickingClock, chance: Chance
    ) -> None:
        with pytest.raises(transactions.NoTransaction):
            operations.append(
                commons_id=1, drafts=[draft()], by=0, clock=ticking_clock, chance=chance
            )

    def test_a_transaction_given_up_leaves_nothing(
        self, committing_db: CommittingDatabase, append: Append
    ) -> None:
        append(draft(1))
        with transaction.atomic():
            append(draft(2, key="k"))
            transaction.set_rollback(True)
        (receipt,) = append(draft(3, key="k"))
        assert (receipt.number, receipt.replayed) == (2, False)
        assert _pool() == -4
        assert _sound()

    def test_writers_at_once_leave_no_gap(
        self, committing_db: CommittingDatabase, append: Append
    ) -> None:
        append()
        numbers: list[int] = []
        failures: list[Exception] = []

        def write(member: int) -> None:
            try:
                for at in range(10):
                    with transaction.atomic():
                        receipts = operations.append(
                            commons_id=COMMONS,
                            drafts=[draft(1, member=member, key=f"k{at}", device="shared")]
                            if at % 2
                            else [draft(1, member=member)],
                            by=0,
                            clock=clocks.system_clock,
                            chance=clocks.system_chance,
                        )
                    numbers.extend(one.number for one in receipts if not one.replayed)
            except operations.KeyReused:
                failures.append(AssertionError("the drafts of one key were alike"))
            except Exception as error:  # the thread's failure is the test's
                failures.append(error)
            finally:
                connections["default"].close()

        writers = [threading.Thread(target=write, args=(7,)) for _ in range(4)]
        for writer in writers:
            writer.start()
        for writer in writers:
            writer.join()
        assert failures == []
        # Four times five entries without a key, and five with a key that all four sent.
        assert sorted(numbers) == list(range(1, 26))
        assert _pool() == -25
        assert _sound()


@pytest.mark.django_db
class TestStop:
    """A stopped journal takes nothing until it is resumed."""

    def test_stopped_and_resumed(self, append: Append) -> None:
        append(draft())
        operations.stop(commons_id=COMMONS, why="I4: the balance of pool is off")
        with pytest.raises(operations.JournalStopped, match="the balance of pool is off"):
            append(draft())
        assert queries.why_stopped(commons_id=COMMONS) == "I4: the balance of pool is off"
        assert queries.entry(commons_id=COMMONS, number=1).number == 1
        operations.resume(commons_id=COMMONS)
        (receipt,) = append(draft())
        assert receipt.number == 2

    def test_without_journal(self) -> None:
        with pytest.raises(queries.JournalNotOpen):
            operations.stop(commons_id=9, why="x")
        with pytest.raises(queries.JournalNotOpen):
            queries.why_stopped(commons_id=9)


class TestHold:
    """Whoever holds the head keeps every writer out until the transaction ends."""

    @pytest.mark.django_db
    def test_without_journal(self) -> None:
        with pytest.raises(queries.JournalNotOpen):
            operations.hold(commons_id=9)

    def test_a_writer_waits(self, committing_db: CommittingDatabase, append: Append) -> None:
        append(draft())
        about_to_write = threading.Event()

        def write() -> None:
            about_to_write.set()
            append(draft())
            connections["default"].close()

        writer = threading.Thread(target=write)
        with transaction.atomic():
            operations.hold(commons_id=COMMONS)
            writer.start()
            about_to_write.wait()
            writer.join(timeout=0.3)
            assert writer.is_alive()
            assert queries.head(commons_id=COMMONS).size == 1
        writer.join(timeout=20)
        assert queries.head(commons_id=COMMONS).size == 2
