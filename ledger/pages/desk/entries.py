"""The entries of the journal: the list, newest first, and each by itself."""

from django.http import Http404, HttpRequest, HttpResponse
from django.views.decorators.http import require_safe

from ledger.commons import queries as commons
from ledger.journal import queries as journal
from ledger.journal.leaves import EntryRecord
from ledger.movements import queries as movements
from ledger.pages.desk import wording
from ledger.pages.visiting import page, show
from ledger.web.visitors import NotHere, Visitor

PAGE = 50


@require_safe
@page
def entries(request: HttpRequest, visitor: Visitor) -> HttpResponse:
    """List entries, newest first, from below a number on; of one member or one kind if asked."""
    head = journal.head(commons_id=visitor.commons.commons_id)
    below = _number(request, "below") or head.size + 1
    member = _number(request, "member")
    kind = request.GET.get("kind", "")
    if member is not None and not visitor.sees_entry_about(member):
        raise NotHere(what="member")
    everybody = visitor.sees_entry_about(0)
    found = journal.newest(
        commons_id=visitor.commons.commons_id,
        below=below,
        limit=PAGE,
        kind=kind or None,
        subject=member,
        own=None if everybody else visitor.member,
    )
    shown = [each for each in found if visitor.sees_entry(kind=each.kind, subject=each.subject)]
    return show(
        request,
        visitor,
        "desk/entries.html",
        listed=wording.entries(kept=visitor.commons, found=shown),
        member=member,
        kind=kind,
        kinds=wording.KINDS.items(),
        everybody=everybody,
        below=found[-1].number if len(found) == PAGE and found[-1].number > 1 else None,
    )


@require_safe
@page
def entry(request: HttpRequest, visitor: Visitor, number: int) -> HttpResponse:
    """Show one entry whole: who wrote it, when, what it moved, and what undid it."""
    found = seen(visitor, number)
    resources = commons.resources(commons_id=visitor.commons.commons_id)
    moved = [
        {
            "account": each.account,
            "resource": resources[each.resource].name
            if each.resource in resources
            else each.resource,
            "amount": wording.posting(
                resource=each.resource, unit=each.unit, amount=each.amount, resources=resources
            ),
        }
        for each in found.postings
    ]
    may_correct = (
        found.kind == movements.WITHDRAWAL
        and found.reversed_by is None
        and visitor.holds("secretary")
    )
    return show(
        request,
        visitor,
        "desk/entry.html",
        told=wording.entry(kept=visitor.commons, found=found),
        moved=moved,
        may_correct=may_correct,
    )


def seen(visitor: Visitor, number: int) -> EntryRecord:
    """Return an entry that the visitor may see.

    :raises NotHere: if there is none of this number for them.
    """
    try:
        found = journal.entry(commons_id=visitor.commons.commons_id, number=number)
    except journal.EntryNotFound as error:
        raise NotHere(what="entry") from error
    if not visitor.sees_entry(kind=found.kind, subject=found.subject):
        raise NotHere(what="entry")
    return found


def _number(request: HttpRequest, name: str) -> int | None:
    """Return a number that the address names; None where it names none."""
    text = request.GET.get(name, "").strip()
    if not text:
        return None
    if not text.isdecimal() or len(text) > 15:
        raise Http404("No such number.")
    return int(text)
