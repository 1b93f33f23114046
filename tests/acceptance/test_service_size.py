"""The service as many processes: web, two workers and a clock, on PostgreSQL and Redis.

A slip that is over the day's limit comes in by the API; the workers find it and a case stands open;
the receipt holds; every process ends in good order when it is told to.
"""

import base64
import json
import os
import signal
import socket
import subprocess
import sys
import time
import urllib.error
import urllib.request
from collections.abc import Callable, Iterator
from contextlib import ExitStack, contextmanager
from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

import psycopg
import pytest
import yaml
from django.core.management import call_command
from django.db import connections, transaction
from psycopg import sql

from governance.periods import OPEN_END, DateRange
from ledger.commons import operations as commons
from ledger.foundation.clocks import Chance, system_chance, system_clock
from ledger.foundation.hands import Hand
from ledger.identity import operations as identity
from ledger.journal import tree
from tests import databases
from tests.conftest import TickingClock
from tests.ledger import builders

REDIS_SERVER = "STINTBOOK_TEST_REDIS_SERVER"
ROOT = Path(__file__).resolve().parents[2]
WAIT_SECONDS = 180
SLUG, FISHER = "reed-bank", 5


@dataclass(frozen=True, slots=True, kw_only=True)
class Service:
    """The service: where it answers, a member's and the secretary's token, its running parts."""

    port: int
    fisher: str
    secretary: str
    database: str
    start: Callable[[str], None]
    processes: dict[str, subprocess.Popen[bytes]]
    folder: Path

    def call(
        self, where: str, *, token: str = "", body: Any = None, **headers: str
    ) -> tuple[int, Any]:
        """Call an address of the commons; return the status and what was answered."""
        request = urllib.request.Request(
            f"http://127.0.0.1:{self.port}{where}",
            data=None if body is None else json.dumps(body).encode(),
            headers={
                "Authorization": f"Bearer {token or self.fisher}",
                "Content-Type": "application/json",
                **{name.replace("_", "-"): value for name, value in headers.items()},
            },
        )
        try:
            with urllib.request.urlopen(request, timeout=10) as answer:  # noqa: S310
                return answer.status, _read(answer)
        except urllib.error.HTTPError as error:
            with error:
                return error.code, _read(error)

    def lines(self, part: str) -> list[dict[str, Any]]:
        """Return what a part has written to its log."""
        text = (self.folder / f"{part}.out").read_text(encoding="utf-8")
        return [json.loads(line) for line in text.splitlines() if line.startswith("{")]


def _read(answer: Any) -> Any:
    text = answer.read().decode()
    return json.loads(text) if "json" in answer.headers["Content-Type"] else text


def _free_port() -> int:
    with socket.socket() as free:
        free.bind(("127.0.0.1", 0))
        port: int = free.getsockname()[1]
        return port


def _wait_for(met: Callable[[], object], *, what: str) -> Any:
    until = time.monotonic() + WAIT_SECONDS
    while time.monotonic() < until:
        try:
            if found := met():
                return found
        except (OSError, urllib.error.URLError):
            pass
        time.sleep(0.2)
    return pytest.fail(f"waited {WAIT_SECONDS} seconds for {what}")


@contextmanager
def _own_database() -> Iterator[str]:
    """Make a migrated database on the server for tests, and have Django lead to it."""
    standing = dict(connections.settings["default"])
    name = databases.new_name()
    databases.create(name)
    try:
        databases.point_django(databases.server_address(name))
        call_command("migrate", verbosity=0)
        yield databases.server_address(name)
    finally:
        _lead_back(standing)
        databases.drop(name)


def _lead_back(standing: dict[str, Any]) -> None:
    connections["default"].close()
    del connections["default"]
    connections.settings["default"].clear()
    connections.settings["default"].update(standing)


def _founded(chance: Chance) -> None:
    """Found the small commons with a season that is running on the day of the test."""
    opened = system_clock() - timedelta(days=10)
    during = DateRange(first=opened.date(), until=opened.date() + timedelta(days=60))
    hand = Hand(by=builders.SECRETARY, clock=TickingClock(opened), chance=chance)
    commons_id = builders.found(hand=hand, slug=SLUG)
    with transaction.atomic():
        admissions = [*builders.ADMISSIONS, builders.admission(FISHER, mullet=1, clams=1)]
        commons.admit(commons_id=commons_id, admissions=admissions, hand=hand)
        for member, role in builders.OFFICES:
            commons.give_role(
                commons_id=commons_id,
                member=member,
                role=role,
                during=DateRange(first=during.first, until=OPEN_END),
                hand=hand,
            )
    builders.adopt_book(commons_id=commons_id, hand=hand, first=during.first)
    builders.open_seasons(commons_id=commons_id, hand=hand, during=during)
    builders.adopt_allowables(commons_id=commons_id, hand=hand, year=during.first.year)


