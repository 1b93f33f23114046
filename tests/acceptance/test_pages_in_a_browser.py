"""The pages in a browser: by keyboard alone, without script, narrow, for who cannot see."""

import threading
from collections.abc import Callable, Iterator
from datetime import date, timedelta
from pathlib import Path
from time import monotonic
from typing import Any
from wsgiref.simple_server import WSGIRequestHandler, WSGIServer, make_server

import pypdf
import pytest
from allauth.mfa.models import Authenticator
from django.conf import settings
from django.contrib.auth import BACKEND_SESSION_KEY, HASH_SESSION_KEY, SESSION_KEY
from django.contrib.sessions.backends.db import SessionStore
from django.core.handlers.wsgi import WSGIHandler
from django.db import connections, transaction
from playwright import sync_api

from governance.periods import DateRange
from ledger.commons import operations as commons
from ledger.foundation.clocks import seeded_chance, system_clock
from ledger.identity import operations as identity
from ledger.identity.models import Account, Seat
from ledger.journal import queries as journal
from tests import browsers
from tests.conftest import CommittingDatabase, TickingClock
from tests.ledger import builders

pytestmark = pytest.mark.needs_server(browsers.BROWSER)

AXE = Path(__file__).parent.parent / "vendored" / "axe-core" / "axe.min.js"
RULES = ["wcag2a", "wcag2aa", "wcag21aa", "wcag22aa"]
CHANCE = seeded_chance(7)


class Quiet(WSGIRequestHandler):
    """A handler that writes no line for each request."""

    def log_message(self, format: str, *args: Any) -> None:
        """Say nothing."""


class Closing(WSGIServer):
    """A server of one thread, whose database connection goes with it."""

    def serve_forever(self, poll_interval: float = 0.02) -> None:
        """Serve until told to stop."""
        try:
            super().serve_forever(poll_interval)
        finally:
            connections.close_all()


@pytest.fixture
def book(committing_db: CommittingDatabase) -> int:
    """Reed Bank with a season around today, and slips in it; every seat has an account."""
    today = system_clock().date()
    clock = TickingClock(system_clock() - timedelta(days=20))
    hand = builders.hand(clock=clock, chance=CHANCE)
    commons_id = builders.governed(hand=hand, slug="reed-bank")
    during = DateRange(first=today - timedelta(days=15), until=today + timedelta(days=100))
    builders.open_seasons(commons_id=commons_id, hand=hand, during=during)
    builders.adopt_allowables(commons_id=commons_id, hand=hand, year=during.first.year)
    with transaction.atomic():
        commons.admit(
            commons_id=commons_id,
            admissions=[builders.admission(5, mullet=None, admitted_on=during.first)],
            hand=hand,
        )
    day = today - timedelta(days=3)
    clock.set(builders.at(day, hour=16))
    builders.land(
        commons_id=commons_id, hand=hand, slips=[builders.slip("first", member=1, day=day)]
    )
    for member in (1, 2, 3, 4, 5):
        _seat(commons_id, member)
    return commons_id


def _seat(commons_id: int, member: int) -> None:
    """Give a member an account with a second factor, without which no office is open."""
    with transaction.atomic():
        identity.open_account(
            username=f"member{member}",
            commons_id=commons_id,
            member=member,
            clock=system_clock,
            chance=CHANCE,
        )
    seat = Seat.objects.get(commons_id=commons_id, member=member)
    Authenticator.objects.create(
        user_id=seat.account_id, type=Authenticator.Type.TOTP, data={"secret": "JBSWY3DPEHPK3PXP"}
    )


@pytest.fixture
def served(book: int) -> Iterator[str]:
    """The address of the service on this machine."""
    server = make_server("127.0.0.1", 0, WSGIHandler(), Closing, Quiet)
    thread = threading.Thread(target=server.serve_forever)
    thread.start()
    yield f"http://127.0.0.1:{server.server_port}"
    server.shutdown()
    thread.join()
    server.server_close()


def cookie_of(commons_id: int, member: int) -> str:
    """Return a cookie with which a member is signed in."""
    account: Account = Seat.objects.get(commons_id=commons_id, member=member).account
    session = SessionStore()
    session[SESSION_KEY] = str(account.pk)
    session[BACKEND_SESSION_KEY] = settings.AUTHENTICATION_BACKENDS[0]
    session[HASH_SESSION_KEY] = account.get_session_auth_hash()
    session.create()
    assert session.session_key is not None
    return session.session_key


