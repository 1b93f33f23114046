"""Reading the journal: entries, balances, two times, proofs."""

from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from typing import Any

import pytest

from ledger.journal import queries, tree
from ledger.journal.leaves import HeadRecord, Receipt
from tests.conftest import TickingClock
from tests.ledger.journal.conftest import COMMONS, Append
from tests.ledger.journal.drafts import DAY, NOON, draft, posting

pytestmark = pytest.mark.django_db

Reverse = Callable[..., Receipt]


def _numbers(**asked: Any) -> list[int]:
    return [row[0] for row in queries.rows(commons_id=COMMONS, kinds=["withdrawal"], **asked)]


def test_an_entry_comes_back_as_it_went_in(append: Append, ticking_clock: TickingClock) -> None:
    facts = {"list": [1, "1", None, True], "map": {"é": -(2**63)}}
    append(draft(500, facts=facts, texts={"note": "háló"}, key="k", device="d"), by=6)
    entry = queries.entry(commons_id=COMMONS, number=1)
    assert (entry.number, entry.kind, entry.by, entry.subject) == (1, "withdrawal", 6, 17)
    assert (entry.occurred_at, entry.recorded_at) == (NOON, ticking_clock())
    assert entry.recorded_at.tzinfo is not None
    assert (entry.day, entry.device, entry.key) == (DAY, "d", "k")
    assert (entry.reverses, entry.reversed_by) == (None, None)
    assert (entry.facts, entry.texts) == (facts, {"note": "háló"})
    assert entry.postings == (posting("taken:mullet:17", 500), posting("pool:mullet", -500))


def test_an_entry_that_does_not_stand(append: Append) -> None:
    append(draft())
    for number in (0, 2):
        with pytest.raises(queries.EntryNotFound):
            queries.entry(commons_id=COMMONS, number=number)


def test_entries_by_kind_subject_and_range(append: Append, reverse: Reverse) -> None:
    append(*(draft(at, member=at % 2) for at in range(1, 5)), draft(kind="share", postings=()))
    reverse(2)
    found = {
        "all": queries.entries(commons_id=COMMONS),
        "kind": queries.entries(commons_id=COMMONS, kinds=["share", "reversal"]),
        "subject": queries.entries(commons_id=COMMONS, subject=1),
        "range": queries.entries(commons_id=COMMONS, after=1, up_to=3),
    }
    assert {name: [entry.number for entry in part] for name, part in found.items()} == {
        "all": [1, 2, 3, 4, 5, 6],
        "kind": [5, 6],
        "subject": [1, 3],
        "range": [2, 3],
    }
    assert queries.entry(commons_id=COMMONS, number=2).reversed_by == 6


def test_a_reversal_is_known_only_from_its_number_on(append: Append, reverse: Reverse) -> None:
    append(draft(1), draft(2))
    reverse(1)
    (before,) = queries.entries(commons_id=COMMONS, up_to=1)
    assert before.reversed_by is None
    (after, _) = queries.entries(commons_id=COMMONS, up_to=3, kinds=["withdrawal"])
    assert after.reversed_by == 3


def test_entries_longer_than_one_read(append: Append) -> None:
    append(*(draft(1, texts={"n": str(at)}) for at in range(1203)))
    found = list(queries.entries(commons_id=COMMONS))
    assert [entry.number for entry in found] == list(range(1, 1204))
    assert [entry.texts["n"] for entry in found] == [str(at) for at in range(1203)]


def test_rows_leave_out_reversals_and_what_they_reverse(append: Append, reverse: Reverse) -> None:
    append(
        draft(1, member=1),
        draft(2, member=2, day=DAY + timedelta(days=1)),
        draft(3, member=3, day=DAY + timedelta(days=2)),
        draft(kind="share", postings=()),
    )
    reverse(2)
    assert _numbers() == [1, 3]
    assert _numbers(up_to=4) == [1, 2, 3]
    assert _numbers(up_to=4, subjects=[2, 3]) == [2, 3]
    assert _numbers(up_to=4, subjects=range(2, 2000)) == [2, 3]
    assert _numbers(up_to=4, first_day=DAY + timedelta(days=1)) == [2, 3]
    assert _numbers(up_to=4, until_day=DAY + timedelta(days=2)) == [1, 2]
    assert queries.rows(commons_id=COMMONS, kinds=["reversal"]) == []


def test_rows_have_the_columns(append: Append, ticking_clock: TickingClock) -> None:
    append(draft(500))
    assert queries.rows(commons_id=COMMONS, kinds=["withdrawal", "share"]) == [
        (1, "withdrawal", 17, DAY, NOON, ticking_clock(), {"amount": 500, "gear": "GN"})
    ]


