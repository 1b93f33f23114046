"""Recording slips at the desk: what is taken, what is refused, and what the page says to it."""

import re
from typing import Any

import pytest
from django.test import Client

from ledger.journal import queries as journal
from tests.ledger.builders import BOARD, MONITOR, SECRETARY
from tests.ledger.pages.desk.conftest import SignIn

RECORD = "/c/reed-bank/record/"
GOOD = {
    "member": "1",
    "slip": "17",
    "amount_1": "12.5",
    "place_1": "outer_bay",
    "taken_on": "2026-03-02",
    "taken_time": "06:30",
    "handed_on": "2026-03-02",
    "handed_time": "18:00",
    "draw_point": "",
    "note": "",
    "key": "k-17",
}


def size(commons_id: int) -> int:
    return journal.head(commons_id=commons_id).size


def plain(page: Any) -> str:
    """Return the words of a page as they are read."""
    text = re.sub(r"<[^>]+>", "", page.content.decode())
    return re.sub(r"\s+", " ", text.replace("&#x27;", "'"))


@pytest.fixture
def secretary(signed_in: SignIn) -> Client:
    return signed_in(SECRETARY)


@pytest.mark.parametrize("written", ["12.5", "12,5", " 12.50 ", "١٢٫٥"])
def test_a_slip_is_recorded_and_the_page_says_so(
    secretary: Client, reed_bank: int, written: str
) -> None:
    before = size(reed_bank)
    page = secretary.post(RECORD, {**GOOD, "amount_1": written}, follow=True)
    assert page.status_code == 200
    assert size(reed_bank) == before + 1
    entry = journal.entry(commons_id=reed_bank, number=before + 1)
    assert entry.facts["lines"][0]["amount"] == 12_500
    assert (entry.by, entry.subject, entry.facts["draw_point"]) == (SECRETARY, 1, "Boat 1")
    assert entry.occurred_at.isoformat() == "2026-03-02T06:30:00+00:00"
    # Member 1 was allotted 588 kg.
    words = plain(page)
    assert re.search(r"You recorded 12\.50? kg of Bay mullet \(12,500 g\) for member 1,", words)
    assert "575.5 kg of Bay mullet remain." in words
    assert f"Entry {before + 1}." in words


def test_the_same_slip_twice_is_one_entry(secretary: Client, reed_bank: int) -> None:
    before = size(reed_bank)
    for _ in range(3):
        page = secretary.post(RECORD, GOOD, follow=True)
    assert size(reed_bank) == before + 1
    assert "stands recorded already; nothing was added" in plain(page)


def test_without_a_slip_number_the_hidden_key_keeps_it_to_one_entry(
    secretary: Client, reed_bank: int
) -> None:
    before = size(reed_bank)
    for _ in range(2):
        secretary.post(RECORD, {**GOOD, "slip": ""})
    assert size(reed_bank) == before + 1
    secretary.post(RECORD, {**GOOD, "slip": "", "key": "another"})
    assert size(reed_bank) == before + 2


def test_several_lines_are_one_entry(secretary: Client, reed_bank: int) -> None:
    slip = {**GOOD, "amount_2": "3", "place_2": "pier_sand"}
    page = secretary.post(RECORD, slip, follow=True)
    words = plain(page)
    assert "12.5 kg of Bay mullet (12,500 g) and 3 kg of Clams (3,000 g)" in words
    # Member 1 was allotted 100 kg of clams.
    assert "97 kg of Clams remain." in words


def test_what_is_over_the_allotment_is_recorded_and_said(secretary: Client, reed_bank: int) -> None:
    page = secretary.post(RECORD, {**GOOD, "amount_1": "600"}, follow=True)
    assert "12 kg of Bay mullet more than the allotment is recorded" in plain(page)


def test_a_day_outside_the_season_is_recorded_and_said(secretary: Client, reed_bank: int) -> None:
    before = size(reed_bank)
    slip = {**GOOD, "taken_on": "2026-02-20"}
    page = secretary.post(RECORD, slip, follow=True)
    assert size(reed_bank) == before + 1
    assert "No open season of Bay mullet holds 2026-02-20" in plain(page)