OpenAs = Callable[..., sync_api.Page]


@pytest.fixture
def open_as(book: int, served: str, monkeypatch: pytest.MonkeyPatch) -> Iterator[OpenAs]:
    """Open a page at which a member is signed in; what is said on the console fails the test."""
    # The browser's own loop runs in this thread, and Django would take it for one of its own.
    monkeypatch.setenv("DJANGO_ALLOW_ASYNC_UNSAFE", "1")
    said: list[str] = []
    cookies = {member: cookie_of(book, member) for member in (1, 2, 4, 5)}
    connections.close_all()
    with browsers.opened() as browser:

        def opened(member: int | None, **options: Any) -> sync_api.Page:
            context = browser.new_context(base_url=served, **options)
            if member is not None:
                context.add_cookies(
                    [
                        {
                            "name": settings.SESSION_COOKIE_NAME,
                            "value": cookies[member],
                            "url": served,
                        }
                    ]
                )
            page = context.new_page()
            page.on("console", lambda each: said.append(each.text))
            page.on("pageerror", lambda each: said.append(str(each)))
            return page

        yield opened
    # A browser also notes each answer of 4xx there, which some tests ask for.
    assert [each for each in said if "Failed to load resource" not in each] == []


def amiss(page: sync_api.Page) -> list[str]:
    """Return what axe finds wrong with a page for who cannot see, or cannot point."""
    page.evaluate(AXE.read_text(encoding="utf-8"))
    found = page.evaluate(
        "rules => axe.run(document, {runOnly: {type: 'tag', values: rules}})", RULES
    )
    assert len(found["passes"]) > 5
    return [
        f"{page.url} {each['id']}: {node['html'][:160]}"
        for each in found["violations"]
        for node in each["nodes"]
    ]


def size(commons_id: int) -> int:
    """Return how many entries the journal holds now."""
    connections.close_all()
    return journal.head(commons_id=commons_id).size


def sideways(page: sync_api.Page) -> bool:
    """Return whether a page scrolls sideways."""
    wide: int = page.evaluate(
        "() => document.documentElement.scrollWidth - document.documentElement.clientWidth"
    )
    return wide > 0


def small_targets(page: sync_api.Page) -> list[str]:
    """Return what is pressed and is less than 44 px high; links within a sentence may be."""
    found: list[str] = page.eval_on_selector_all(
        "nav a, button, input:not([type=hidden]), select, summary, a.do",
        """all => all.filter(one => one.offsetParent && one.getBoundingClientRect().height < 44)
            .map(one => one.outerHTML)""",
    )
    return found


def addresses(entry: int) -> list[str]:
    """Return the addresses of the pages."""
    under = "/c/reed-bank"
    return [
        f"{under}/",
        f"{under}/record/",
        f"{under}/record/?entry={entry}",
        f"{under}/entries/",
        f"{under}/entries/?kind=due_paid",
        f"{under}/entries/{entry}/",
        f"{under}/entries/{entry}/receipt/",
        f"{under}/entries/{entry}/correct/",
        f"{under}/members/",
        f"{under}/devices/",
        f"{under}/members/1/",
        f"{under}/seasons/",
        f"{under}/seasons/mullet-2026/",
        f"{under}/cases/",
        "/nothing/",
    ]


@pytest.mark.parametrize("width", [320, 1100])
def test_every_page_serves_everybody(open_as: OpenAs, book: int, width: int) -> None:
    page = open_as(4, viewport={"width": width, "height": 800})
    for address in addresses(size(book)):
        page.goto(address)
        assert page.url.endswith(address)
        assert amiss(page) == []
        assert not sideways(page), address
        assert small_targets(page) == []


def test_the_doors_serve_every_stranger(open_as: OpenAs) -> None:
    page = open_as(None, viewport={"width": 320, "height": 800})
    for address in ("/", "/sign-in/", "/card/"):
        page.goto(address)
        assert page.url.endswith(address)
        assert amiss(page) == []
        assert not sideways(page), address
        assert small_targets(page) == []


def test_pages_that_say_what_is_amiss_serve_everybody(open_as: OpenAs) -> None:
    page = open_as(4, viewport={"width": 320, "height": 800})
    page.goto("/c/reed-bank/record/")
    page.keyboard.type("ninety")
    page.keyboard.press("Enter")
    page.wait_for_selector("#amiss")
    assert page.evaluate("() => document.activeElement.id") == "amiss"
    assert page.input_value("#id_member") == "ninety"
    assert amiss(page) == []
    assert not sideways(page)


