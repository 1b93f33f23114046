"""Which edition of a bylaw book is in force when."""

from collections.abc import Iterable
from dataclasses import dataclass, replace
from datetime import date
from itertools import pairwise
from typing import ClassVar

from governance.bylaws.clauses import Book
from governance.errors import StintbookError
from governance.periods import DateRange


class EditionsBeginTogether(StintbookError):
    """Two editions begin on one day, so that neither can be the one in force."""

    code: ClassVar[str] = "bylaws.editions_begin_together"
    message: ClassVar[str] = "Editions {first} and {second} both begin on {day}."


class NoEditionInForce(StintbookError):
    """No edition is in force on a day."""

    code: ClassVar[str] = "bylaws.no_edition_in_force"
    message: ClassVar[str] = "No edition of the bylaw book is in force on {day}."


@dataclass(frozen=True, slots=True, kw_only=True)
class Editions:
    """The editions of a commons' book in order of days; each ends where the next begins.

    An edition that ends earlier by its own word leaves a gap, which is nobody's mistake.

    :raises EditionsBeginTogether: if two begin on the same day.
    """

    books: tuple[Book, ...]

    def __post_init__(self) -> None:
        object.__setattr__(self, "books", tuple(_in_turn(self.books)))


def in_force(*, editions: Editions, day: date) -> Book:
    """Return the edition in force on a day.

    :raises NoEditionInForce: if there is none.
    """
    for book in editions.books:
        if book.in_force.holds(day):
            return book
    raise NoEditionInForce(day=day)


def spans(*, editions: Editions, season: DateRange) -> tuple[tuple[Book, DateRange], ...]:
    """Return the pieces of a season in order, each with the edition in force on it.

    Days on which no edition is in force belong to no piece.
    """
    return tuple(
        (book, _shared(book.in_force, season))
        for book in editions.books
        if book.in_force.overlaps(season)
    )


def _in_turn(books: Iterable[Book]) -> Iterable[Book]:
    ordered = sorted(books, key=lambda book: book.in_force.first)
    for earlier, later in pairwise(ordered):
        yield _ending_before(earlier, later)
    yield from ordered[-1:]


def _ending_before(earlier: Book, later: Book) -> Book:
    first, next_first = earlier.in_force.first, later.in_force.first
    if first == next_first:
        raise EditionsBeginTogether(first=earlier.edition, second=later.edition, day=first)
    until = min(earlier.in_force.until, next_first)
    return replace(earlier, in_force=DateRange(first=first, until=until))


def _shared(one: DateRange, other: DateRange) -> DateRange:
    return DateRange(first=max(one.first, other.first), until=min(one.until, other.until))
