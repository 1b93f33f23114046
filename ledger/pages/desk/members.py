"""The list of members, for those who keep or watch the book."""

from django.http import HttpRequest, HttpResponse
from django.views.decorators.http import require_safe

from ledger.commons import queries as commons
from ledger.pages.visiting import page, show
from ledger.web.visitors import BOARD, MONITOR, SECRETARY, NotHere, Visitor


@require_safe
@page
def members(request: HttpRequest, visitor: Visitor) -> HttpResponse:
    """List the members with their names and draw points."""
    if not visitor.holds(SECRETARY, BOARD, MONITOR):
        raise NotHere(what="list of members")
    listed = commons.members(commons_id=visitor.commons.commons_id).values()
    return show(
        request,
        visitor,
        "desk/members.html",
        listed=listed,
        opens=visitor.sees_everybody(),
    )
