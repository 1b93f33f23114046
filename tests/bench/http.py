"""One slip by the API over one connection that is kept open, against five statements by hand.

The program's side is all that a device waits for: a server process, its middleware, the token, the
checks of the trade, the sealed entry and the receipt. The baseline does none of it.
"""

import http.client
import itertools
import json
import os
import socket
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from datetime import timedelta

from django.db import connections, transaction

from governance.periods import OPEN_END, DateRange
from ledger.commons import operations as commons
from ledger.foundation.clocks import seeded_chance, system_chance, system_clock
from ledger.foundation.hands import Hand
from ledger.identity import operations as identity
from tests.bench import bare, ground, rounds
from tests.conftest import TickingClock
from tests.ledger import builders

NAME = "http"
# Twelve slices must stay under the calls that a device may make in a minute.
_POSTS_A_SLICE = {"small": 50, "full": 90}
_BOUND = 0.40
_SLUG = "reed-bank"
_WAIT_SECONDS = 30


def measure(*, size: str) -> rounds.Measurement:
    """Measure posts of one slip each, one after the other."""
    posts = _POSTS_A_SLICE[size]
    with ground.own_database() as address:
        token = _token(_founded())
        hand = bare.Bare(address)
        takes = bare.takes(1)
        try:
            with _served(address) as port:
                post = _poster(port, token)
                return rounds.measure(
                    name=NAME,
                    size=f"{size}: {posts} posts of one slip",
                    baseline=f"five statements, bare {'sqlite3' if hand.is_sqlite else 'psycopg'}",
                    program_side=lambda: _speed(post, posts),
                    baseline_side=lambda: _speed(lambda: hand.post(takes), posts),
                    bound=_BOUND,
                )
        finally:
            hand.close()


def _founded() -> int:
    opened = system_clock() - timedelta(days=2)
    during = DateRange(first=opened.date(), until=opened.date() + timedelta(days=60))
    hand = Hand(by=builders.SECRETARY, clock=TickingClock(opened), chance=seeded_chance(1))
    commons_id = builders.found(hand=hand, slug=_SLUG)
    with transaction.atomic():
        commons.admit(commons_id=commons_id, admissions=builders.ADMISSIONS, hand=hand)
        for member, role in builders.OFFICES:
            for_good = DateRange(first=during.first, until=OPEN_END)
            commons.give_role(
                commons_id=commons_id, member=member, role=role, during=for_good, hand=hand
            )
    builders.adopt_book(commons_id=commons_id, hand=hand, first=during.first)
    builders.open_seasons(commons_id=commons_id, hand=hand, during=during)
    builders.adopt_allowables(commons_id=commons_id, hand=hand, year=during.first.year)
    return commons_id


def _token(commons_id: int) -> str:
    who = {"commons_id": commons_id, "clock": system_clock, "chance": system_chance}
    with transaction.atomic():
        identity.open_account(username="bench", member=builders.SECRETARY, **who)
        return identity.issue_token(
            member=builders.SECRETARY, device="bench", scopes=identity.SCOPES, **who
        )


@contextmanager
def _served(address: str) -> Iterator[int]:
    with socket.socket() as free:
        free.bind(("127.0.0.1", 0))
        port: int = free.getsockname()[1]
    connections.close_all()
    server = subprocess.Popen(
        [
            *(sys.executable, "-m", "gunicorn", "ledger.wsgi:application", "--no-control-socket"),
            *("--bind", f"127.0.0.1:{port}", "--worker-class", "gthread", "--threads", "2"),
            # A slice of the baseline lies between two posts.
            *("--keep-alive", "600"),
        ],
        env=os.environ | {"STINTBOOK_DATABASE": address},
        stdout=subprocess.DEVNULL,
        stderr=subprocess.DEVNULL,
    )
    try:
        _wait_for(port)
        yield port
    finally:
        server.terminate()
        server.wait(timeout=_WAIT_SECONDS)


def _wait_for(port: int) -> None:
    until = time.monotonic() + _WAIT_SECONDS
    while time.monotonic() < until:
        try:
            socket.create_connection(("127.0.0.1", port), timeout=1).close()
            return
        except OSError:
            time.sleep(0.1)
    raise TimeoutError(f"the server did not answer in {_WAIT_SECONDS} seconds")


def _poster(port: int, token: str) -> Callable[[], None]:
    line = http.client.HTTPConnection("127.0.0.1", port, timeout=_WAIT_SECONDS)
    numbers = itertools.count(1)
    at = (system_clock() - timedelta(hours=1)).isoformat()

    def post() -> None:
        number = next(numbers)
        slip = {
            "slip": f"S-{number}",
            "member": 1,
            "taken_at": at,
            "handed_in": at,
            "draw_point": "Boat 1",
            "lines": [{"resource": "mullet", "zone": "outer_bay", "amount": "1.5", "unit": "kg"}],
        }
        headers = {
            "Authorization": f"Bearer {token}",
            "Content-Type": "application/json",
            "Idempotency-Key": f"bench-{number}",
        }
        line.request("POST", f"/api/v1/commons/{_SLUG}/withdrawals", json.dumps(slip), headers)
        answer = line.getresponse()
        text = answer.read()
        if answer.status != http.client.CREATED:
            raise RuntimeError(f"a post was answered {answer.status}: {text.decode()}")

    return post


def _speed(act: Callable[[], None], times: int) -> float:
    start = time.perf_counter()
    for _ in range(times):
        act()
    return times / (time.perf_counter() - start)
