"""The first page, and the page of a commons: what there is to do, and the ways to it."""

from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render

from ledger.cases import queries as cases
from ledger.commons import queries as commons
from ledger.identity import queries as accounts
from ledger.pages.visiting import page, show
from ledger.web.visitors import Visitor


def home(request: HttpRequest) -> HttpResponse:
    """Show who is a stranger the way in, and who is not the commons that they have a seat in."""
    account_id = request.user.pk
    if account_id is None:
        return render(request, "desk/home.html")
    seats = accounts.seats(account_id=account_id)
    mine = [commons.commons(commons_id=commons_id) for commons_id in seats]
    if len(mine) == 1:
        return redirect("commons", slug=mine[0].slug)
    return render(request, "desk/home.html", {"mine": mine})


@page
def commons_page(request: HttpRequest, visitor: Visitor) -> HttpResponse:
    """Show what needs doing in a commons today, and where the visitor's own lines lie."""
    commons_id = visitor.commons.commons_id
    waiting = None
    if visitor.sees_everybody():
        waiting = len(cases.cases(commons_id=commons_id, is_open=True))
    own = commons.members(commons_id=commons_id)[visitor.member]
    return show(request, visitor, "desk/commons.html", waiting=waiting, own=own)
