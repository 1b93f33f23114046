"""Mending a recorded slip: it is undone with a reason, and recorded anew; both entries stay."""

from django.contrib import messages
from django.db import transaction
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect
from django.views.decorators.http import require_http_methods

from governance.errors import StintbookError
from ledger.foundation.clocks import system_chance, system_clock
from ledger.foundation.hands import Hand
from ledger.journal.leaves import EntryRecord
from ledger.movements import operations as movements
from ledger.movements import queries as movements_queries
from ledger.pages.desk import wording
from ledger.pages.desk.entries import seen
from ledger.pages.desk.forms import ReasonForm, SlipForm
from ledger.pages.desk.recording import initial_of, refused
from ledger.pages.visiting import page, show
from ledger.web.visitors import SECRETARY, NotHere, Visitor


@require_http_methods(["GET", "HEAD", "POST"])
@page
def correct(request: HttpRequest, visitor: Visitor, number: int) -> HttpResponse:
    """Ask why a slip is wrong and what it should say, and mend it."""
    visitor.needs(SECRETARY)
    entry = seen(visitor, number)
    if entry.kind != movements_queries.WITHDRAWAL:
        raise NotHere(what="slip")
    if entry.reversed_by is not None:
        messages.info(
            request, f"Entry {number} was undone before, by entry {entry.reversed_by}; once is all."
        )
        return redirect("entry", slug=visitor.commons.slug, number=number)
    given = request.POST if request.method == "POST" else None
    why = ReasonForm(given)
    only_undo = given is not None and "undo" in given
    form = SlipForm(
        None if only_undo else given,
        visitor=visitor,
        now=system_clock(),
        initial=initial_of(entry, visitor),
    )
    del form.fields["member"].widget.attrs["autofocus"]
    if given is not None and why.is_valid() and (only_undo or form.is_valid()):
        made = _mended(entry, why, None if only_undo else form, visitor)
        if made is not None:
            messages.success(request, _told(number, made))
            return redirect("entry", slug=visitor.commons.slug, number=made[-1])
    return show(
        request,
        visitor,
        "desk/correct.html",
        status=200 if given is None else 422,
        told=wording.entry(kept=visitor.commons, found=entry),
        why=why,
        form=form,
    )


def _mended(
    entry: EntryRecord, why: ReasonForm, form: SlipForm | None, visitor: Visitor
) -> tuple[int, ...] | None:
    """Undo an entry, record the right slip if one is given, and return the new entries' numbers.

    None where a form now says what is amiss.
    """
    commons_id = visitor.commons.commons_id
    reason = why.cleaned_data["reason"]
    hand = Hand(by=visitor.member, clock=system_clock, chance=system_chance)
    try:
        with transaction.atomic():
            if form is None:
                undone = movements.undo_withdrawal(
                    commons_id=commons_id, number=entry.number, reason=reason, hand=hand
                )
                return (undone.number,)
            undone, redone = movements.correct_withdrawal(
                commons_id=commons_id,
                number=entry.number,
                slip=form.as_slip(),
                reason=reason,
                hand=hand,
            )
            return (undone.number, redone.number)
    except StintbookError as error:
        if form is None:
            why.add_error("reason", str(error))
        else:
            refused(form, error)
        return None


def _told(number: int, made: tuple[int, ...]) -> str:
    if len(made) == 1:
        return f"Entry {number} is undone by entry {made[0]}. Both stay in the book."
    return (
        f"Entry {number} is undone by entry {made[0]} and recorded anew as entry {made[1]}."
        " All of them stay in the book."
    )
