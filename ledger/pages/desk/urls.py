"""The addresses of this room."""

from django.urls import URLPattern, URLResolver, path

from ledger.pages.desk import correcting, entries, home, members, receipts, recording

urlpatterns: list[URLPattern | URLResolver] = [
    path("", home.home, name="home"),
    path("c/<slug:slug>/", home.commons_page, name="commons"),
    path("c/<slug:slug>/record/", recording.record, name="record"),
    path("c/<slug:slug>/record/left/", recording.left, name="left"),
    path("c/<slug:slug>/entries/", entries.entries, name="entries"),
    path("c/<slug:slug>/entries/<int:number>/", entries.entry, name="entry"),
    path("c/<slug:slug>/entries/<int:number>/receipt/", receipts.receipt, name="receipt"),
    path("c/<slug:slug>/entries/<int:number>/correct/", correcting.correct, name="correct"),
    path("c/<slug:slug>/members/", members.members, name="members"),
]
