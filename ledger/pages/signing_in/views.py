"""Getting in by a card; the devices that act for a member; cards for members."""

from typing import Any

from django.contrib import messages
from django.db import transaction
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.views.decorators.debug import sensitive_post_parameters
from django.views.decorators.http import require_POST

from ledger.commons import queries as commons
from ledger.foundation.clocks import system_chance, system_clock
from ledger.identity import operations as identity
from ledger.identity import queries as accounts
from ledger.identity import secrets
from ledger.pages.signing_in.forms import SCOPE_WORDS, CardForm, DeviceForm
from ledger.pages.visiting import page, show
from ledger.web.visitors import SECRETARY, NotHere, NotYours, Visitor


@sensitive_post_parameters()
def card(request: HttpRequest) -> HttpResponse:
    """Take a card and a new password, with which its holder then signs in as on any other day."""
    form = CardForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        try:
            with transaction.atomic():
                username = identity.redeem_card(
                    secret=form.cleaned_data["card"],
                    password=form.cleaned_data["password"],
                    clock=system_clock,
                )
        except identity.CardDoesNotHold as error:
            form.add_error("card", str(error))
        else:
            messages.success(
                request, f"Your password is set. Sign in with it as {username}, the account's name."
            )
            return redirect("account_login")
    return render(
        request, "signing_in/card.html", {"form": form}, status=400 if form.errors else 200
    )


@page
def devices(request: HttpRequest, visitor: Visitor) -> HttpResponse:
    """List the visitor's devices, and give one a token, which is shown once."""
    form = DeviceForm(request.POST or None)
    secret = None
    if request.method == "POST" and form.is_valid():
        try:
            with transaction.atomic():
                secret = identity.issue_token(
                    commons_id=visitor.commons.commons_id,
                    member=visitor.member,
                    device=form.cleaned_data["device"],
                    scopes=form.cleaned_data["scopes"],
                    clock=system_clock,
                    chance=system_chance,
                )
        except identity.UnusableDevice as error:
            form.add_error("device", str(error))
    return show(
        request,
        visitor,
        "signing_in/devices.html",
        form=DeviceForm() if secret else form,
        secret=secret,
        device=request.POST.get("device", ""),
        tokens=_tokens(visitor),
        status=400 if form.errors else 200,
    )


@require_POST
@page
def end_device(request: HttpRequest, visitor: Visitor, number: int) -> HttpResponse:
    """End the token of one of the visitor's devices."""
    try:
        with transaction.atomic():
            identity.end_token(account_id=visitor.account_id, token_id=number, clock=system_clock)
    except identity.UnknownToken as error:
        raise NotHere(what="device") from error
    return redirect("devices", slug=visitor.commons.slug)


@page
def member_card(request: HttpRequest, visitor: Visitor, number: int) -> HttpResponse:
    """Make a card for a member who holds no office.

    A card for an office-holder would let the secretary in under another's name; those are made by
    a command, where the service runs.
    """
    visitor.needs(SECRETARY)
    kept = visitor.commons
    members = commons.members(commons_id=kept.commons_id)
    if number not in members:
        raise NotHere(what="member")
    now = system_clock()
    if commons.roles_of(commons_id=kept.commons_id, member=number, day=kept.day_of(now)):
        raise NotYours(
            needed="the command card, where the service runs, for a member who holds an office",
            found=visitor.title,
        )
    made: dict[str, Any] = {}
    if request.method == "POST":
        with transaction.atomic():
            secret = identity.open_account(
                username=f"{kept.slug}.{number}",
                commons_id=kept.commons_id,
                member=number,
                clock=system_clock,
                chance=system_chance,
            )
        seat = accounts.seat_of_member(commons_id=kept.commons_id, member=number)
        assert seat is not None, "the account was made above"
        made = {
            "secret": secrets.in_groups(secret),
            "username": seat.username,
            "until": kept.day_of(now + identity.CARD_HOLDS),
        }
    return show(request, visitor, "signing_in/member_card.html", member=members[number], **made)


def _tokens(visitor: Visitor) -> list[dict[str, object]]:
    found = accounts.tokens(account_id=visitor.account_id, commons_id=visitor.commons.commons_id)
    return [
        {
            "number": token.token_id,
            "device": token.device,
            "words": [words for scope, words in SCOPE_WORDS.items() if scope in token.scopes],
            "made_at": token.made_at,
            "expires_at": token.expires_at,
            "last_used_on": token.last_used_on,
        }
        for token in found
    ]
