"""Entries, receipts and corrections: who sees what, and what stays."""

from datetime import date

import pytest
from django.db import transaction
from django.test import Client

from ledger.commons import operations as commons
from ledger.foundation.clocks import Chance
from ledger.journal import queries as journal
from ledger.journal import tree
from tests.conftest import TickingClock
from tests.ledger import builders
from tests.ledger.builders import BOARD, MONITOR, SECRETARY
from tests.ledger.pages.desk.conftest import NOW, SignIn
from tests.ledger.pages.desk.test_recording import GOOD, plain, size

ENTRIES = "/c/reed-bank/entries/"


@pytest.fixture
def landed(reed_bank: int, chance: Chance) -> int:
    """A slip of member 1, 10 kg of mullet; the number of its entry."""
    hand = builders.hand(clock=TickingClock(NOW), chance=chance)
    slip = builders.slip("s1", member=1, day=date(2026, 3, 2), note="By lantern")
    (receipt,) = builders.land(commons_id=reed_bank, hand=hand, slips=[slip])
    return receipt.number


@pytest.mark.parametrize(
    ("visitor", "seen"),
    [(1, True), (SECRETARY, True), (MONITOR, True), (BOARD[1], True)],
)
def test_officers_and_the_member_see_an_entry(
    signed_in: SignIn, landed: int, visitor: int, seen: bool
) -> None:
    client = signed_in(visitor)
    for tail in ("", "receipt/"):
        page = client.get(f"{ENTRIES}{landed}/{tail}")
        assert page.status_code == 200
        assert "10 kg of Bay mullet (10,000 g)" in plain(page)


def test_a_member_without_office_sees_their_own_and_common_entries_alone(
    signed_in: SignIn, reed_bank: int, landed: int, chance: Chance
) -> None:
    hand = builders.hand(clock=TickingClock(NOW), chance=chance)
    with transaction.atomic():
        commons.admit(commons_id=reed_bank, admissions=[builders.admission(5)], hand=hand)
    client = signed_in(5)
    assert client.get(f"{ENTRIES}{landed}/").status_code == 404
    assert client.get(f"{ENTRIES}{landed}/receipt/").status_code == 404
    assert client.get(f"{ENTRIES}?member=1").status_code == 404
    assert "10 kg of Bay mullet" not in plain(client.get(ENTRIES))
    assert client.get("/c/reed-bank/members/").status_code == 404
    assert client.get(f"{ENTRIES}{landed}/correct/").status_code == 403
    assert client.get(f"{ENTRIES}1/").status_code == 200


def test_the_list_is_newest_first_and_leads_on(signed_in: SignIn, landed: int) -> None:
    client = signed_in(SECRETARY)
    listed = client.get(ENTRIES).context["listed"]
    numbers = [each.entry.number for each in listed]
    assert numbers == sorted(numbers, reverse=True)
    assert numbers[0] == landed
    below = client.get(f"{ENTRIES}?below=3").context["listed"]
    assert [each.entry.number for each in below] == [2, 1]
    only = client.get(f"{ENTRIES}?kind=withdrawal&member=1").context["listed"]
    assert [each.entry.number for each in only] == [landed]
    assert "No entry fits" in plain(client.get(f"{ENTRIES}?kind=withdrawal&member=2"))


def test_a_receipt_proves_its_entry(signed_in: SignIn, reed_bank: int, landed: int) -> None:
    shown = signed_in(1).get(f"{ENTRIES}{landed}/receipt/").context
    head = journal.head(commons_id=reed_bank)
    assert tree.verify_inclusion(
        leaf=bytes.fromhex(shown["leaf"]),
        index=landed - 1,
        size=head.size,
        proof=[bytes.fromhex(each) for each in shown["path"]],
        root=head.root,
    )


def test_a_correction_keeps_both_and_asks_why(
    signed_in: SignIn, reed_bank: int, landed: int
) -> None:
    client = signed_in(SECRETARY)
    address = f"{ENTRIES}{landed}/correct/"
    right = {**GOOD, "slip": "s1", "amount_1": "11"}
    refused = client.post(address, right)
    assert refused.status_code == 422
    assert "A reason is needed" in plain(refused)
    assert size(reed_bank) == landed
    page = client.post(address, {**right, "reason": "misread"}, follow=True)
    assert size(reed_bank) == landed + 2
    assert "11 kg of Bay mullet" in plain(page)
    first = journal.entry(commons_id=reed_bank, number=landed)
    assert first.reversed_by == landed + 1
    assert "misread" in plain(client.get(f"{ENTRIES}{landed + 1}/"))
    assert "10 kg of Bay mullet" in plain(client.get(f"{ENTRIES}{landed}/"))
    again = client.post(address, {**right, "reason": "once more"}, follow=True)
    assert "was undone before" in plain(again)
    assert size(reed_bank) == landed + 2


def test_only_undoing_leaves_nothing_taken(signed_in: SignIn, reed_bank: int, landed: int) -> None:
    client = signed_in(SECRETARY)
    address = f"{ENTRIES}{landed}/correct/"
    client.post(address, {"undo": "1", "reason": "entered twice"})
    assert size(reed_bank) == landed + 1
    left = journal.balance(
        commons_id=reed_bank, account="taken:mullet-2026:1", resource="mullet", unit="g"
    )
    assert left == 0


@pytest.mark.parametrize("tail", ["999/", "999/receipt/", "999/correct/", "?below=x", "?member=²"])
def test_what_is_not_there_is_not_there(signed_in: SignIn, tail: str) -> None:
    assert signed_in(SECRETARY).get(f"{ENTRIES}{tail}").status_code == 404


def test_the_first_page_leads_to_the_one_commons(signed_in: SignIn) -> None:
    assert "Sign in" in plain(Client().get("/"))
    page = signed_in(SECRETARY).get("/", follow=True)
    assert page.redirect_chain == [("/c/reed-bank/", 302)]
    assert "No case is open." in plain(page)
    assert "Help: ask the secretary, Member 4" in plain(page)
