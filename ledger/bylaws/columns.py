"""Adopted texts as the rules read them."""

import functools
from collections.abc import Iterable

from governance.bylaws import clauses, documents, editions
from ledger.bylaws import models


@functools.lru_cache(maxsize=64)
def book(*, text: str, name: str) -> clauses.Book:
    """Return the book of an adopted text; a text reads the same for ever, so it is kept."""
    return documents.read(text=text, name=name)


def adopted(rows: Iterable[models.Edition]) -> editions.Editions:
    """Return the editions that the rows make."""
    return editions.Editions(
        books=tuple(book(text=row.text, name=f"edition {row.number}") for row in rows)
    )
