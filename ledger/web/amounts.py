"""Amounts as people write them: digits of any script, a decimal point or a decimal comma."""

import re
import unicodedata
from decimal import Decimal
from typing import ClassVar

from ledger.foundation.errors import LedgerError

SIGNS_MAX = 30
_WRITTEN = re.compile(r"[0-9]+(?:\.[0-9]+)?")
_MARKS = str.maketrans({",": ".", "٫": "."})


class NotAnAmount(LedgerError):
    """A text is not an amount."""

    code: ClassVar[str] = "web.not_an_amount"
    message: ClassVar[str] = (
        "Found {found!r}; accepted are digits with at most one decimal point or comma, such as"
        " 12.5 or 12,5."
    )


def parse_amount(text: str) -> Decimal:
    """Return the amount that a text says; there is no mark for thousands and no exponent.

    :raises NotAnAmount: if it says none, or is far too long.
    """
    written = "".join(_plain(sign) for sign in text.strip()).translate(_MARKS)
    if len(written) > SIGNS_MAX or not _WRITTEN.fullmatch(written):
        raise NotAnAmount(found=text[: SIGNS_MAX + 1])
    return Decimal(written)


def _plain(sign: str) -> str:
    """Return a decimal digit of any script as one of 0 to 9, and any other sign as it is."""
    value = unicodedata.decimal(sign, None)
    return sign if value is None else str(value)
