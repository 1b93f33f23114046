"""Figures for Prometheus: off unless asked for, and few series."""

from datetime import UTC, datetime

import pytest
from django.db import transaction
from django.test import Client, override_settings
from prometheus_client.parser import text_string_to_metric_families

from ledger.foundation import outbox
from ledger.foundation.clocks import Chance
from tests.conftest import TickingClock
from tests.ledger import builders


def _scraped() -> dict[tuple[str, tuple[tuple[str, str], ...]], float]:
    response = Client().get("/metrics")
    assert response.status_code == 200
    assert response.headers["Content-Type"].startswith("text/plain; version=")
    return {
        (sample.name, tuple(sorted(sample.labels.items()))): sample.value
        for family in text_string_to_metric_families(response.content.decode())
        for sample in family.samples
    }


def test_there_is_nothing_where_nobody_asked_for_figures() -> None:
    assert Client().get("/metrics").status_code == 404


@pytest.mark.django_db
@override_settings(METRICS=True)
def test_requests_are_counted_by_template_and_outcome() -> None:
    healthy = (
        "stintbook_requests_total",
        (("method", "GET"), ("route", "/healthz"), ("status", "200")),
    )
    before = _scraped().get(healthy, 0)
    for _ in range(3):
        Client().get("/healthz")
    for number in range(50):
        Client().get(f"/no/such/page/{number}")
    found = _scraped()
    assert found[healthy] - before == 3
    assert len(found) < 1_000
    assert not [labels for name, labels in found if "/no/such/page" in str(labels)]
    assert found["stintbook_request_seconds_count", (("route", "/healthz"),)] >= 3


@pytest.mark.django_db
@override_settings(METRICS=True)
def test_jobs_and_entries_are_counted_in_the_database(
    ticking_clock: TickingClock, chance: Chance
) -> None:
    commons_id = builders.found(hand=builders.hand(clock=ticking_clock, chance=chance))
    with transaction.atomic():
        for key in ("2026-02-01", "2026-02-02"):
            outbox.enqueue(
                commons_id=commons_id,
                kind="judge",
                key=key,
                due_at=datetime(2026, 2, 1, tzinfo=UTC),
                payload={},
                clock=ticking_clock,
            )
    found = _scraped()
    assert found["stintbook_jobs_due", ()] == 2
    assert found["stintbook_jobs_parked", ()] == 0
    assert found["stintbook_job_oldest_seconds", ()] > 0
    assert found["stintbook_entries", (("commons", str(commons_id)),)] == 1
