"""Every refusal of the API as a problem document (RFC 9457), and which status each one has."""

import json
from collections.abc import Iterator, Mapping
from typing import Any

from django.http import HttpRequest, HttpResponse
from django.views.decorators.csrf import csrf_exempt
from rest_framework import exceptions, status
from rest_framework.response import Response
from rest_framework.views import exception_handler

from governance.errors import StintbookError

MEDIA_TYPE = "application/problem+json"

# Where a refusal has another status than 400: it is not there, it is not yours, the book stands
# otherwise than the request supposes, the content clashes, or posting is stopped.
STATUS_OF: Mapping[str, int] = {
    **dict.fromkeys(
        (
            "api.no_advice",
            "cases.unknown_case",
            "commons.unknown_commons",
            "identity.unknown_token",
            "journal.entry_not_found",
            "judgement.unknown_finding",
            "movements.unknown_slip",
            "reports.no_such_member",
            "reports.no_such_season",
            "seasons.unknown_season",
            "web.not_here",
        ),
        status.HTTP_404_NOT_FOUND,
    ),
    **dict.fromkeys(
        ("cases.role_not_held", "procedure.wrong_role", "web.not_yours", "web.out_of_scope"),
        status.HTTP_403_FORBIDDEN,
    ),
    **dict.fromkeys(
        (
            "bylaws.no_edition_in_force",
            "bylaws.no_such_clause",
            "cases.finding_changed",
            "cases.finding_withdrawn",
            "cases.no_procedure",
            "journal.already_reversed",
            "journal.entry_is_reversal",
            "journal.not_open",
            "journal.size_not_reached",
            "movements.no_such_season",
            "movements.not_a_withdrawal",
            "movements.undone_after_close",
            "procedure.already_delivered",
            "procedure.before_last_move",
            "procedure.conflict_of_interest",
            "procedure.delivery_out_of_order",
            "procedure.delivery_unproved",
            "procedure.move_refused",
            "procedure.not_concerned",
            "procedure.not_delivered",
            "procedure.one_of_the_board",
            "procedure.part_missing",
            "procedure.too_early",
            "procedure.too_late",
            "procedure.wrong_state",
            "reports.season_still_open",
            "seasons.already_closed",
        ),
        status.HTTP_409_CONFLICT,
    ),
    "api.stale": status.HTTP_412_PRECONDITION_FAILED,
    "api.precondition_missing": status.HTTP_428_PRECONDITION_REQUIRED,
    "journal.key_reused": status.HTTP_422_UNPROCESSABLE_ENTITY,
    "journal.stopped": status.HTTP_503_SERVICE_UNAVAILABLE,
}
_CODE_OF = {
    status.HTTP_400_BAD_REQUEST: "api.unusable_request",
    status.HTTP_401_UNAUTHORIZED: "api.no_token",
    status.HTTP_403_FORBIDDEN: "api.refused",
    status.HTTP_404_NOT_FOUND: "api.no_such_address",
    status.HTTP_405_METHOD_NOT_ALLOWED: "api.no_such_method",
    status.HTTP_406_NOT_ACCEPTABLE: "api.no_such_form",
    status.HTTP_413_REQUEST_ENTITY_TOO_LARGE: "api.body_too_large",
    status.HTTP_415_UNSUPPORTED_MEDIA_TYPE: "api.unknown_form",
    status.HTTP_429_TOO_MANY_REQUESTS: "api.too_many_requests",
}
_TITLE_OF = {
    400: "The request cannot be used",
    401: "A token is needed",
    403: "This is not yours to do",
    404: "There is nothing here",
    405: "This address does not take that method",
    406: "This form is not given here",
    409: "The book stands otherwise",
    412: "This was changed meanwhile",
    413: "The body is too large",
    415: "This form is not taken here",
    422: "The key stands for another content",
    428: "Say which version you saw",
    429: "Too many requests",
    500: "The service failed",
    503: "Not now",
}


def problem(
    *, code: str, status_code: int, detail: str, errors: list[dict[str, str]] | None = None
) -> dict[str, Any]:
    """Return the members of a problem document; ``errors`` says which field is wrong, and why."""
    document: dict[str, Any] = {
        "type": f"/problems/{code}",
        "title": _TITLE_OF.get(status_code, "The request was refused"),
        "status": status_code,
        "detail": detail,
    }
    return document if errors is None else document | {"errors": errors}


def refusal(error: StintbookError) -> dict[str, Any]:
    """Return the problem document of a refusal by the book or by its rules."""
    return problem(
        code=error.code,
        status_code=STATUS_OF.get(error.code, status.HTTP_400_BAD_REQUEST),
        detail=str(error),
    )


def handle(error: Exception, context: Mapping[str, Any]) -> Response | None:
    """Answer an exception of a view with a problem document; others are faults and stay such."""
    if isinstance(error, StintbookError):
        document = refusal(error)
        headers = {"Retry-After": "3600"} if document["status"] == 503 else {}
        return _response(document, headers)
    response = exception_handler(error, dict(context))
    if response is None:
        return None
    if isinstance(error, exceptions.ValidationError):
        errors = list(_wrong_fields(error.detail))
        detail = "; ".join(f"{each['field']}: {each['detail']}" for each in errors[:10])
    else:
        errors, detail = None, str(getattr(error, "detail", "")) or "There is nothing here."
    document = problem(
        code=_CODE_OF.get(response.status_code, "api.unusable_request"),
        status_code=response.status_code,
        detail=detail,
        errors=errors,
    )
    kept = ("WWW-Authenticate", "Retry-After", "Allow")
    return _response(document, {name: response[name] for name in kept if name in response})


def bare(*, code: str, status_code: int, detail: str) -> HttpResponse:
    """Return a problem document where no view of the API has been reached."""
    document = problem(code=code, status_code=status_code, detail=detail)
    return HttpResponse(json.dumps(document), status=status_code, content_type=MEDIA_TYPE)


# No form of a browser leads here, so there is nothing for its guard to guard.
@csrf_exempt
def no_such_address(request: HttpRequest, *args: Any, **kwargs: Any) -> HttpResponse:
    """Answer an address of the API that does not exist."""
    return bare(
        code="api.no_such_address",
        status_code=status.HTTP_404_NOT_FOUND,
        detail="The API has no such address; GET /api/v1/schema lists all that it has.",
    )


def _response(document: dict[str, Any], headers: Mapping[str, str]) -> Response:
    return Response(
        document, status=document["status"], headers=dict(headers), content_type=MEDIA_TYPE
    )


def _wrong_fields(detail: Any, path: str = "") -> Iterator[dict[str, str]]:
    """Yield each complaint of a serializer with the place of its field."""
    if isinstance(detail, Mapping):
        for name, inner in detail.items():
            step = "" if name == "non_field_errors" else str(name)
            yield from _wrong_fields(inner, ".".join(filter(None, (path, step))))
    elif isinstance(detail, list):
        for place, inner in enumerate(detail):
            nested = isinstance(inner, Mapping | list)
            yield from _wrong_fields(inner, f"{path}[{place}]" if nested else path)
    else:
        yield {"field": path or "body", "detail": str(detail)}
