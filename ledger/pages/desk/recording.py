"""Recording slips: one page, again and again, with the last receipt on top."""

from datetime import datetime
from typing import Any

from django.db import transaction
from django.http import HttpRequest, HttpResponse, JsonResponse
from django.shortcuts import redirect
from django.urls import reverse
from django.utils.crypto import get_random_string
from django.views.decorators.http import require_http_methods, require_safe

from governance.errors import StintbookError
from ledger.commons import queries as commons
from ledger.foundation.clocks import system_chance, system_clock
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal_operations
from ledger.journal import queries as journal
from ledger.journal.leaves import EntryRecord, Receipt
from ledger.movements import operations as movements
from ledger.movements import queries as movements_queries
from ledger.pages.desk import wording
from ledger.pages.desk.forms import SlipForm, local
from ledger.pages.visiting import page, show
from ledger.web.visitors import Visitor

_PLACE_OF_REFUSAL = {
    "movements.handed_in_before_taken": "handed_time",
    "journal.key_reused": "slip",
}


@require_http_methods(["GET", "HEAD", "POST"])
@page
def record(request: HttpRequest, visitor: Visitor) -> HttpResponse:
    """Ask for a slip, or record it and ask for the next."""
    now = system_clock()
    last = _last(request, visitor)
    if request.method != "POST":
        form = SlipForm(visitor=visitor, now=now, initial=_initial(visitor, last, now))
        return _shown(request, visitor, form, last)
    form = SlipForm(request.POST, visitor=visitor, now=now)
    receipt = recorded(form, visitor) if form.is_valid() else None
    if receipt is None:
        return _shown(request, visitor, form, None, status=422)
    again = "&again=1" if receipt.replayed else ""
    address = reverse("record", kwargs={"slug": visitor.commons.slug})
    return redirect(f"{address}?entry={receipt.number}{again}")


def recorded(form: SlipForm, visitor: Visitor) -> Receipt | None:
    """Record a form's slip and return the receipt; None where the form now says what is amiss."""
    hand = Hand(by=visitor.member, clock=system_clock, chance=system_chance)
    try:
        with transaction.atomic():
            (receipt,) = movements.record_withdrawals(
                commons_id=visitor.commons.commons_id, slips=[form.as_slip()], hand=hand
            )
    except StintbookError as error:
        refused(form, error)
        return None
    return receipt


def refused(form: SlipForm, error: StintbookError) -> None:
    """Have a form say why the book refused its slip, beside the box that it is about."""
    words = str(error)
    if isinstance(error, journal_operations.KeyReused):
        words = (
            "A slip of this number is recorded with another content; the number of another slip is"
            " accepted. To mend the recorded one, open its entry and correct it."
        )
    form.add_error(_PLACE_OF_REFUSAL.get(error.code, "amount_1"), words)


@require_safe
@page
def left(request: HttpRequest, visitor: Visitor) -> HttpResponse:
    """Answer with a member's name and what they may still take, while a slip is typed."""
    commons_id = visitor.commons.commons_id
    member, zone = request.GET.get("member", ""), request.GET.get("place", "")
    number = int(member) if member.isdecimal() and len(member) < 10 else 0
    known = commons.member(commons_id=commons_id, number=number)
    if known is None or not visitor.records_takes_of(number):
        return JsonResponse({"name": "", "draw_point": "", "words": ""})
    words = ""
    zones = commons.zones(commons_id=commons_id)
    if zone in zones and visitor.sees_member(number):
        words = wording.remaining(
            commons_id=commons_id,
            member=number,
            resource=commons.resource(commons_id=commons_id, code=zones[zone].resource),
            day=visitor.commons.day_of(system_clock()),
        )
    return JsonResponse({"name": known.name, "draw_point": known.draw_point, "words": words})


def initial_of(entry: EntryRecord, visitor: Visitor) -> dict[str, Any]:
    """Return how a recorded slip would fill the form."""
    lines = entry.facts["lines"]
    taken = local(entry.occurred_at, visitor)
    handed = local(datetime.fromisoformat(entry.facts["handed_in"]), visitor)
    filled: dict[str, Any] = {
        "member": entry.subject,
        "slip": entry.facts["slip"],
        "taken_on": f"{taken:%Y-%m-%d}",
        "taken_time": f"{taken:%H:%M}",
        "handed_on": f"{handed:%Y-%m-%d}",
        "handed_time": f"{handed:%H:%M}",
        "draw_point": entry.facts["draw_point"],
        "note": entry.texts.get("note", ""),
    }
    for place, line in enumerate(lines, start=1):
        filled |= {f"amount_{place}": line["given"], f"place_{place}": line["zone"]}
    return filled


def _initial(visitor: Visitor, last: EntryRecord | None, now: datetime) -> dict[str, Any]:
    """Return what is mostly the same from slip to slip; a receipt's words are for its own slip."""
    here = local(now, visitor)
    first = {"handed_on": f"{here:%Y-%m-%d}", "handed_time": f"{here:%H:%M}"}
    first |= {"key": get_random_string(22), "taken_on": f"{here:%Y-%m-%d}"}
    if not visitor.holds("secretary", "monitor"):
        first["member"] = str(visitor.member)
    if last is not None:
        before = initial_of(last, visitor)
        first |= {name: before[name] for name in ("taken_on", "taken_time", "place_1")}
    return first


def _last(request: HttpRequest, visitor: Visitor) -> EntryRecord | None:
    """Return the withdrawal that the address names as just recorded, if the visitor may see it."""
    asked = request.GET.get("entry", "")
    if not asked.isdecimal() or len(asked) > 15:
        return None
    try:
        found = journal.entry(commons_id=visitor.commons.commons_id, number=int(asked))
    except journal.EntryNotFound:
        return None
    mine = found.by == visitor.member and visitor.sees_entry_about(found.subject)
    return found if mine and found.kind == movements_queries.WITHDRAWAL else None


def _shown(
    request: HttpRequest,
    visitor: Visitor,
    form: SlipForm,
    last: EntryRecord | None,
    *,
    status: int = 200,
) -> HttpResponse:
    words = None if last is None else wording.entry(kept=visitor.commons, found=last)
    return show(
        request,
        visitor,
        "desk/record.html",
        status=status,
        form=form,
        last=words,
        # What a neighbour has left is not for a monitor's eyes.
        remains=words.remains if words and last and visitor.sees_member(last.subject or 0) else (),
        again="again" in request.GET,
    )
