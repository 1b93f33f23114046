"""What is answered while the database cannot be reached: come again later."""

import logging
from collections.abc import Callable

from django.db import InterfaceError, OperationalError
from django.http import HttpRequest, HttpResponse, JsonResponse

RETRY_AFTER_SECONDS = 10
WORDS = "The book cannot be reached just now. Try again in a minute."
_log = logging.getLogger("stintbook.unreachable")


class Unreachable:
    """Answer 503 where a view fell over a database that does not answer."""

    def __init__(self, get_response: Callable[[HttpRequest], HttpResponse]) -> None:
        self.get_response = get_response

    def __call__(self, request: HttpRequest) -> HttpResponse:
        """Pass the request on."""
        return self.get_response(request)

    def process_exception(self, request: HttpRequest, exception: Exception) -> HttpResponse | None:
        """Return the answer, if the exception is of this kind."""
        if not isinstance(exception, OperationalError | InterfaceError):
            return None
        _log.error("The database does not answer: %s", type(exception).__name__)
        return answer(is_api=request.path.startswith("/api/"))


def answer(*, is_api: bool) -> HttpResponse:
    """Return a 503 with the time to wait: a problem document to a program, words to a person."""
    response: HttpResponse
    if is_api:
        response = JsonResponse(
            {"type": "about:blank", "title": "Service Unavailable", "status": 503, "detail": WORDS},
            status=503,
            content_type="application/problem+json",
        )
    else:
        response = HttpResponse(WORDS, status=503, content_type="text/plain; charset=utf-8")
    response.headers["Retry-After"] = str(RETRY_AFTER_SECONDS)
    return response