def _token(member: int) -> str:
    with transaction.atomic():
        commons_id = 1
        identity.open_account(
            username=f"member-{member}",
            commons_id=commons_id,
            member=member,
            clock=system_clock,
            chance=system_chance,
        )
        return identity.issue_token(
            commons_id=commons_id,
            member=member,
            device="test",
            scopes=identity.SCOPES,
            clock=system_clock,
            chance=system_chance,
        )


@contextmanager
def _running(
    part: str, command: list[str], *, folder: Path, environment: dict[str, str]
) -> Iterator[subprocess.Popen[bytes]]:
    with (
        (folder / f"{part}.out").open("wb") as out,
        (folder / f"{part}.err").open("wb") as err,
    ):
        process = subprocess.Popen(
            command, cwd=ROOT, env=os.environ | environment, stdout=out, stderr=err
        )
        try:
            yield process
        finally:
            if process.poll() is None:
                process.kill()
            process.wait(timeout=WAIT_SECONDS)


@pytest.fixture
def service(
    django_db_setup: None, django_db_blocker: Any, tmp_path: Path, chance: Chance
) -> Iterator[Service]:
    """Give a service with a database and a broker of its own; end what is left of it."""
    web_port, bell_port = _free_port(), _free_port()
    python = sys.executable
    celery = [python, "-m", "celery", "-q", "-A", "ledger.celery", "worker", "--concurrency", "1"]
    parts = {
        "doorbell": [
            *(os.environ[REDIS_SERVER], "--port", str(bell_port), "--bind", "127.0.0.1"),
            *("--save", "", "--maxmemory-policy", "noeviction", "--dir", str(tmp_path)),
        ],
        "web": [
            *(python, "-m", "gunicorn", "ledger.wsgi:application", "--no-control-socket"),
            *("--bind", f"127.0.0.1:{web_port}", "--worker-class", "gthread"),
            *("--workers", "2", "--threads", "2"),
        ],
        "worker-1": [*celery, "--hostname", "one@%h"],
        "worker-2": [*celery, "--hostname", "two@%h"],
        "clock": [python, "manage.py", "clock"],
    }
    with ExitStack() as stack:
        stack.enter_context(django_db_blocker.unblock())
        environment = {
            "STINTBOOK_DATABASE": stack.enter_context(_own_database()),
            "STINTBOOK_BROKER": f"redis://127.0.0.1:{bell_port}/0",
            "STINTBOOK_SECRET_KEY": "0123456789abcdef-" * 4,
        }
        _founded(chance)
        fisher, secretary = _token(FISHER), _token(builders.SECRETARY)
        connections.close_all()
        processes: dict[str, subprocess.Popen[bytes]] = {}

        def start(part: str) -> None:
            running = _running(part, parts[part], folder=tmp_path, environment=environment)
            processes[part] = stack.enter_context(running)

        yield Service(
            port=web_port,
            fisher=fisher,
            secretary=secretary,
            database=environment["STINTBOOK_DATABASE"].rsplit("/", 1)[1],
            start=start,
            processes=processes,
            folder=tmp_path,
        )


@pytest.mark.needs_server(databases.POSTGRESQL)
@pytest.mark.needs_server(REDIS_SERVER)
def test_a_slip_over_the_limit_becomes_a_case(service: Service) -> None:
    book = f"/api/v1/commons/{SLUG}"
    service.start("doorbell")
    service.start("web")
    _wait_for(lambda: service.call("/healthz")[0] == 200, what="the web to answer")
    taken = system_clock() - timedelta(days=1)
    slip = {
        "slip": "S-1",
        "member": FISHER,
        "taken_at": taken.isoformat(),
        "handed_in": (taken + timedelta(hours=1)).isoformat(),
        "draw_point": "Boat 5",
        # The day's limit is 40 kg, with a tolerance.
        "lines": [{"resource": "clams", "zone": "pier_sand", "amount": "55.5", "unit": "kg"}],
    }
    status, receipt = service.call(f"{book}/withdrawals", body=slip, Idempotency_Key="k-1")
    assert status == 201, receipt
    again, same = service.call(f"{book}/withdrawals", body=slip, Idempotency_Key="k-1")
    assert (again, same["number"], same["replayed"]) == (200, receipt["number"], True)

    _the_receipt_holds(service.call(f"{book}/entries/{receipt['number']}/receipt")[1], receipt)

    with _away(service.database):
        assert service.call("/healthz")[0] == 200
        assert service.call("/readyz") == (503, "not ready\n")
        status, problem = service.call(f"{book}/withdrawals", body=slip, Idempotency_Key="k-2")
        assert (status, problem["status"]) == (503, 503)
    # Nothing is started again, and nothing was half written.
    assert service.call(f"{book}/withdrawals", body=slip, Idempotency_Key="k-1")[0] == 200
    assert service.call(f"{book}/head")[1]["size"] == receipt["size"]

    # Ten nights' judging lies due: what was missed while nobody worked is done now.
    assert service.call("/readyz") == (503, "not ready\n")
    for part in ("worker-1", "worker-2", "clock"):
        service.start(part)
    (finding,) = _wait_for(
        lambda: service.call(f"{book}/findings")[1]["findings"], what="the judge to find it"
    )
    assert finding["entries"] == [receipt["number"]]
    (case,) = _wait_for(
        lambda: service.call(f"{book}/cases", token=service.secretary)[1]["cases"],
        what="a case to be opened",
    )
    assert (case["finding"], case["concerns"]) == (finding["number"], [FISHER])
    _wait_for(lambda: service.call("/readyz")[0] == 200, what="every job that was due")

    _all_end_in_good_order(service)
    _the_log_tells_who_and_keeps_secrets(service)


