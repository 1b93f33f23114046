"""Every refusal is a problem document with a status of its own."""

import importlib
import pkgutil

import pytest
from django.test import Client

import governance
import ledger
from governance.errors import StintbookError
from ledger.api import problems
from tests.ledger.api.stage import Stage


def _every_error() -> dict[str, type[StintbookError]]:
    for package in (governance, ledger):
        for module in pkgutil.walk_packages(package.__path__, f"{package.__name__}."):
            if (
                not module.name.endswith((".__main__", ".wsgi"))
                and ".migrations" not in module.name
            ):
                importlib.import_module(module.name)
    found: dict[str, type[StintbookError]] = {}
    waiting = [StintbookError]
    while waiting:
        error = waiting.pop()
        found[error.code] = error
        waiting += error.__subclasses__()
    return found


def test_the_table_names_no_refusal_that_nobody_raises() -> None:
    """A code that was renamed would otherwise fall back to 400 without a word."""
    assert set(problems.STATUS_OF) <= set(_every_error())


@pytest.mark.parametrize(
    "path", ["/api/v1/nothing", "/api/v1/", "/api/v1/commons/reed-bank/nothing", "/api/v1/%2e%2e"]
)
def test_an_unknown_address_is_answered_with_a_problem(path: str) -> None:
    """Also where no view is reached."""
    answer = Client().get(path)
    assert answer.status_code == 404
    assert answer["Content-Type"] == "application/problem+json"
    assert answer.json()["status"] == 404


def test_no_token_and_a_wrong_one_are_told_apart_from_no_right(stage: Stage) -> None:
    """401 says how to sign in, and the words are the same for any token that does not hold."""
    for headers in ({}, {"Authorization": "Bearer nonsense"}, {"Authorization": "Basic eA=="}):
        answer = Client().get("/api/v1/commons/reed-bank/head", headers=headers)
        assert answer.status_code == 401
        assert answer["WWW-Authenticate"] == 'Bearer realm="stintbook"'
        assert answer["Content-Type"] == "application/problem+json"


def test_entries_are_never_put_patched_or_deleted(stage: Stage) -> None:
    """405, with what the address does take."""
    for method in ("put", "patch", "delete"):
        answer = getattr(Client(), method)(
            "/api/v1/commons/reed-bank/entries/1",
            headers={"Authorization": f"Bearer {stage.tokens['secretary']}"},
        )
        assert answer.status_code == 405
        assert "GET" in answer["Allow"]


def test_another_form_than_json_is_refused(stage: Stage) -> None:
    """415."""
    answer = Client().post(
        "/api/v1/commons/reed-bank/withdrawals",
        {"slip": "A"},
        headers={"Authorization": f"Bearer {stage.tokens['secretary']}", "Idempotency-Key": "k"},
    )
    assert answer.status_code == 415
