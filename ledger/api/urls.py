"""The addresses of the API."""

from django.urls import include, path, re_path, register_converter

from ledger.api import book, cases, entries, problems
from ledger.api.document import Document
from ledger.web.converters import DayConverter, NumberConverter

register_converter(NumberConverter, "number")
register_converter(DayConverter, "day")

COMMONS = [
    path("", book.Commons.as_view()),
    path("head", book.Head.as_view()),
    path("head/prefix", book.Prefix.as_view()),
    path("withdrawals", entries.Withdrawals.as_view()),
    path("withdrawals/batch", entries.WithdrawalBatch.as_view()),
    path("entries", entries.Entries.as_view()),
    path("entries/<number:number>", entries.OneEntry.as_view()),
    path("entries/<number:number>/receipt", entries.EntryReceipt.as_view()),
    path("entries/<number:number>/reversal", entries.Reversal.as_view()),
    path("members", book.Members.as_view()),
    path("members/<number:number>/standing", book.MemberStanding.as_view()),
    path("findings", book.Findings.as_view()),
    path("findings/<number:number>", book.OneFinding.as_view()),
    path("cases", cases.Cases.as_view()),
    path("cases/<number:number>", cases.OneCase.as_view()),
    path("cases/<number:number>/moves", cases.CaseMoves.as_view()),
    path("seasons", book.Seasons.as_view()),
    path("seasons/<slug:season>", book.OneSeason.as_view()),
    path("seasons/<slug:season>/advice", book.SeasonAdvice.as_view()),
    path("reports/<day:first>", book.SeasonReport.as_view()),
    path("tokens", book.Tokens.as_view()),
    path("tokens/<number:number>", book.OneToken.as_view()),
]
urlpatterns = [
    path("schema", Document.as_view()),
    path("commons/<slug:slug>/", include(COMMONS)),
    re_path(r"^.*$", problems.no_such_address),
]
