"""A name for every request, and one log line: who asked for what kind of thing, and the outcome.

The line holds the address's template and never the address itself, whose parts may be secret.
"""

import logging
import re
import uuid
from collections.abc import Callable
from time import perf_counter

from django.conf import settings
from django.http import HttpRequest, HttpResponse

from ledger.foundation import logs
from ledger.web import metrics

Answer = Callable[[HttpRequest], HttpResponse]

HEADER = "X-Request-Id"
_ACCEPTED = re.compile(r"[A-Za-z0-9._-]{1,64}")
_METHODS = ("GET", "HEAD", "OPTIONS", "POST", "PUT", "PATCH", "DELETE")
_log = logging.getLogger("stintbook.requests")


def requests(get_response: Answer) -> Answer:
    """Name each request, answer it, and write its line."""

    def answer(request: HttpRequest) -> HttpResponse:
        name = request_id(given=request.headers.get(HEADER, ""))
        started = perf_counter()
        with logs.of_request(request_id=name):
            response = get_response(request)
            _tell(request, response, seconds=perf_counter() - started)
        response.headers[HEADER] = name
        return response

    return answer


def request_id(*, given: str) -> str:
    """Return the name that a request came with, if it is short and plain; else a new one."""
    return given if _ACCEPTED.fullmatch(given) else uuid.uuid4().hex


def route(*, request: HttpRequest) -> str:
    """Return the template of a request's address; of one that no template fits, what it is."""
    match = request.resolver_match
    if match is not None:
        return f"/{match.route}"
    is_static = request.path.startswith(f"/{settings.STATIC_URL.strip('/')}/")
    return "static" if is_static else "unknown"


def _tell(request: HttpRequest, response: HttpResponse, *, seconds: float) -> None:
    # A method is whatever a stranger wrote; only known ones are repeated.
    method = request.method if request.method in _METHODS else "other"
    template, status = route(request=request), response.status_code
    metrics.count(method=method, route=template, status=status, seconds=seconds)
    facts = {
        "method": method,
        "route": template,
        "status": status,
        "ms": round(seconds * 1000, 1),
    }
    _log.info("answered", extra={"facts": facts})
