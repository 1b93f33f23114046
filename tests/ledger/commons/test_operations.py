"""The writers of the commons: one entry each, and what they refuse."""

from dataclasses import replace
from datetime import UTC, date, datetime
from fractions import Fraction
from typing import Any

import pytest

from governance import quantities
from governance.errors import StintbookError
from governance.periods import OPEN_END, DateRange, EmptyRange
from ledger.commons import models, operations, queries, writing
from ledger.foundation import transactions
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal import queries as journal_queries
from tests.conftest import TickingClock
from tests.ledger import builders, checks

MAY = DateRange(first=date(2026, 5, 4), until=date(2026, 5, 19))


def _resource(**changes: Any) -> operations.NewResource:
    return replace(builders.RESOURCES[0], **changes)


@pytest.mark.parametrize(
    "operation",
    [
        operations.enter,
        operations.found,
        operations.admit,
        operations.give_role,
        operations.suspend,
        operations.record_order,
    ],
)
def test_outside_a_transaction_nothing_is_written(operation: Any) -> None:
    with pytest.raises(transactions.NoTransaction, match=operation.__name__):
        operation()


@pytest.mark.django_db
class TestFound:
    """A commons begins with one entry, which says what it keeps."""

    def test_the_first_entry_says_what_is_kept(self, hand: Hand) -> None:
        commons_id = builders.found(hand=hand)
        (entry,) = journal_queries.entries(commons_id=commons_id)
        assert (entry.number, entry.kind, entry.by) == (1, "commons_founded", builders.SECRETARY)
        assert entry.facts == {
            "name": "Reed Bank Commons",
            "demo": False,
            "zone": "Europe/Dublin",
            "money": "EUR",
            "resources": [
                {
                    "code": "mullet",
                    "name": "Bay mullet",
                    "unit": "kg",
                    "base": "g",
                    "zones": [
                        {"code": "inner_flats", "name": "Inner flats"},
                        {"code": "outer_bay", "name": "Outer bay"},
                    ],
                },
                {
                    "code": "clams",
                    "name": "Clams",
                    "unit": "kg",
                    "base": "g",
                    "zones": [
                        {"code": "mill_reach", "name": "Mill Reach"},
                        {"code": "pier_sand", "name": "Pier Sand"},
                    ],
                },
            ],
        }
        assert entry.postings == ()

    def test_two_commons_have_two_journals(self, hand: Hand) -> None:
        one = builders.found(hand=hand, slug="one")
        other = builders.people(hand=hand, slug="other")
        assert journal_queries.head(commons_id=one).size == 1
        assert journal_queries.head(commons_id=other).size == 9
        assert queries.members(commons_id=one) == {}

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            ({"slug": "reed bank"}, operations.UnusableCode, ("'reed bank'", "1 to 60")),
            ({"slug": ""}, operations.UnusableCode, ("''", "letters")),
            ({"slug": "taken"}, operations.AlreadyKept, ("commons taken", "once")),
            ({"name": ""}, writing.UnusableText, ("''", "1 to 200 signs")),
            ({"name": "n" * 201}, writing.UnusableText, ("nnn", "1 to 200 signs")),
            ({"name": "a\x00b"}, writing.UnusableText, ("x00", "1 to 200 signs")),
            ({"name": "a\ud800"}, writing.UnusableText, ("ud800", "1 to 200 signs")),
            ({"zone": "Europe/Tarrin"}, operations.UnknownTimeZone, ("Tarrin", "Europe/Dublin")),
            ({"zone": "Europe"}, operations.UnknownTimeZone, ("'Europe'", "Europe/Dublin")),
            ({"zone": "../etc"}, operations.UnknownTimeZone, ("../etc", "Europe/Dublin")),
            ({"zone": ""}, operations.UnknownTimeZone, ("''", "Europe/Dublin")),
            ({"money": "XYZ"}, quantities.UnknownUnit, ("XYZ", "EUR")),
            (
                {"resources": [_resource(), _resource(zones=())]},
                operations.AlreadyKept,
                ("resource mullet", "once"),
            ),
            (
                {"resources": [_resource(zones=(("bar", "Bar"), ("bar", "Bar")))]},
                operations.AlreadyKept,
                ("zone bar", "once"),
            ),
            # An account is named resource:zone and so on; a colon would mix up two of them.
            (
                {"resources": [_resource(code="mullet:x")]},
                operations.UnusableCode,
                ("'mullet:x'", "1 to 40"),
            ),
            (
                {"resources": [_resource(code="m" * 41)]},
                operations.UnusableCode,
                ("mmm", "1 to 40"),
            ),
            (
                {"resources": [_resource(zones=(("", "Bar"),))]},
                operations.UnusableCode,
                ("zone", "1 to 40"),
            ),
            (
                {"resources": [_resource(name="")]},
                writing.UnusableText,
                ("resource mullet", "1 to 120"),
            ),
            (
                {"resources": [_resource(unit="bucket")]},
                quantities.UnknownUnit,
                ("bucket", "kg"),
            ),
            ({"resources": [_resource(base="mL")]}, quantities.UnitMismatch, ("kg", "mL")),
        ],
    )
    def test_refused(
        self,
        changes: dict[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        hand: Hand,
    ) -> None:
        builders.found(hand=hand, slug="taken")
        values: dict[str, Any] = {
            "slug": "reed-bank",
            "name": "Reed Bank",
            "zone": builders.ZONE,
            "money": "EUR",
            "resources": builders.RESOURCES,
            "is_demo": False,
        }
        with checks.refuses(error, *words):
            operations.found(hand=hand, **(values | changes))


@pytest.mark.django_db
class TestEnter:
    """An entry that happens as it is written."""

    def test_its_day_is_the_day_of_the_commons(
        self, hand: Hand, ticking_clock: TickingClock
    ) -> None:
        commons_id = builders.found(hand=hand)
        # Half past eleven at night in UTC is half past midnight of an Irish summer's day.
        ticking_clock.set(datetime(2026, 6, 30, 23, 30, tzinfo=UTC))
        with checks.appends(commons_id) as entries:
            receipt = operations.enter(commons_id=commons_id, kind="note", facts={}, hand=hand)
        assert [entry.day for entry in entries] == [date(2026, 7, 1)]
        assert entries[0].occurred_at == datetime(2026, 6, 30, 23, 30, tzinfo=UTC)
        assert receipt.number == 2

    def test_of_an_unknown_commons(self, hand: Hand) -> None:
        builders.found(hand=hand)
        with checks.refuses(queries.UnknownCommons, "999", "reed-bank"):
            operations.enter(commons_id=999, kind="note", facts={}, hand=hand)


@pytest.mark.django_db
class TestAdmit:
    """Members come in with a class and shares; the journal knows their numbers alone."""

    def test_one_entry_for_each_member(self, hand: Hand) -> None:
        commons_id = builders.found(hand=hand)
        with checks.appends(commons_id, count=4) as entries:
            operations.admit(commons_id=commons_id, admissions=builders.ADMISSIONS, hand=hand)
        assert [entry.subject for entry in entries] == [1, 2, 3, 4]
        assert {entry.kind for entry in entries} == {"member_admitted"}
        assert entries[2].facts == {
            "household": 3,
            "class": "licensed",
            "shares": {"mullet": "3/2", "clams": "2/1"},
            "from": "2026-03-01",
        }
        assert entries[3].facts["shares"] == {}
        assert models.Member.objects.get(number=3).entry_number == entries[2].number

    def test_no_leaf_holds_a_name(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        assert queries.members(commons_id=commons_id)[3].name == "Member 3"
        for number in range(1, 10):
            leaf = journal_queries.receipt_leaf(commons_id=commons_id, number=number)
            assert b"Member" not in leaf

    def test_a_household_may_come_in_one_go_in_any_order(self, hand: Hand) -> None:
        commons_id = builders.found(hand=hand)
        pair = [builders.admission(8, household=7), builders.admission(7)]
        operations.admit(commons_id=commons_id, admissions=pair, hand=hand)
        assert queries.household_of(commons_id=commons_id, household=7) == {7, 8}

    @pytest.mark.parametrize(
        ("admission", "error", "words"),
        [
            (builders.admission(2), operations.AlreadyKept, ("member number 2", "once")),
            (builders.admission(0), writing.UnusableMemberNumber, ("number 0", "1 to 2147483647")),
            (builders.admission(-1), writing.UnusableMemberNumber, ("number -1", "1 to")),
            (builders.admission(2**31), writing.UnusableMemberNumber, (2**31, "1 to")),
            (
                builders.admission(9, household=77),
                writing.UnknownHousehold,
                ("household 77", "member 9", "first member"),
            ),
            (builders.admission(9, mullet=0), writing.UnusableShare, ("share 0", "above zero")),
            (builders.admission(9, clams=-2), writing.UnusableShare, ("share -2", "above zero")),
            (
                builders.admission(9, clams=Fraction(1, 2**63)),
                writing.UnusableShare,
                ("1/9223372036854775808", "64 bits"),
            ),
            (
                replace(builders.admission(9), shares=(("eels", Fraction(1)),)),
                queries.UnknownResource,
                ("eels", "clams, mullet"),
            ),
            (
                replace(builders.admission(9), shares=(("clams", Fraction(1)),) * 2),
                operations.AlreadyKept,
                ("clams among the shares of member 9", "once"),
            ),
            (
                builders.admission(9, membership_class=""),
                writing.UnusableText,
                ("the class of member 9", "1 to 40"),
            ),
            (
                replace(builders.admission(9), name=""),
                writing.UnusableText,
                ("the name of member 9", "1 to 200"),
            ),
            (
                replace(builders.admission(9), draw_point="b" * 121),
                writing.UnusableText,
                ("the draw point of member 9", "0 to 120"),
            ),
        ],
    )
    def test_one_that_is_refused_keeps_all_out(
        self,
        admission: operations.Admission,
        error: type[StintbookError],
        words: tuple[object, ...],
        hand: Hand,
    ) -> None:
        commons_id = builders.people(hand=hand)
        batch = [builders.admission(20, mullet=1), admission]
        with checks.refuses(error, *words):
            operations.admit(commons_id=commons_id, admissions=batch, hand=hand)

    def test_a_number_twice_in_one_go(self, hand: Hand) -> None:
        commons_id = builders.found(hand=hand)
        with checks.refuses(operations.AlreadyKept, "member number 5"):
            operations.admit(
                commons_id=commons_id, admissions=[builders.admission(5)] * 2, hand=hand
            )


@pytest.mark.django_db
class TestGiveRole:
    """Offices are dated, and beside membership."""

    def test_one_entry(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        with checks.appends(commons_id) as entries:
            operations.give_role(
                commons_id=commons_id, member=2, role="auditor", during=MAY, hand=hand
            )
        (entry,) = entries
        assert (entry.kind, entry.subject) == ("role_given", 2)
        assert entry.facts == {"role": "auditor", "from": "2026-05-04", "until": "2026-05-19"}

    def test_refused(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        with checks.refuses(operations.UnknownRole, "'king'", "secretary, monitor, board, auditor"):
            operations.give_role(
                commons_id=commons_id, member=1, role="king", during=MAY, hand=hand
            )
        with checks.refuses(operations.UnknownMember, "77", "admitted"):
            operations.give_role(
                commons_id=commons_id, member=77, role="board", during=MAY, hand=hand
            )
        with pytest.raises(EmptyRange):
            DateRange(first=MAY.first, until=MAY.first)


@pytest.mark.django_db
class TestSuspend:
    """A suspension is a dated fact; its reason can be erased."""

    def test_one_entry(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        with checks.appends(commons_id) as entries:
            operations.suspend(
                commons_id=commons_id,
                member=3,
                clause="ladder.overdraw",
                during=MAY,
                reason="third time",
                hand=hand,
            )
        (entry,) = entries
        assert (entry.kind, entry.subject, entry.texts) == (
            "suspension",
            3,
            {"reason": "third time"},
        )
        assert entry.facts == {
            "clause": "ladder.overdraw",
            "from": "2026-05-04",
            "until": "2026-05-19",
        }

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            ({"member": 77}, operations.UnknownMember, ("77", "admitted")),
            ({"clause": ""}, writing.UnusableText, ("''", "1 to 80")),
            ({"clause": "c" * 81}, writing.UnusableText, ("ccc", "1 to 80")),
        ],
    )
    def test_refused(
        self,
        changes: dict[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        hand: Hand,
    ) -> None:
        commons_id = builders.people(hand=hand)
        values: dict[str, Any] = {
            "member": 3,
            "clause": "ladder.overdraw",
            "during": MAY,
            "reason": "",
        }
        with checks.refuses(error, *words):
            operations.suspend(commons_id=commons_id, hand=hand, **(values | changes))


@pytest.mark.django_db
class TestRecordOrder:
    """An authority's order closes zones; it is never empty by mistake."""

    ORDER: dict[str, Any] = {  # noqa: RUF012 (never changed)
        "authority": "Shellfish-water authority",
        "resource": "clams",
        "zones": ("mill_reach", "pier_sand"),
        "during": MAY,
        "notice": "Test of 3 May failed.",
    }

    def test_one_entry(self, hand: Hand) -> None:
        commons_id = builders.people(hand=hand)
        with checks.appends(commons_id) as entries:
            operations.record_order(commons_id=commons_id, hand=hand, **self.ORDER)
        (entry,) = entries
        assert entry.facts == {
            "resource": "clams",
            "zones": ["mill_reach", "pier_sand"],
            "from": "2026-05-04",
            "until": "2026-05-19",
        }
        assert entry.texts == {
            "authority": "Shellfish-water authority",
            "notice": "Test of 3 May failed.",
        }

    @pytest.mark.parametrize(
        ("changes", "error", "words"),
        [
            ({"resource": "eels"}, queries.UnknownResource, ("eels", "clams, mullet")),
            ({"zones": ()}, operations.UnknownZone, ("''", "mill_reach, pier_sand")),
            (
                {"zones": ("mill_reach", "outer_bay")},
                operations.UnknownZone,
                ("outer_bay", "of clams", "mill_reach, pier_sand"),
            ),
            ({"authority": ""}, writing.UnusableText, ("authority", "1 to 200")),
            ({"authority": "a" * 201}, writing.UnusableText, ("authority", "1 to 200")),
        ],
    )
    def test_refused(
        self,
        changes: dict[str, Any],
        error: type[StintbookError],
        words: tuple[str, ...],
        hand: Hand,
    ) -> None:
        commons_id = builders.people(hand=hand)
        with checks.refuses(error, *words):
            operations.record_order(commons_id=commons_id, hand=hand, **(self.ORDER | changes))

    def test_a_resource_without_zones_takes_no_order(self, hand: Hand) -> None:
        commons_id = builders.found(hand=hand, resources=[_resource(zones=())])
        with checks.refuses(operations.UnknownZone, "accepted are none"):
            operations.record_order(
                commons_id=commons_id,
                hand=hand,
                **(self.ORDER | {"resource": "mullet", "zones": ("bar",)}),
            )


@pytest.mark.django_db
def test_a_stopped_journal_takes_nobody_in(hand: Hand) -> None:
    commons_id = builders.people(hand=hand)
    journal.stop(commons_id=commons_id, why="entry 3 was altered")
    with checks.refuses(journal.JournalStopped, "entry 3 was altered"):
        operations.admit(commons_id=commons_id, admissions=[builders.admission(9)], hand=hand)
    with checks.refuses(journal.JournalStopped, "entry 3 was altered"):
        during = DateRange(first=MAY.first, until=OPEN_END)
        operations.give_role(
            commons_id=commons_id, member=1, role="auditor", during=during, hand=hand
        )
