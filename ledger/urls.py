"""Every address of the service."""

from django.urls import include, path

urlpatterns = [
    path("api/v1/", include("ledger.api.urls")),
    path("", include("ledger.web.urls")),
    path("", include("ledger.pages.urls")),
]
