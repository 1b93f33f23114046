"""The two sides of the posting benches: the journal's ``append``, and the statements by hand."""

import time
from collections.abc import Callable, Mapping

from django.db import transaction

from ledger.foundation import clocks
from ledger.journal import operations
from ledger.journal.leaves import Draft, Posting
from tests.bench import bare, ground, rounds

_COMMONS = 1


def measure(
    *, name: str, size: str, transactions: int, entries: int, bounds: Mapping[str, float]
) -> rounds.Measurement:
    """Measure so many transactions a slice, each of so many entries."""
    with ground.own_database() as address:
        kind = address.split(":", 1)[0]
        with transaction.atomic():
            operations.open_journal(
                commons_id=_COMMONS, clock=clocks.system_clock, chance=clocks.system_chance
            )
        hand = bare.Bare(address)
        takes = bare.takes(entries)
        try:
            return rounds.measure(
                name=name,
                size=f"{size}: {transactions} transactions of {entries}",
                baseline=f"five statements, bare {'sqlite3' if hand.is_sqlite else 'psycopg'}",
                program_side=lambda: _speed(lambda: _append(takes), transactions),
                baseline_side=lambda: _speed(lambda: hand.post(takes), transactions),
                bound=bounds[kind],
            )
        finally:
            hand.close()


def _append(takes: list[bare.Take]) -> None:
    with transaction.atomic():
        operations.append(
            commons_id=_COMMONS,
            drafts=[_draft(take) for take in takes],
            by=0,
            clock=clocks.system_clock,
            chance=clocks.system_chance,
        )


def _draft(take: bare.Take) -> Draft:
    return Draft(
        kind="withdrawal",
        occurred_at=take.occurred_at,
        day=take.day,
        facts=take.facts,
        subject=take.member,
        postings=tuple(
            Posting(account=account, resource="mullet", unit="g", amount=amount)
            for account, amount in take.lines()
        ),
    )


def _speed(act: Callable[[], None], times: int) -> float:
    start = time.perf_counter()
    for _ in range(times):
        act()
    return times / (time.perf_counter() - start)
