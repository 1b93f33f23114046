"""Read a JSON body strictly: what two readers could read in two ways is refused.

Django REST framework's own parser answers a hundred kilobytes of ``[`` with an uncaught
RecursionError, keeps the last of two equal keys without a word, and lets through lone surrogates
that no PostgreSQL text can hold.
"""

import json
import re
from collections.abc import Mapping
from typing import IO, Any

from rest_framework import status
from rest_framework.exceptions import APIException, ParseError
from rest_framework.parsers import BaseParser

BODY_BYTES_MAX = 1_000_000
DEPTH_MAX = 20
DIGITS_MAX = 30
# Nothing is given back once it was read, so that a text without end takes no longer than another.
_STRING_OR_BRACKET = re.compile(rb'"(?:[^"\\]++|\\.)*+(?:"|\\?\Z)|[\[\]{}]', re.DOTALL)
_SURROGATE = re.compile("[\ud800-\udfff]")


class BodyTooLarge(APIException):
    """A body is longer than any that the API needs."""

    status_code = status.HTTP_413_REQUEST_ENTITY_TOO_LARGE
    default_detail = f"The body is too large; accepted are {BODY_BYTES_MAX} bytes."


class StrictJSONParser(BaseParser):
    """Accept one JSON value in UTF-8, at most twenty deep, with every key once."""

    media_type = "application/json"

    def parse(
        self,
        stream: IO[Any],
        media_type: str | None = None,
        parser_context: Mapping[str, Any] | None = None,
    ) -> Any:
        """Return the value of a body.

        :raises BodyTooLarge: if the body is too long to be looked at.
        :raises ParseError: if the body is no such value; it says why.
        """
        # The framework reads past Django's own limit, and a value takes thirty times its text.
        body = stream.read(BODY_BYTES_MAX + 1)
        if len(body) > BODY_BYTES_MAX:
            raise BodyTooLarge
        return parse(body)


def parse(body: bytes) -> Any:
    """Return the value of a body.

    :raises ParseError: if it is not one JSON value in UTF-8, is nested too deeply, names a key
        twice, or holds a number or a text that cannot be kept.
    """
    _check_depth(body)
    try:
        text = body.decode("utf-8")
    except UnicodeDecodeError as error:
        raise ParseError("The body is not UTF-8; accepted is JSON in UTF-8.") from error
    try:
        value = json.loads(
            text,
            object_pairs_hook=_once,
            parse_constant=_refuse_constant,
            parse_int=_whole,
            parse_float=_refuse_long,
        )
    except ParseError:
        raise
    except ValueError as error:
        raise ParseError(f"The body is not JSON: {error}") from error
    if _SURROGATE.search(json.dumps(value, ensure_ascii=False)):
        raise ParseError("A text holds half a sign (a lone surrogate); accepted are whole signs.")
    return value


def _check_depth(body: bytes) -> None:
    depth = 0
    for found in _STRING_OR_BRACKET.finditer(body):
        sign = found.group()
        if sign in b"[{":
            depth += 1
        elif sign in b"]}":
            depth -= 1
        if depth > DEPTH_MAX:
            raise ParseError(f"The body is nested too deeply; accepted are {DEPTH_MAX} levels.")


def _once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    found = dict(pairs)
    if len(found) != len(pairs):
        twice = next(key for key, _ in pairs if sum(key == other for other, _ in pairs) > 1)
        raise ParseError(f"Found the name {twice[:60]!r} twice in one object; accepted is once.")
    return found


def _refuse_constant(found: str) -> Any:
    raise ParseError(f"Found {found}; accepted are numbers as JSON has them.")


def _whole(digits: str) -> int:
    if len(digits) > DIGITS_MAX:
        raise ParseError(f"Found a number of {len(digits)} digits; accepted are {DIGITS_MAX}.")
    return int(digits)


def _refuse_long(digits: str) -> Any:
    raise ParseError(
        f"Found the number {digits[:DIGITS_MAX]}; accepted are whole numbers, and amounts as texts."
    )
