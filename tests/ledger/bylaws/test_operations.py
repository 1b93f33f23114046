"""The adoption of an edition: one entry that seals the digest of its text."""

import hashlib
from datetime import date
from typing import Any

import pytest

from governance.bylaws import problems
from governance.errors import StintbookError
from ledger.bylaws import models, operations
from ledger.commons import queries as commons_queries
from ledger.foundation import transactions
from ledger.foundation.hands import Hand
from tests.ledger import builders, checks
from tests.ledger.book_text import book_text


def _adopt(commons_id: int, hand: Hand, **changes: Any) -> None:
    operations.adopt(commons_id=commons_id, text=book_text(**changes), name="book.yaml", hand=hand)


def test_outside_a_transaction_nothing_is_written(hand: Hand) -> None:
    with pytest.raises(transactions.NoTransaction, match="adopt"):
        _adopt(1, hand)


@pytest.mark.django_db
class TestAdopt:
    """Text, digest, dates and votes."""

    def test_one_entry_seals_digest_dates_and_votes(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        with checks.appends(commons_id) as entries:
            _adopt(commons_id, hand)
        (entry,) = entries
        assert entry.kind == "edition_adopted"
        assert entry.facts == {
            "edition": 1,
            "digest": hashlib.sha256(book_text().encode()).hexdigest(),
            "from": "2026-03-01",
            "adopted_on": "2026-02-14",
            "by": "assembly",
            "for": 9,
            "against": 1,
            "abstained": 2,
        }

    def test_the_text_stands_beside_the_entry(self, hand: Hand) -> None:
        row = models.Edition.objects.get(commons_id=builders.governed(hand=hand))
        assert row.text == book_text()
        assert row.digest == hashlib.sha256(row.text.encode()).hexdigest()
        assert (row.number, row.in_force_from, row.entry_number) == (1, date(2026, 3, 1), 10)

    def test_an_unreadable_book_is_refused_with_line_and_column(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        broken = book_text().replace("resource: clams, by: shares", "resource: clams, by: luck")
        line = next(at for at, text in enumerate(broken.splitlines(), 1) if "by: luck" in text)
        column = broken.splitlines()[line - 1].index("luck") + 1
        with checks.refuses(problems.UnreadableBook, f"line {line}, column {column}", "luck"):
            operations.adopt(commons_id=commons_id, text=broken, name="book.yaml", hand=hand)

    @pytest.mark.parametrize(
        ("edition", "first"),
        [
            (1, date(2026, 5, 1)),  # the number again
            (2, date(2026, 3, 1)),  # the day again
            (2, date(2026, 2, 28)),  # a day before
        ],
    )
    def test_one_that_does_not_follow_is_refused(
        self, edition: int, first: date, hand: Hand
    ) -> None:
        commons_id = builders.governed(hand=hand)
        words = (f"edition {edition} from {first}", "above 1", "after 2026-03-01")
        with checks.refuses(operations.EditionOutOfOrder, *words):
            _adopt(commons_id, hand, edition=edition, first=first)

    def test_a_number_may_be_passed_over(self, hand: Hand) -> None:
        commons_id = builders.governed(hand=hand)
        with checks.appends(commons_id):
            _adopt(commons_id, hand, edition=7, first=date(2026, 3, 2))

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            (
                {"zone": "Europe/Oslo"},
                operations.BookOfAnotherCommons,
                ("time zone 'Europe/Oslo'", "'Europe/Dublin'"),
            ),
            ({"money": "NOK"}, operations.BookOfAnotherCommons, ("money 'NOK'", "'EUR'")),
            (
                {"base": "kg"},
                operations.BookOfAnotherCommons,
                ("units of mullet 'kg in kg'", "'kg in g'"),
            ),
            (
                {"spawning": "iner_flats"},
                operations.BookOfAnotherCommons,
                ("clause 4.1 the zone 'iner_flats'", "inner_flats, outer_bay"),
            ),
        ],
    )
    def test_a_book_of_another_commons_is_refused(
        self,
        changes: dict[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        hand: Hand,
    ) -> None:
        commons_id = builders.people(hand=hand)
        with checks.refuses(error, *words):
            _adopt(commons_id, hand, **changes)

    def test_a_book_of_a_resource_not_kept_is_refused(self, hand: Hand) -> None:
        commons_id = builders.found(hand=hand, resources=builders.RESOURCES[:1])
        with checks.refuses(commons_queries.UnknownResource, "'clams'", "mullet"):
            _adopt(commons_id, hand)
