"""The adoption of an edition."""

from typing import ClassVar

from governance.bylaws import clauses, documents
from ledger.bylaws import models, queries
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.foundation import transactions
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal.leaves import Receipt


class EditionOutOfOrder(LedgerError):
    """An edition's number or first day does not follow the last one's."""

    code: ClassVar[str] = "bylaws.edition_out_of_order"
    message: ClassVar[str] = (
        "Found edition {found} from {found_from}; accepted are a number above {last} and a first"
        " day after {last_from}."
    )


class BookOfAnotherCommons(LedgerError):
    """An edition measures things otherwise than the commons does."""

    code: ClassVar[str] = "bylaws.book_of_another_commons"
    message: ClassVar[str] = (
        "Found {what} {found!r}; accepted is what the commons keeps: {accepted!r}."
    )


@transactions.required
def adopt(*, commons_id: int, text: str, name: str, hand: Hand) -> Receipt:
    """Record that an edition was adopted; its text stands beside the entry that seals its digest.

    :raises governance.bylaws.documents.UnreadableBook: if the text is not a book.
    :raises EditionOutOfOrder: if it does not follow the editions adopted before.
    :raises BookOfAnotherCommons: if its zone, money or units are not the commons'.
    :raises ledger.commons.queries.UnknownResource: if it speaks of a resource not kept.
    """
    journal.hold(commons_id=commons_id)
    book = documents.read(text=text, name=name)
    _check_order(commons_id, book)
    _check_measures(commons_id, book)
    votes = book.adopted
    receipt = commons.enter(
        commons_id=commons_id,
        kind="edition_adopted",
        facts={
            "edition": book.edition,
            "digest": book.digest,
            "from": book.in_force.first.isoformat(),
            "adopted_on": votes.on.isoformat(),
            "by": votes.by,
            "for": votes.votes_for,
            "against": votes.votes_against,
            "abstained": votes.votes_abstained,
        },
        hand=hand,
    )
    models.Edition.objects.create(
        commons_id=commons_id,
        number=book.edition,
        text=text,
        digest=book.digest,
        in_force_from=book.in_force.first,
        entry_number=receipt.number,
    )
    return receipt


def _check_order(commons_id: int, book: clauses.Book) -> None:
    before = queries.adopted(commons_id=commons_id).books
    if not before:
        return
    last = before[-1]
    if book.edition <= last.edition or book.in_force.first <= last.in_force.first:
        raise EditionOutOfOrder(
            found=book.edition,
            found_from=book.in_force.first,
            last=last.edition,
            last_from=last.in_force.first,
        )


def _check_measures(commons_id: int, book: clauses.Book) -> None:
    kept = commons_queries.commons(commons_id=commons_id)
    for what, found, accepted in (
        ("the time zone", book.zone, kept.zone),
        ("the money", book.money, kept.money),
    ):
        if found != accepted:
            raise BookOfAnotherCommons(what=what, found=found, accepted=accepted)
    for units in book.resources:
        resource = commons_queries.resource(commons_id=commons_id, code=units.resource)
        if (units.unit, units.base) != (resource.unit, resource.base):
            raise BookOfAnotherCommons(
                what=f"the units of {units.resource}",
                found=f"{units.unit} in {units.base}",
                accepted=f"{resource.unit} in {resource.base}",
            )
    _check_zones(commons_id, book)


def _check_zones(commons_id: int, book: clauses.Book) -> None:
    """Refuse a closed window over a ground that nobody knows: it would close nothing."""
    zones = commons_queries.zones(commons_id=commons_id).values()
    for clause in book.clauses:
        if not isinstance(clause, clauses.ClosedWindow):
            continue
        kept = [zone.code for zone in zones if zone.resource == clause.resource]
        for zone in clause.zones:
            if zone not in kept:
                raise BookOfAnotherCommons(
                    what=f"in clause {clause.head.id} the zone",
                    found=zone,
                    accepted=", ".join(kept),
                )
