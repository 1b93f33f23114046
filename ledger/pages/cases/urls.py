"""The addresses of this room."""

from django.urls import URLPattern, URLResolver, path

from ledger.pages.cases import views

urlpatterns: list[URLPattern | URLResolver] = [
    path("c/<slug:slug>/cases/", views.cases_page, name="cases"),
    path("c/<slug:slug>/cases/<int:number>/", views.case_page, name="case"),
    path("c/<slug:slug>/cases/<int:number>/moves/", views.move, name="case_move"),
]
