"""Made-up requests against the schema, in process, as each kind of visitor.

Few examples here, the same in every run; STINTBOOK_TEST_EXAMPLES asks for more.
"""

import os
from collections.abc import Iterator
from typing import Any

import hypothesis
import pytest
import schemathesis
from django.core.signals import request_finished, request_started
from django.core.wsgi import get_wsgi_application
from django.db import close_old_connections
from hypothesis import HealthCheck
from schemathesis import checks
from schemathesis.specs.openapi import checks as openapi

from tests.ledger.api import stage as staging
from tests.ledger.api.stage import Stage

EXAMPLES = int(os.environ.get("STINTBOOK_TEST_EXAMPLES", "3"))
HELD_TO = [
    checks.not_a_server_error,
    openapi.status_code_conformance,
    openapi.content_type_conformance,
    openapi.response_schema_conformance,
]


@pytest.fixture
def kept_connection() -> Iterator[None]:
    """Keep requests from closing the connection of the test, as Django's own test client does."""
    for signal in (request_started, request_finished):
        signal.disconnect(close_old_connections)
    yield
    for signal in (request_started, request_finished):
        signal.connect(close_old_connections)


@pytest.mark.usefixtures("kept_connection")
@pytest.mark.filterwarnings("ignore")
@pytest.mark.parametrize("who", [*staging.WHO, "nobody"])
def test_made_up_requests_are_answered_as_the_schema_says(stage: Stage, who: str) -> None:
    """No fault of the service, and no answer that the schema does not tell of."""
    stage.bay.lands("A", member=staging.MEMBER, day=staging.DAY)
    schema = schemathesis.openapi.from_wsgi("/api/v1/schema", get_wsgi_application())
    headers = {"Authorization": f"Bearer {stage.tokens[who]}"} if who in stage.tokens else {}
    asked = [_ask(result.ok(), headers) for result in schema.get_all_operations()]
    assert len(asked) >= 22
    assert min(asked) >= 1


def _ask(operation: Any, headers: dict[str, str]) -> int:
    """Make up requests of an operation, and return how many were answered as they should be."""
    answered = 0

    @hypothesis.settings(
        max_examples=EXAMPLES,
        derandomize=True,
        database=None,
        deadline=None,
        suppress_health_check=list(HealthCheck),
    )
    @hypothesis.given(case=operation.as_strategy())
    def ask(case: Any) -> None:
        nonlocal answered
        # The commons that stands is asked for; a made-up one is never there.
        if case.path_parameters and "slug" in case.path_parameters:
            case.path_parameters["slug"] = "reed-bank"
        answer = case.call_and_validate(headers=headers, checks=HELD_TO)
        if answer.status_code >= 400:
            assert answer.headers["content-type"][0] == "application/problem+json"
        answered += 1

    ask()
    return answered
