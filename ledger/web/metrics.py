"""Figures for who watches the service, as Prometheus reads them; off unless the settings say on.

Requests are counted by each process. Where several serve, PROMETHEUS_MULTIPROC_DIR names the folder
in which they add them up. What lies in the database is counted when it is asked for.
"""

import os
from collections.abc import Iterator

from django.conf import settings
from django.http import Http404, HttpRequest, HttpResponse
from django.views.decorators.http import require_safe
from prometheus_client import (
    CONTENT_TYPE_LATEST,
    REGISTRY,
    CollectorRegistry,
    Counter,
    Histogram,
    generate_latest,
    multiprocess,
)
from prometheus_client.metrics_core import GaugeMetricFamily, Metric
from prometheus_client.registry import Collector

from ledger.foundation import outbox
from ledger.foundation.clocks import system_clock
from ledger.journal import queries as journal

REQUESTS = Counter(
    "stintbook_requests", "Requests answered.", ("method", "route", "status"), registry=REGISTRY
)
SECONDS = Histogram(
    "stintbook_request_seconds",
    "Time to answer a request.",
    ("route",),
    buckets=(0.01, 0.03, 0.1, 0.3, 1, 3, 10),
    registry=REGISTRY,
)


def count(*, method: str, route: str, status: int, seconds: float) -> None:
    """Count a request, if figures are wanted at all.

    :param route: the template of its address, of which there are few.
    """
    if settings.METRICS:
        REQUESTS.labels(method=method, route=route, status=status).inc()
        SECONDS.labels(route=route).observe(seconds)


@require_safe
def metrics(request: HttpRequest) -> HttpResponse:
    """Answer with every figure, or that there is nothing here."""
    if not settings.METRICS:
        raise Http404("No figures are given.")
    text = b"".join(generate_latest(each) for each in _registries())
    return HttpResponse(text, content_type=CONTENT_TYPE_LATEST)


def _registries() -> Iterator[CollectorRegistry]:
    if os.environ.get("PROMETHEUS_MULTIPROC_DIR"):
        together = CollectorRegistry()
        multiprocess.MultiProcessCollector(together)  # type: ignore[no-untyped-call]
        yield together
    else:
        yield REGISTRY
    book = CollectorRegistry()
    book.register(_Book())
    yield book


class _Book(Collector):
    """What lies in the database now."""

    def collect(self) -> Iterator[Metric]:
        """Yield the jobs that wait and the size of each journal."""
        now = system_clock()
        waiting = outbox.backlog(at=now)
        age = (now - waiting.oldest_due_at).total_seconds() if waiting.oldest_due_at else 0
        yield GaugeMetricFamily("stintbook_jobs_due", "Jobs due and not done.", waiting.open_due)
        yield GaugeMetricFamily("stintbook_jobs_parked", "Jobs given up.", waiting.parked)
        yield GaugeMetricFamily("stintbook_job_oldest_seconds", "Age of the oldest due job.", age)
        entries = GaugeMetricFamily(
            "stintbook_entries", "Entries of a journal.", labels=["commons"]
        )
        for commons_id in journal.journals():
            entries.add_metric([str(commons_id)], journal.head(commons_id=commons_id).size)
        yield entries