WRONG = [
    ("member", "", "is needed"),
    ("member", "seven", "in digits is accepted"),
    ("member", "0", "in digits is accepted"),
    ("member", "-1", "in digits is accepted"),
    ("member", "99", "There is no member 99"),
    ("member", "9" * 40, "in digits is accepted"),
    ("member", "1.5", "in digits is accepted"),
    ("slip", "x" * 61, "at most 60 signs"),
    ("amount_1", "", "is needed"),
    ("amount_1", "a lot", "decimal point or comma"),
    ("amount_1", "1e3", "decimal point or comma"),
    ("amount_1", "1_000", "decimal point or comma"),
    ("amount_1", "-5", "decimal point or comma"),
    ("amount_1", "1,000.5", "decimal point or comma"),
    ("amount_1", "NaN", "decimal point or comma"),
    ("amount_1", "0", "above nought"),
    ("amount_1", "0.0001", "one base unit or more"),
    ("amount_1", "9" * 29, "accepted"),
    ("amount_2", "some", "decimal point or comma"),
    ("place_1", "", "One of the list"),
    ("amount_2", "3", "One of the list"),
    ("place_1", "moon", "One of the list"),
    ("taken_on", "", "is needed"),
    ("taken_on", "yesterday", "year, month, day"),
    ("taken_on", "2026-02-30", "year, month, day"),
    ("taken_on", "2026-03-11", "lies ahead of now"),
    ("taken_on", "9999-12-31", "lies ahead of now"),
    ("taken_time", "", "is needed"),
    ("taken_time", "noon", "Hours and minutes"),
    ("taken_time", "25:00", "Hours and minutes"),
    ("taken_time", "19:00", "this is earlier"),
    ("handed_on", "2026-03-01", "this is earlier"),
    ("handed_on", "2026-04-01", "lies ahead of now"),
    ("handed_time", "later", "Hours and minutes"),
    ("draw_point", "x" * 121, "at most 120 signs"),
]


@pytest.mark.parametrize(("field", "typed", "said"), WRONG)
def test_what_cannot_be_taken_is_kept_and_answered(
    secretary: Client, reed_bank: int, field: str, typed: str, said: str
) -> None:
    before = size(reed_bank)
    page = secretary.post(RECORD, {**GOOD, field: typed})
    assert page.status_code == 422
    assert size(reed_bank) == before
    html = page.content.decode()
    words = plain(page)
    # In the summary and beside the box.
    assert words.count(said) == 2
    assert 'id="amiss"' in html
    assert "aria-invalid" in html
    if typed and not field.startswith("place"):
        assert f'value="{typed}"' in html
    assert 'value="12.5"' in html or field == "amount_1"
    assert not re.search(r"\b(invalid|illegal|error|fail|wrong)\b", words, re.IGNORECASE)


def test_a_slip_number_with_another_content_is_refused(secretary: Client, reed_bank: int) -> None:
    secretary.post(RECORD, GOOD)
    before = size(reed_bank)
    page = secretary.post(RECORD, {**GOOD, "amount_1": "13"})
    assert page.status_code == 422
    assert size(reed_bank) == before
    assert plain(page).count("recorded with another content") == 2


@pytest.mark.parametrize(
    ("visitor", "member", "taken"),
    [
        (SECRETARY, "1", True),
        (MONITOR, "1", True),
        (BOARD[0], "1", True),
        (BOARD[0], "3", False),
        (BOARD[1], "1", False),
    ],
)
def test_who_may_record_for_whom(
    signed_in: SignIn, reed_bank: int, visitor: int, member: str, taken: bool
) -> None:
    before = size(reed_bank)
    page = signed_in(visitor).post(RECORD, {**GOOD, "member": member})
    assert page.status_code == (302 if taken else 422)
    assert size(reed_bank) == before + taken
    if not taken:
        assert "You can record your own takes" in plain(page)


def test_a_member_does_not_use_up_the_numbers_of_the_desk(
    signed_in: SignIn, reed_bank: int
) -> None:
    before = size(reed_bank)
    signed_in(BOARD[0]).post(RECORD, {**GOOD, "member": "1"})
    page = signed_in(SECRETARY).post(RECORD, {**GOOD, "member": "3", "amount_1": "4"})
    assert page.status_code == 302
    assert size(reed_bank) == before + 2


def test_what_remains_is_told_while_typing_to_who_may_know(signed_in: SignIn) -> None:
    asked = f"{RECORD}left/?member=3&place=outer_bay"
    told = signed_in(SECRETARY).get(asked).json()
    # Member 3 was allotted 294 kg.
    assert told == {
        "name": "Member 3",
        "draw_point": "Boat 3",
        "words": "294 kg of Bay mullet remain.",
    }
    assert signed_in(MONITOR).get(asked).json()["words"] == ""
    assert signed_in(BOARD[0]).get(asked).json() == {"name": "", "draw_point": "", "words": ""}


def test_strangers_are_sent_to_sign_in(reed_bank: int) -> None:
    for address in (RECORD, "/c/reed-bank/", "/c/reed-bank/entries/", "/c/reed-bank/members/"):
        assert Client().get(address).status_code == 302
