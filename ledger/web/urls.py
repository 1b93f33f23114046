"""The addresses that watch over the service."""

from django.urls import URLPattern, URLResolver, path

from ledger.web import health, metrics

urlpatterns: list[URLPattern | URLResolver] = [
    path("healthz", health.healthz, name="healthz"),
    path("readyz", health.readyz, name="readyz"),
    path("metrics", metrics.metrics, name="metrics"),
]
