"""The receipt of an entry, to be printed and kept."""

from django.http import HttpRequest, HttpResponse
from django.views.decorators.http import require_safe

from ledger.journal import queries as journal
from ledger.journal import tree
from ledger.pages.desk import wording
from ledger.pages.desk.entries import seen
from ledger.pages.visiting import page, show
from ledger.web.visitors import Visitor


@require_safe
@page
def receipt(request: HttpRequest, visitor: Visitor, number: int) -> HttpResponse:
    """Show a receipt: the amounts, the leaf's hash, and the path from it to the head."""
    commons_id = visitor.commons.commons_id
    found = seen(visitor, number)
    head = journal.head(commons_id=commons_id)
    path = journal.inclusion_proof(commons_id=commons_id, number=number, size=head.size)
    leaf = journal.receipt_leaf(commons_id=commons_id, number=number)
    told = wording.entry(kept=visitor.commons, found=found)
    return show(
        request,
        visitor,
        "desk/receipt.html",
        told=told,
        remains=told.remains if visitor.sees_member(found.subject or visitor.member) else (),
        leaf=tree.leaf_hash(leaf).hex(),
        path=[each.hex() for each in path],
        head=head,
        root=head.root.hex(),
    )
