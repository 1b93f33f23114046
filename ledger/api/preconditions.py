"""Keys that make a call happen once, and tags that keep two editors from overwriting each other."""

import re
from typing import ClassVar

from rest_framework.request import Request

from ledger.foundation.errors import LedgerError

KEY_SIGNS_MAX = 255
_KEY = re.compile(r"[!-~]{1,255}")


class KeyMissing(LedgerError):
    """A call that records something names no usable key."""

    code: ClassVar[str] = "api.key_missing"
    message: ClassVar[str] = (
        "Found {found} as Idempotency-Key; accepted are 1 to 255 printable signs without spaces,"
        " another for each entry."
    )


class PreconditionMissing(LedgerError):
    """A call that changes something does not say which version it saw."""

    code: ClassVar[str] = "api.precondition_missing"
    message: ClassVar[str] = "Found no If-Match; accepted is the ETag that the last answer gave."


class Stale(LedgerError):
    """Somebody else was quicker."""

    code: ClassVar[str] = "api.stale"
    message: ClassVar[str] = "Found If-Match {found}; it stands at {now}. Read it again."


def key(request: Request) -> str:
    """Return the key of a call.

    :raises KeyMissing: if there is none, or it cannot be used.
    """
    given = request.headers.get("Idempotency-Key")
    bare = (given or "").strip().strip('"')
    if not _KEY.fullmatch(bare):
        raise KeyMissing(found="nothing" if given is None else repr(given[:60]))
    return bare


def check_match(request: Request, *, now: str) -> None:
    """Pass if a call has seen the version that stands.

    :param now: the tag of that version, with its quotes.
    :raises PreconditionMissing: if it does not say what it saw.
    :raises Stale: if it saw another.
    """
    given = request.headers.get("If-Match")
    if given is None:
        raise PreconditionMissing
    if given.strip() != now:
        raise Stale(found=given[:60], now=now)
