"""Whatever is posted, nothing is made or lost, and replaying the postings gives the balances."""

from collections import Counter
from typing import Any

import pytest
from django.db import transaction
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.foundation import clocks
from ledger.journal import operations, queries, verification
from ledger.journal.leaves import Draft
from tests.ledger.journal.drafts import DAY, NOON, draft, posting

_names = st.sampled_from(["pool", "taken:1", "taken:2", "allotted:1"])
_goods = st.sampled_from([("mullet", "g"), ("clams", "g"), ("clams", "min")])
_amounts = st.integers(-(10**6), 10**6)


@st.composite
def _drafts(draw: st.DrawFn) -> Draft:
    lines = []
    for _ in range(draw(st.integers(0, 3))):
        (resource, unit), amount = draw(_goods), draw(_amounts)
        for account, signed in ((draw(_names), amount), (draw(_names), -amount)):
            lines.append(posting(account, signed, resource=resource, unit=unit))
    return draft(postings=tuple(lines), facts={"n": draw(_amounts)}, occurred_at=NOON, day=DAY)


@pytest.mark.django_db
@settings(max_examples=15)
@given(data=st.data())
def test_sums_stay_zero_and_balances_are_the_fold(data: st.DataObject) -> None:
    chance = clocks.seeded_chance(3)
    common: dict[str, Any] = {"commons_id": 1, "clock": clocks.system_clock, "chance": chance}
    with transaction.atomic():
        operations.open_journal(**common)
        for part in data.draw(st.lists(st.lists(_drafts(), max_size=4), max_size=4)):
            operations.append(drafts=part, by=0, **common)
        size = queries.head(commons_id=1).size
        for number in sorted(data.draw(st.sets(st.integers(1, max(size, 1)), max_size=3))):
            if number <= size:
                operations.reverse(
                    number=number,
                    reason="r",
                    by=1,
                    occurred_at=NOON,
                    day=DAY,
                    **common,
                )
        fold: Counter[tuple[str, str, str]] = Counter()
        totals: Counter[tuple[str, str]] = Counter()
        for entry in queries.entries(commons_id=1):
            for line in entry.postings:
                fold[line.account, line.resource, line.unit] += line.amount
                totals[line.resource, line.unit] += line.amount
        assert set(totals.values()) <= {0}
        assert queries.balances(commons_id=1, prefix="") == dict(fold)
        for (account, resource, unit), amount in fold.items():
            assert amount == queries.balance_as_of(
                commons_id=1, account=account, resource=resource, unit=unit
            )
        assert verification.verify(commons_id=1, progress=lambda done, of: None) == ()
        transaction.set_rollback(True)
