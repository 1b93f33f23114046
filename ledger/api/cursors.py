"""Lists that lead on by the last number seen, so that new entries shift nothing."""

from dataclasses import dataclass
from itertools import islice
from typing import Any
from urllib.parse import urlencode

from drf_spectacular.utils import OpenApiParameter
from rest_framework import serializers
from rest_framework.request import Request
from rest_framework.response import Response

from ledger.api import answers, fields
from ledger.journal import queries as journal
from ledger.web.visitors import Visitor

PAGE, PAGE_MAX = 50, 200


class Query(fields.StrictSerializer):
    """How a list of entries is asked for."""

    after = serializers.IntegerField(min_value=0, max_value=fields.ENTRY_MAX, default=0)
    limit = serializers.IntegerField(min_value=1, max_value=PAGE_MAX, default=PAGE)
    member = fields.whole(required=False)
    kind = serializers.RegexField(r"^[a-z_]{1,64}$", required=False, max_length=64)


PARAMETERS = [
    OpenApiParameter(
        name, {"type": "integer", "minimum": least, "maximum": most}, OpenApiParameter.QUERY
    )
    for name, least, most in (
        ("after", 0, fields.ENTRY_MAX),
        ("limit", 1, PAGE_MAX),
        ("member", 1, fields.NUMBER_MAX),
    )
] + [
    OpenApiParameter(
        "kind",
        {"type": "string", "pattern": "^[a-z_]{1,64}$", "maxLength": 64},
        OpenApiParameter.QUERY,
    )
]


@dataclass(frozen=True, slots=True, kw_only=True)
class Asked:
    """From which number on, how many, about whom and of which kind."""

    after: int
    limit: int
    member: int | None
    kind: str | None


def asked(request: Request) -> Asked:
    """Return what a request asks for.

    :raises rest_framework.serializers.ValidationError: if a parameter is unknown or out of bounds.
    """
    query = Query(data=dict(request.query_params.items()))
    query.is_valid(raise_exception=True)
    found = query.validated_data
    return Asked(
        after=found["after"],
        limit=found["limit"],
        member=found.get("member"),
        kind=found.get("kind"),
    )


def answer(request: Request, *, visitor: Visitor, asked: Asked) -> Response:
    """Return a part of the journal; ``next`` and the Link header (RFC 8288) lead to the following.

    Who may not see everybody's entries is given their own. A part may hold fewer than asked for,
    where some are not for the visitor.
    """
    sees_all = visitor.sees_entry_about(0)
    member = asked.member if sees_all else visitor.member
    found = journal.entries(
        commons_id=visitor.commons.commons_id,
        after=asked.after,
        subject=member,
        kinds=None if asked.kind is None else (asked.kind,),
    )
    part = list(islice(found, asked.limit + 1))
    read = part[: asked.limit]
    more = _next(request, asked, read[-1].number) if len(part) > asked.limit else None
    shown = [each for each in read if visitor.sees_entry(kind=each.kind, subject=each.subject)]
    document: dict[str, Any] = {"entries": [answers.entry(each) for each in shown], "next": more}
    return Response(document, headers={"Link": f'<{more}>; rel="next"'} if more else {})


def _next(request: Request, asked: Asked, last: int) -> str:
    query = {
        "after": last,
        "limit": asked.limit,
        "member": asked.member,
        "kind": asked.kind,
    }
    kept = {name: value for name, value in query.items() if value is not None}
    return f"{request.path}?{urlencode(kept)}"
