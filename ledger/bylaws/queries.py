"""The editions of a commons, and the one in force on a day."""

from datetime import date
from typing import ClassVar, TypeVar

from governance.bylaws import clauses, editions
from ledger.bylaws import columns, models
from ledger.foundation.errors import LedgerError

OfResource = TypeVar("OfResource", clauses.PoolTotal, clauses.Allocation)


class NoSuchClause(LedgerError):
    """The edition in force does not say what an act needs."""

    code: ClassVar[str] = "bylaws.no_such_clause"
    message: ClassVar[str] = (
        "Found no clause of the kind {kind} for {resource} in edition {edition}; accepted is an"
        " edition that has one."
    )


def adopted(*, commons_id: int, up_to: int | None = None) -> editions.Editions:
    """Return the editions adopted, as known up to an entry number."""
    rows = models.Edition.objects.filter(commons_id=commons_id).order_by("in_force_from")
    if up_to is not None:
        rows = rows.filter(entry_number__lte=up_to)
    return columns.adopted(rows)


def in_force(*, commons_id: int, day: date) -> clauses.Book:
    """Return the edition in force on a day.

    :raises governance.bylaws.editions.NoEditionInForce: if none is.
    """
    return editions.in_force(editions=adopted(commons_id=commons_id), day=day)


def quota(*, commons_id: int, resource: str, day: date) -> clauses.PoolTotal:
    """Return the clause in force on a day that sets the allowable of a resource.

    :raises NoSuchClause: if the edition has none.
    :raises governance.bylaws.editions.NoEditionInForce: if none is in force.
    """
    book = in_force(commons_id=commons_id, day=day)
    return _of_resource(book, resource, clauses.PoolTotal, "pool_total")


def allocation(*, commons_id: int, resource: str, day: date) -> clauses.Allocation:
    """Return the clause in force on a day that splits the allowable of a resource.

    :raises NoSuchClause: if the edition has none.
    :raises governance.bylaws.editions.NoEditionInForce: if none is in force.
    """
    book = in_force(commons_id=commons_id, day=day)
    return _of_resource(book, resource, clauses.Allocation, "allocation")


def work_duties(*, commons_id: int, day: date) -> tuple[clauses.WorkDuty, ...]:
    """Return the duties of work in force on a day.

    :raises governance.bylaws.editions.NoEditionInForce: if no edition is.
    """
    book = in_force(commons_id=commons_id, day=day)
    return tuple(clause for clause in book.clauses if isinstance(clause, clauses.WorkDuty))


def _of_resource(
    book: clauses.Book, resource: str, kind: type[OfResource], word: str
) -> OfResource:
    for clause in book.clauses:
        if isinstance(clause, kind) and clause.resource == resource:
            return clause
    raise NoSuchClause(edition=book.edition, kind=word, resource=resource)
