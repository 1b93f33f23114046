"""Which edition is in force when, as known at an entry, and what it says."""

from datetime import date
from fractions import Fraction

import pytest

from governance.bylaws import editions
from ledger.bylaws import operations, queries
from ledger.foundation.hands import Hand
from tests.ledger import builders, checks
from tests.ledger.book_text import book_text

MAY_DAY = date(2026, 5, 1)


@pytest.fixture
def commons_id(hand: Hand) -> int:
    """A commons with a first edition from 1 March 2026 and a second from 1 May."""
    governed = builders.governed(hand=hand)
    text = book_text(edition=2, first=MAY_DAY, approvals=3, instead="")
    operations.adopt(commons_id=governed, text=text, name="book.yaml", hand=hand)
    return governed


@pytest.mark.django_db
class TestInForce:
    """An edition is in force from its first day to the next one's."""

    def test_by_day(self, commons_id: int) -> None:
        found = [
            queries.in_force(commons_id=commons_id, day=day).edition
            for day in (date(2026, 3, 1), date(2026, 4, 30), MAY_DAY, date(2030, 1, 1))
        ]
        assert found == [1, 1, 2, 2]

    def test_before_the_first_there_is_none(self, commons_id: int) -> None:
        with checks.refuses(editions.NoEditionInForce, "2026-02-28"):
            queries.in_force(commons_id=commons_id, day=date(2026, 2, 28))

    def test_as_known_at_an_entry(self, commons_id: int) -> None:
        # Entries 1 to 9 make the commons and its people; 10 and 11 adopt the two editions.
        known = [
            [book.edition for book in queries.adopted(commons_id=commons_id, up_to=up_to).books]
            for up_to in (9, 10, 11, None)
        ]
        assert known == [[], [1], [1, 2], [1, 2]]
        first = queries.adopted(commons_id=commons_id, up_to=10).books[0]
        # What is known later to end it was not known then.
        assert first.in_force.holds(date(2027, 1, 1))


@pytest.mark.django_db
class TestClauses:
    """What acts ask the edition in force for."""

    def test_the_quota_of_a_resource(self, commons_id: int) -> None:
        earlier = queries.quota(commons_id=commons_id, resource="mullet", day=date(2026, 3, 1))
        later = queries.quota(commons_id=commons_id, resource="mullet", day=MAY_DAY)
        assert (earlier.head.id, earlier.approvals, earlier.review_days) == ("quota.mullet", 2, 45)
        assert (later.approvals, later.confirm_by) == (3, "board")

    def test_the_allocation_of_a_resource(self, commons_id: int) -> None:
        clause = queries.allocation(commons_id=commons_id, resource="mullet", day=MAY_DAY)
        assert (clause.head.id, clause.reserve) == ("2.1", Fraction(2, 100))

    def test_a_clause_that_is_not_there(self, commons_id: int) -> None:
        with checks.refuses(queries.NoSuchClause, "pool_total", "eels", "edition 1"):
            queries.quota(commons_id=commons_id, resource="eels", day=date(2026, 3, 1))
        with checks.refuses(queries.NoSuchClause, "allocation", "eels", "edition 2"):
            queries.allocation(commons_id=commons_id, resource="eels", day=MAY_DAY)

    def test_the_duties_of_work(self, commons_id: int) -> None:
        (earlier,) = queries.work_duties(commons_id=commons_id, day=date(2026, 3, 1))
        (later,) = queries.work_duties(commons_id=commons_id, day=MAY_DAY)
        assert (earlier.head.id, earlier.days) == ("6.1", Fraction(2))
        assert earlier.day_minutes == 6 * 60
        assert earlier.instead is not None
        assert later.instead is None