@contextmanager
def _away(name: str) -> Iterator[None]:
    """Cut every connection to a database for a while, and let no new one in."""
    allow = sql.SQL("ALTER DATABASE {} ALLOW_CONNECTIONS {}")
    with psycopg.connect(os.environ[databases.POSTGRESQL], autocommit=True) as server:
        server.execute(allow.format(sql.Identifier(name), sql.SQL("false")))
        server.execute(
            "SELECT pg_terminate_backend(pid) FROM pg_stat_activity WHERE datname = %s", [name]
        )
        try:
            yield
        finally:
            server.execute(allow.format(sql.Identifier(name), sql.SQL("true")))


def _the_receipt_holds(proof: dict[str, Any], receipt: dict[str, Any]) -> None:
    leaf = tree.leaf_hash(base64.b64decode(proof["leaf"]))
    assert leaf.hex() == receipt["leaf_hash"]
    assert tree.verify_inclusion(
        leaf=leaf,
        index=proof["number"] - 1,
        size=proof["head"]["size"],
        proof=[bytes.fromhex(each) for each in proof["path"]],
        root=bytes.fromhex(proof["head"]["root"]),
    )


def _all_end_in_good_order(service: Service) -> None:
    """Every part of ours is told to end, and does: none is killed, none fails."""
    ours = {part: each for part, each in service.processes.items() if part != "doorbell"}
    for process in ours.values():
        assert process.poll() is None
        process.send_signal(signal.SIGTERM)
    codes = {part: process.wait(timeout=WAIT_SECONDS) for part, process in ours.items()}
    assert codes == dict.fromkeys(ours, 0)


def _the_log_tells_who_and_keeps_secrets(service: Service) -> None:
    told = [line for line in service.lines("web") if line.get("route", "").endswith("withdrawals")]
    assert [line["status"] for line in told] == [201, 200, 503, 200]
    assert all(line["method"] == "POST" and line["request_id"] for line in told)
    assert [line.get("member") for line in told] == [FISHER, FISHER, None, FISHER]
    assert all(datetime.fromisoformat(line["time"]).tzinfo == UTC for line in told)
    written = "".join(each.read_text("utf-8") for each in service.folder.glob("*.[eo][ru][rt]"))
    assert service.fisher not in written
    assert service.secretary not in written
    assert "Traceback" not in written


def test_the_compose_file_runs_every_part_from_one_image() -> None:
    file = yaml.safe_load((ROOT / "docker-compose.yml").read_text(encoding="utf-8"))
    services = file["services"]
    assert set(services) == {"database", "doorbell", "migrate", "web", "worker", "clock"}
    ours = [services[part] for part in ("migrate", "web", "worker", "clock")]
    assert {each["image"] for each in ours} == {"stintbook"}
    for each in ours:
        assert each["read_only"] is True
        assert each["cap_drop"] == ["ALL"]
        assert set(each["secrets"]) <= set(file["secrets"])
        assert each["environment"]["STINTBOOK_SECRET_KEY_FILE"] == "/run/secrets/secret_key"
    figures = services["web"]["environment"]["PROMETHEUS_MULTIPROC_DIR"]
    assert figures in services["web"]["tmpfs"]
    assert "noeviction" in services["doorbell"]["command"]
    for part in ("web", "worker", "clock"):
        needs = services[part]["depends_on"]
        assert needs["migrate"] == {"condition": "service_completed_successfully"}
        assert set(needs) <= set(services)
    mounted = {
        volume.split(":")[0] for each in services.values() for volume in each.get("volumes", [])
    }
    assert mounted == set(file["volumes"])
    text = json.dumps(file)
    assert "STINTBOOK_SECRET_KEY:" not in text and '"POSTGRES_PASSWORD"' not in text


def test_the_image_runs_as_nobody_in_particular_and_takes_no_secret() -> None:
    text = (ROOT / "Dockerfile").read_text(encoding="utf-8")
    assert "\nUSER 10001:10001\n" in text
    assert text.index("collectstatic") < text.index("\nUSER ") < text.index("\nCMD ")
    assert "SECRET_KEY" not in text
    kept_out = (ROOT / ".dockerignore").read_text(encoding="utf-8").splitlines()
    assert kept_out[1] == "*" and "**/*.sqlite3" in kept_out
