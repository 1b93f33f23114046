"""Operations refuse to run outside a transaction."""

import pytest
from django.db import transaction

from ledger.foundation import transactions
from tests.conftest import CommittingDatabase


@transactions.required
def _double(*, number: int) -> int:
    """Return twice the number."""
    return 2 * number


def test_outside_a_transaction_is_refused(committing_db: CommittingDatabase) -> None:
    with pytest.raises(transactions.NoTransaction, match="_double must be called inside"):
        _double(number=2)


def test_inside_a_transaction_runs(committing_db: CommittingDatabase) -> None:
    with transaction.atomic():
        assert _double(number=2) == 4


def test_keeps_name_and_docstring() -> None:
    assert (_double.__name__, _double.__doc__) == ("_double", "Return twice the number.")