def test_balances_now(append: Append) -> None:
    append(draft(500), draft(7, member=1), draft(kind="share", postings=(posting("Taken", 0),)))
    assert queries.balances(commons_id=COMMONS, prefix="taken:") == {
        ("taken:mullet:1", "mullet", "g"): 7,
        ("taken:mullet:17", "mullet", "g"): 500,
    }
    asked: dict[str, Any] = {"commons_id": COMMONS, "resource": "mullet"}
    assert queries.balance(**asked, account="taken:mullet:17", unit="g") == 500
    assert queries.balance(**asked, account="taken:mullet:17", unit="kg") == 0
    assert queries.balances(commons_id=COMMONS, prefix="TAKEN") == {}


def test_balances_as_known_at_a_head(append: Append, reverse: Reverse) -> None:
    append(draft(500), draft(7, member=1), draft(20))
    reverse(1)
    asked: dict[str, Any] = {"commons_id": COMMONS, "prefix": "taken:"}
    first, second = ("taken:mullet:17", "mullet", "g"), ("taken:mullet:1", "mullet", "g")
    assert queries.balances(**asked, up_to=1) == {first: 500}
    assert queries.balances(**asked, up_to=3) == {first: 520, second: 7}
    assert queries.balances(**asked) == {first: 20, second: 7}


def test_balance_as_of_a_day_and_as_known(append: Append, reverse: Reverse) -> None:
    later = DAY + timedelta(days=1)
    append(draft(500), draft(20, day=later), draft(3, member=18))
    append(draft(1))
    reverse(2)

    def taken(**asked: Any) -> int:
        return queries.balance_as_of(
            commons_id=COMMONS,
            account="taken:mullet:17",
            resource="mullet",
            unit="g",
            **asked,
        )

    # The reversal carries the first day, as the secretary dated it.
    assert (taken(), taken(day=DAY), taken(up_to=4), taken(day=DAY, up_to=4)) == (
        501,
        481,
        521,
        501,
    )
    assert taken(up_to=0) == 0


def test_size_known_at_a_moment(append: Append, ticking_clock: TickingClock) -> None:
    start = ticking_clock()
    for count in (1, 3, 2):
        append(*(draft(1) for _ in range(count)))
        ticking_clock.advance(minutes=1)
    minute = timedelta(minutes=1)
    known = [
        queries.size_known_at(commons_id=COMMONS, at=start + step)
        for step in (-minute, timedelta(0), minute / 2, minute, 2 * minute, 9 * minute)
    ]
    assert known == [0, 1, 1, 4, 6, 6]


def test_the_proof_line() -> None:
    head = HeadRecord(
        size=48_210,
        root=bytes.fromhex("7f3a91c0" + "00" * 28),
        recorded_at=datetime(2026, 3, 14, 18, 2, 59, tzinfo=UTC),
    )
    assert queries.proof_line(head) == "entries 1–48,210 · head 7f3a 91c0 · 2026-03-14 18:02 +00:00"


def test_the_proof_line_of_an_empty_journal(append: Append) -> None:
    append()
    head = queries.head(commons_id=COMMONS)
    assert (head.size, head.root) == (0, tree.EMPTY_ROOT)
    assert queries.proof_line(head) == "entries none · head e3b0 c442 · 2026-03-01 09:00 +00:00"


@pytest.mark.parametrize("sizes", [(1, 2, 255, 256, 257, 513, 700)])
def test_every_entry_and_every_older_head_is_proved(append: Append, sizes: tuple[int, ...]) -> None:
    heads = {}
    written = 0
    for size in sizes:
        append(*(draft(1) for _ in range(size - written)))
        heads[size] = queries.head(commons_id=COMMONS)
        written = size
    now = heads[sizes[-1]]
    for size, old in heads.items():
        assert queries.head_at(commons_id=COMMONS, size=size) == old
        assert tree.verify_consistency(
            old_size=size,
            size=now.size,
            old_root=old.root,
            root=now.root,
            proof=queries.consistency_proof(commons_id=COMMONS, old_size=size),
        )
        for number in {1, size // 2 + 1, size}:
            leaf = queries.receipt_leaf(commons_id=COMMONS, number=number)
            for covering in (old, now):
                assert tree.verify_inclusion(
                    leaf=tree.leaf_hash(leaf),
                    index=number - 1,
                    size=covering.size,
                    proof=queries.inclusion_proof(
                        commons_id=COMMONS, number=number, size=covering.size
                    ),
                    root=covering.root,
                )


def test_proofs_past_the_journal_are_refused(append: Append) -> None:
    append(draft(), draft())
    with pytest.raises(queries.EntryNotFound):
        queries.inclusion_proof(commons_id=COMMONS, number=2, size=1)
    with pytest.raises(queries.EntryNotFound):
        queries.inclusion_proof(commons_id=COMMONS, number=0)
    for asked in ({"old_size": 3}, {"old_size": 2, "size": 1}, {"old_size": 1, "size": 3}):
        with pytest.raises(queries.SizeNotReached):
            queries.consistency_proof(commons_id=COMMONS, **asked)
    with pytest.raises(queries.SizeNotReached):
        queries.head_at(commons_id=COMMONS, size=3)
    with pytest.raises(queries.JournalNotOpen):
        queries.head(commons_id=99)
