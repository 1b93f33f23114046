"""The addresses of this room."""

from django.urls import URLPattern, URLResolver, path

from ledger.pages.standing import seasons, views

urlpatterns: list[URLPattern | URLResolver] = [
    path("c/<slug:slug>/standing/", views.own, name="own_standing"),
    path("c/<slug:slug>/members/<int:number>/", views.member, name="standing"),
    path("c/<slug:slug>/seasons/", seasons.seasons_page, name="seasons"),
    path("c/<slug:slug>/seasons/<slug:code>/", seasons.season_page, name="season"),
    path("c/<slug:slug>/seasons/<slug:code>/use.svg", seasons.use_chart, name="use_chart"),
    path("c/<slug:slug>/seasons/<slug:code>/report.<str:form>", seasons.report, name="report"),
]
