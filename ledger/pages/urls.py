"""The addresses of the pages: signing in, and what stands in a commons' book."""

from django.urls import include, path

urlpatterns = [
    path("", include("ledger.pages.signing_in.urls")),
    path("", include("ledger.pages.desk.urls")),
    path("", include("ledger.pages.standing.urls")),
    path("", include("ledger.pages.cases.urls")),
]
