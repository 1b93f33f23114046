"""The root of the errors that the book raises on purpose."""

from typing import ClassVar

from governance.errors import StintbookError


class LedgerError(StintbookError):
    """A request that the book refuses."""

    code: ClassVar[str] = "ledger"
