"""Which edition is in force when."""

import datetime
from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from governance.bylaws import clauses, documents, editions
from governance.periods import DateRange
from tests.governance.bylaws.examples import EXAMPLES

BOOK = documents.read(text=EXAMPLES[0].text, name="example.yaml")
SEASON = DateRange(first=datetime.date(2026, 3, 1), until=datetime.date(2026, 6, 29))


def edition(number: int, first: str, until: str = "9999-12-31") -> clauses.Book:
    days = DateRange(
        first=datetime.date.fromisoformat(first), until=datetime.date.fromisoformat(until)
    )
    return replace(BOOK, edition=number, in_force=days)


def days(first: str, until: str) -> DateRange:
    return DateRange(
        first=datetime.date.fromisoformat(first), until=datetime.date.fromisoformat(until)
    )


def numbers(found: tuple[tuple[clauses.Book, DateRange], ...]) -> list[tuple[int, DateRange]]:
    return [(book.edition, piece) for book, piece in found]


def test_each_ends_where_the_next_begins() -> None:
    kept = editions.Editions(books=(edition(2, "2026-04-10"), edition(1, "2025-03-01")))
    assert [(book.edition, book.in_force) for book in kept.books] == [
        (1, days("2025-03-01", "2026-04-10")),
        (2, days("2026-04-10", "9999-12-31")),
    ]


def test_an_edition_that_ends_by_its_own_word_leaves_a_gap() -> None:
    kept = editions.Editions(
        books=(edition(1, "2025-03-01", "2026-04-01"), edition(2, "2026-04-10"))
    )
    assert numbers(editions.spans(editions=kept, season=SEASON)) == [
        (1, days("2026-03-01", "2026-04-01")),
        (2, days("2026-04-10", "2026-06-29")),
    ]
    with pytest.raises(editions.NoEditionInForce) as refused:
        editions.in_force(editions=kept, day=datetime.date(2026, 4, 5))
    assert refused.value.facts == {"day": datetime.date(2026, 4, 5)}


@pytest.mark.parametrize(
    ("day", "expected"), [("2026-04-09", 1), ("2026-04-10", 2), ("2025-03-01", 1)]
)
def test_the_edition_of_a_day(day: str, expected: int) -> None:
    kept = editions.Editions(books=(edition(1, "2025-03-01"), edition(2, "2026-04-10")))
    found = editions.in_force(editions=kept, day=datetime.date.fromisoformat(day))
    assert found.edition == expected


def test_no_edition_before_the_first() -> None:
    kept = editions.Editions(books=(edition(1, "2025-03-01"),))
    with pytest.raises(editions.NoEditionInForce):
        editions.in_force(editions=kept, day=datetime.date(2025, 2, 28))


def test_no_edition_at_all() -> None:
    none = editions.Editions(books=())
    assert editions.spans(editions=none, season=SEASON) == ()
    with pytest.raises(editions.NoEditionInForce):
        editions.in_force(editions=none, day=SEASON.first)


def test_two_that_begin_together_are_refused() -> None:
    with pytest.raises(editions.EditionsBeginTogether) as refused:
        editions.Editions(
            books=(edition(1, "2025-03-01"), edition(3, "2026-03-01"), edition(2, "2026-03-01"))
        )
    assert refused.value.facts == {
        "first": 3,
        "second": 2,
        "day": datetime.date(2026, 3, 1),
    }


def test_a_season_under_one_edition_is_one_piece() -> None:
    kept = editions.Editions(books=(edition(1, "2025-03-01"), edition(2, "2026-06-29")))
    assert numbers(editions.spans(editions=kept, season=SEASON)) == [(1, SEASON)]


@given(
    firsts=st.sets(st.integers(min_value=-200, max_value=200), max_size=6),
    lengths=st.lists(st.integers(min_value=1, max_value=400), min_size=6, max_size=6),
)
def test_the_pieces_say_of_each_day_what_the_day_says(firsts: set[int], lengths: list[int]) -> None:
    books = []
    for number, (offset, length) in enumerate(zip(firsts, lengths, strict=False), start=1):
        first = SEASON.first + datetime.timedelta(days=offset)
        until = first + datetime.timedelta(days=length)
        books.append(edition(number, first.isoformat(), until.isoformat()))
    kept = editions.Editions(books=tuple(books))
    by_piece = {
        day: book.edition
        for book, piece in editions.spans(editions=kept, season=SEASON)
        for day in piece.days()
    }
    for day in SEASON.days():
        # The edition of a day, counted anew: the last to begin, unless it has ended by then.
        begun = [book for book in books if book.in_force.first <= day]
        last = max(begun, key=lambda book: book.in_force.first, default=None)
        expected = last.edition if last is not None and day < last.in_force.until else None
        assert by_piece.get(day) == expected
