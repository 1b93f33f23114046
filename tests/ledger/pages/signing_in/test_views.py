"""Getting in by a card, by a password and by a second factor."""

import base64
import hashlib
import hmac
import re
import struct
import time

import pytest
from django.core.cache import cache
from django.db import transaction
from django.test import Client

from ledger.foundation.clocks import Chance, system_chance, system_clock
from ledger.identity import operations as identity
from ledger.identity import queries as accounts
from tests.conftest import TickingClock
from tests.ledger import builders, scene

PASSWORD = "a heron stands in the reeds"
HOME = "/c/reed-bank/"


@pytest.fixture
def bay(db: None, ticking_clock: TickingClock, chance: Chance) -> scene.Scene:
    """The small commons; nobody has tried to sign in yet."""
    cache.clear()
    return scene.opened(clock=ticking_clock, chance=chance)


def _card(bay: scene.Scene, member: int) -> str:
    with transaction.atomic():
        return identity.open_account(
            username=f"member.{member}",
            commons_id=bay.commons_id,
            member=member,
            clock=system_clock,
            chance=system_chance,
        )


def _enter(secret: str, sentence: str = PASSWORD) -> Client:
    client = Client()
    answer = client.post("/card/", {"card": secret, "password": sentence, "again": sentence})
    assert answer["Location"] == "/sign-in/", answer.content.decode()
    said = client.get("/sign-in/").content.decode()
    name = re.findall(r"as (member\.\d+|reed-bank\.\d+)", said)[0]
    client.post("/sign-in/", {"login": name, "password": sentence})
    return client


def test_a_card_leads_into_the_book_and_a_password_back_again(bay: scene.Scene) -> None:
    """An ordinary member needs no second factor."""
    client = _enter(_card(bay, 5))
    assert client.get(HOME).status_code == 200
    client.post("/sign-out/")
    assert client.get(HOME).status_code == 302
    again = client.post("/sign-in/", {"login": "member.5", "password": PASSWORD})
    assert again.status_code == 302
    assert client.get(HOME).status_code == 200


@pytest.mark.parametrize(
    ("card", "password", "again", "words"),
    [
        ("abcd", PASSWORD, PASSWORD, "does not hold"),
        (None, PASSWORD, PASSWORD + "!", "differ"),
        (None, "too short", "too short", "15"),
        (None, "", "", "required"),
    ],
)
def test_what_is_wrong_with_a_card_is_said_and_nothing_is_lost(
    bay: scene.Scene, card: str | None, password: str, again: str, words: str
) -> None:
    """The card still opens afterwards."""
    secret = _card(bay, 5)
    answer = Client().post("/card/", {"card": card or secret, "password": password, "again": again})
    assert answer.status_code == 400
    assert words in answer.content.decode()
    _enter(secret)


def test_an_office_needs_a_second_factor(bay: scene.Scene) -> None:
    """The secretary of a real commons sees nothing before it, and signs in by it afterwards."""
    client = _enter(_card(bay, builders.SECRETARY))
    assert client.get(HOME)["Location"] == "/second-factor/set-up/"
    _set_up_second_factor(client)
    assert client.get(HOME).status_code == 200
    fresh = Client()
    fresh.post("/sign-in/", {"login": "member.4", "password": PASSWORD})
    assert fresh.get(HOME).status_code == 302
    codes = client.get("/second-factor/codes/").content.decode()
    code = re.findall(r"<li><code>(\w+)</code>", codes)[0]
    fresh.post("/sign-in/second/", {"code": code})
    assert fresh.get(HOME).status_code == 200


def test_a_card_does_not_go_round_the_second_factor(bay: scene.Scene) -> None:
    """A new card changes the password alone."""
    client = _enter(_card(bay, builders.SECRETARY))
    _set_up_second_factor(client)
    thief = _enter(_card(bay, builders.SECRETARY), sentence="another long sentence")
    assert thief.get(HOME)["Location"].startswith("/sign-in/")
    assert client.get(HOME).status_code == 302, "the earlier session ended with its password"


def test_wrong_passwords_are_answered_alike_and_locked_for_a_while(bay: scene.Scene) -> None:
    """The same words for an account that stands and for none; then 429."""
    _enter(_card(bay, 5))
    answers = []
    for name in ("member.5", "nobody"):
        page = Client().post("/sign-in/", {"login": name, "password": "wrong"})
        text = re.sub(r'value="[^"]*"', "", page.content.decode())
        answers.append((page.status_code, text))
    assert answers[0] == answers[1]
    codes = [
        Client().post("/sign-in/", {"login": "member.5", "password": "wrong"}).status_code
        for _ in range(25)
    ]
    right = Client().post("/sign-in/", {"login": "member.5", "password": PASSWORD})
    assert right.status_code != 302, (codes, "locked for minutes")


def test_nobody_signs_up(bay: scene.Scene) -> None:
    """No address takes a new account."""
    for path in ("/sign-up/", "/signup/", "/accounts/signup/"):
        assert Client().get(path).status_code == 404


def test_a_device_gets_a_token_that_is_shown_once(bay: scene.Scene) -> None:
    """And it is ended by its owner."""
    client = _enter(_card(bay, 5))
    page = client.post(
        f"{HOME}devices/", {"device": "old phone", "scopes": ["read"]}
    ).content.decode()
    secret = re.findall(r"<code>(\w{32})</code>", page)[0]
    found = accounts.token(secret=secret, at=system_clock())
    assert found is not None
    assert found.member == 5
    assert secret not in client.get(f"{HOME}devices/").content.decode()
    client.post(f"{HOME}devices/{found.token_id}/end/")
    assert accounts.token(secret=secret, at=system_clock()) is None


def test_the_secretary_gives_cards_to_members_without_office(bay: scene.Scene) -> None:
    """Not to office-holders, and nobody else gives any."""
    secretary = _with_second_factor(bay, builders.SECRETARY)
    page = secretary.post(f"{HOME}members/5/card/").content.decode()
    secret = re.findall(r"<code>((?:\w{4} ?){8})</code>", page)[0]
    assert _enter(secret).get(HOME).status_code == 200
    assert secretary.post(f"{HOME}members/{builders.MONITOR}/card/").status_code == 403
    assert secretary.post(f"{HOME}members/99/card/").status_code == 404
    assert _enter(_card(bay, 6)).post(f"{HOME}members/5/card/").status_code == 403


def _with_second_factor(bay: scene.Scene, member: int) -> Client:
    client = _enter(_card(bay, member))
    _set_up_second_factor(client)
    return client


def _set_up_second_factor(client: Client) -> None:
    """Set one up as a person does: the password once more, the key, and its digits."""
    again = client.get("/second-factor/set-up/")["Location"]
    assert again.startswith("/sign-in/again/")
    page = client.post(again, {"password": PASSWORD}, follow=True).content.decode()
    key = re.findall(r"<code>([A-Z2-7]+)</code>", page)[0]
    done = client.post("/second-factor/set-up/", {"code": _digits(key)})
    assert done.status_code == 302, done.content.decode()


def _digits(key: str) -> str:
    """Return the six digits of RFC 6238 for this half minute, worked out apart from the library."""
    padded = key + "=" * (-len(key) % 8)
    counter = struct.pack(">Q", int(time.time()) // 30)
    mark = hmac.new(base64.b32decode(padded), counter, hashlib.sha1).digest()
    start = mark[-1] & 0xF
    number = struct.unpack(">I", mark[start : start + 4])[0] & 0x7FFFFFFF
    return f"{number % 1_000_000:06d}"