def test_twenty_slips_by_the_keyboard_alone(open_as: OpenAs, book: int) -> None:
    page = open_as(4)
    page.goto("/c/reed-bank/record/")
    before = size(book)
    taken = system_clock().date() - timedelta(days=2)
    page.evaluate("""() => sessionStorage.setItem("pointed", "0")""")
    page.add_init_script(
        """addEventListener("pointerdown", () => sessionStorage.setItem("pointed", "1"))"""
    )
    began = monotonic()
    for number in range(20):
        assert page.evaluate("() => document.activeElement.id") == "id_member"
        page.keyboard.type("1")
        page.keyboard.press("Tab")
        page.keyboard.type(f"k{number}")
        page.keyboard.press("Tab")
        page.keyboard.type(f"{number + 1},5")
        if number == 0:
            page.focus("#id_place_1")
            page.keyboard.type("kg of Bay mullet, O")
            # The first slip of a pile says when; the next ones keep it.
            page.focus("#id_taken_on")
            page.keyboard.press("Control+a")
            page.keyboard.type(taken.isoformat())
            page.keyboard.press("Tab")
            page.keyboard.type("06:30")
        with page.expect_navigation():
            page.keyboard.press("Enter")
        assert f"You recorded {number + 1}.5 kg of Bay mullet" in page.inner_text("#done")
    assert monotonic() - began < 60
    assert page.evaluate("""() => sessionStorage.getItem("pointed")""") == "0"
    found = list(journal.entries(commons_id=book, after=before))
    assert [each.facts["lines"][0]["amount"] for each in found] == [
        1_500 + 1_000 * number for number in range(20)
    ]
    assert {each.day for each in found} == {taken}


def test_a_wrong_amount_is_mended_in_three_actions(open_as: OpenAs, book: int) -> None:
    number = size(book)
    page = open_as(4)
    page.goto(f"/c/reed-bank/entries/{number}/")
    page.click("text=Correct")
    page.fill("#id_reason", "misread")
    page.fill("#id_amount_1", "11")
    with page.expect_navigation():
        page.click("text=Undo, and record the right slip")
    assert "recorded anew as entry" in page.inner_text("[role=status]")
    assert size(book) == number + 2


def test_without_script_a_member_records_and_keeps_a_receipt(open_as: OpenAs, book: int) -> None:
    page = open_as(1, java_script_enabled=False, viewport={"width": 320, "height": 800})
    page.goto("/")
    assert page.url.endswith("/c/reed-bank/")
    page.click("nav >> text=Record")
    yesterday: date = system_clock().date() - timedelta(days=1)
    for name, typed in (
        ("amount_1", "2,5"),
        ("taken_on", yesterday.isoformat()),
        ("taken_time", "07:15"),
    ):
        page.fill(f"#id_{name}", typed)
    page.select_option("#id_place_1", "outer_bay")
    with page.expect_navigation():
        page.press("#id_amount_1", "Enter")
    number = size(book)
    assert f"Entry {number}." in page.inner_text("#done")
    page.click(f"text=Entry {number}")
    words = page.inner_text("main")
    assert "2.5 kg of Bay mullet (2,500 g), member 1" in words
    # Of 588 kg, 10 kg were taken before.
    assert "575.5 kg of Bay mullet remain." in words
    assert f"1–{number}" in page.inner_text(".proof")


def test_what_remains_is_told_while_typing(open_as: OpenAs) -> None:
    page = open_as(4)
    page.goto("/c/reed-bank/record/")
    page.keyboard.type("1")
    page.select_option("#id_place_1", "outer_bay")
    page.wait_for_function("() => document.getElementById('echo').textContent.includes('remain')")
    assert page.inner_text("#echo") == "Member 1: 578 kg of Bay mullet remain."


def test_a_receipt_prints_on_a_narrow_roll(open_as: OpenAs, book: int, tmp_path: Path) -> None:
    page = open_as(1)
    page.goto(f"/c/reed-bank/entries/{size(book)}/receipt/")
    page.pdf(path=tmp_path / "receipt.pdf", width="80mm", height="200mm")
    document = pypdf.PdfReader(tmp_path / "receipt.pdf")
    text = " ".join(sheet.extract_text() for sheet in document.pages)
    assert len(document.pages) <= 2
    assert "10 kg of Bay mullet" in text
    assert "Sign out" not in text
    assert "My standing" not in text
    assert page.inner_text(".proof")[:20] in text
