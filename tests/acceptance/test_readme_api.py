"""The README's five curl lines, run as they are written there against a served demo commons."""

import json
import re
import shutil
import subprocess
import urllib.request
from pathlib import Path

import pytest
from django.db import connection

from tests import databases
from tests.acceptance.played import SLUG, PlayedSeason
from tests.ledger import processes

README = Path(__file__).parents[2] / "README.md"


def curl_lines() -> list[str]:
    """Return the lines of the README's one bash block."""
    (block,) = re.findall(r"^```bash\n(.*?)^```$", README.read_text("utf-8"), re.M | re.S)
    return [line for line in block.splitlines() if line]


def _address() -> str:
    name = str(connection.settings_dict["NAME"])
    return f"sqlite:///{name}" if connection.vendor == "sqlite" else databases.server_address(name)


def _answers(port: int) -> bool:
    try:
        with urllib.request.urlopen(f"http://127.0.0.1:{port}/healthz", timeout=5) as answer:
            return bool(answer.status == 200)
    except OSError:
        return False


@pytest.mark.skipif(shutil.which("curl") is None, reason="curl is not installed here")
def test_the_five_lines_do_what_they_say(own_season: PlayedSeason) -> None:
    """Each ends well, and gives the JSON that the README tells of."""
    lines = curl_lines()
    assert len(lines) == 5
    database, port = _address(), processes.free_port()
    asked = ("manage.py", "token", "--commons", SLUG, "--member", "7", "--device", "phone")
    with processes.running(*asked, STINTBOOK_DATABASE=database) as command:
        token = command.communicate(timeout=60)[0].strip()
    serve = ("manage.py", "serve", "--port", str(port))
    with processes.running(*serve, STINTBOOK_DATABASE=database):
        processes.wait_for(lambda: _answers(port), what="the service")
        environment = {
            "PATH": "/usr/bin:/bin",
            "TOKEN": token,
            "BOOK": f"http://127.0.0.1:{port}/api/v1/commons/{SLUG}",
        }
        found = []
        for line in lines:
            ran = subprocess.run(
                ["bash", "-c", line], env=environment, capture_output=True, text=True, timeout=60
            )
            assert ran.returncode == 0, (line, ran.stdout, ran.stderr)
            found.append(json.loads(ran.stdout))
    commons, standing, receipt, listed, proof = found
    assert (commons["commons"], commons["member"]) == (SLUG, 7)
    assert standing["member"] == 7
    assert receipt["replayed"] is False
    assert 1 <= len(listed["entries"]) <= 5
    assert (proof["number"], proof["head"]["size"]) == (1724, receipt["size"])
