"""Adopted texts turned into the books that the rules read."""

from datetime import date

import pytest

from governance.bylaws import editions
from ledger.bylaws import columns, models
from tests.ledger.book_text import book_text


def _edition(number: int, first: date) -> models.Edition:
    return models.Edition(number=number, text=book_text(edition=number, first=first))


def test_a_text_is_read_once() -> None:
    text = book_text(edition=31)
    first = columns.book(text=text, name="edition 31")
    assert columns.book(text=text, name="edition 31") is first
    assert columns.book(text=text + "\n", name="edition 31") is not first


def test_each_edition_ends_where_the_next_begins() -> None:
    later = _edition(2, date(2026, 5, 1))
    adopted = columns.adopted([later, _edition(1, date(2026, 3, 1))])
    assert [(book.edition, book.in_force.first) for book in adopted.books] == [
        (1, date(2026, 3, 1)),
        (2, date(2026, 5, 1)),
    ]
    assert adopted.books[0].in_force.until == date(2026, 5, 1)


def test_two_of_one_day_cannot_both_be_in_force() -> None:
    day = date(2026, 3, 1)
    with pytest.raises(editions.EditionsBeginTogether):
        columns.adopted([_edition(1, day), _edition(2, day)])
