"""Operations require a transaction; doors open it with ``django.db.transaction.atomic``."""

from collections.abc import Callable
from functools import wraps
from typing import ClassVar, ParamSpec, TypeVar

from django.db import connection

from ledger.foundation.errors import LedgerError

Parameters = ParamSpec("Parameters")
Result = TypeVar("Result")


class NoTransaction(LedgerError):
    """An operation was called outside a transaction."""

    code: ClassVar[str] = "foundation.no_transaction"
    message: ClassVar[str] = "{operation} must be called inside a transaction."


def required(operation: Callable[Parameters, Result]) -> Callable[Parameters, Result]:
    """Refuse to run an operation outside a transaction, so that its parts commit together.

    :raises NoTransaction: when the operation is called outside one.
    """

    @wraps(operation)
    def checked(*args: Parameters.args, **kwargs: Parameters.kwargs) -> Result:
        if not connection.in_atomic_block:
            raise NoTransaction(operation=operation.__name__)
        return operation(*args, **kwargs)

    return checked
