"""What every page of a commons' book has in common: who is looking, and the proof line below."""

from collections.abc import Callable
from functools import wraps
from typing import Any, Concatenate, ParamSpec

from allauth.mfa.utils import is_mfa_enabled
from django.contrib.auth.decorators import login_required
from django.core.exceptions import PermissionDenied
from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import redirect, render

from ledger.commons import queries as commons
from ledger.foundation.clocks import system_clock
from ledger.journal import queries as journal
from ledger.web import visitors
from ledger.web.visitors import Visitor

Arguments = ParamSpec("Arguments")
View = Callable[Concatenate[HttpRequest, Visitor, Arguments], HttpResponse]


def page(view: View[Arguments], /) -> Callable[..., HttpResponse]:
    """Turn a function of a visitor into a view under a commons' short name, for who is signed in.

    What is not for the visitor's eyes is not there; what is not theirs to do is refused.
    """

    @login_required
    @wraps(view)
    def shown(request: HttpRequest, slug: str, *args: Any, **kwargs: Any) -> HttpResponse:
        account_id = request.user.pk
        assert account_id is not None, "nobody gets here without signing in"
        try:
            visitor = visitors.visitor(account_id=account_id, slug=slug, now=system_clock())
            if _lacks_second_factor(request, visitor):
                return redirect("mfa_activate_totp")
            return view(request, visitor, *args, **kwargs)
        except visitors.NotHere as error:
            raise Http404(str(error)) from error
        except visitors.NotYours as error:
            raise PermissionDenied(str(error)) from error

    return shown


def _lacks_second_factor(request: HttpRequest, visitor: Visitor) -> bool:
    """Return whether the visitor holds an office in a real commons by a password alone."""
    if visitor.commons.is_demo or not visitor.holds(*visitors.OFFICES):
        return False
    return not is_mfa_enabled(request.user)


def show(
    request: HttpRequest, visitor: Visitor, template: str, /, *, status: int = 200, **context: Any
) -> HttpResponse:
    """Return a page: the commons at its head, whom to ask and the proof line at its foot."""
    head = journal.head(commons_id=visitor.commons.commons_id)
    shown = {
        "visitor": visitor,
        "lists_members": visitor.holds(visitors.SECRETARY, visitors.BOARD, visitors.MONITOR),
        "secretaries": _secretaries(visitor),
        "proof": journal.proof_line(head),
        **context,
    }
    return render(request, template, shown, status=status)


def _secretaries(visitor: Visitor) -> list[str]:
    """Return the names of those whom a member asks for help, who hold the office today."""
    commons_id = visitor.commons.commons_id
    today = visitor.commons.day_of(system_clock())
    held = commons.holders_of(commons_id=commons_id, role=visitors.SECRETARY, day=today)
    found = (commons.member(commons_id=commons_id, number=number) for number in sorted(held))
    return [each.name for each in found if each is not None]
