"""Rows that are written once: the model refuses to change them.

The database refuses too: every concrete subclass of :class:`AppendOnlyModel` gets the triggers of
:mod:`ledger.foundation.triggers`.
"""

from collections.abc import Iterable
from typing import Any, ClassVar, NoReturn, TypeVar

from django.db import models

from ledger.foundation.errors import LedgerError

Row = TypeVar("Row", bound=models.Model)


class RowIsSealed(LedgerError):
    """A row that is written once was to be changed or deleted."""

    code: ClassVar[str] = "foundation.row_is_sealed"
    message: ClassVar[str] = "Rows of {table} are sealed; {act} is refused."


class AppendOnlyQuerySet(models.QuerySet[Row]):
    """A query set that adds rows and changes none."""

    def _refuse(self, act: str) -> NoReturn:
        raise RowIsSealed(table=self.model._meta.db_table, act=act)

    def update(self, **kwargs: Any) -> int:
        """Refuse.

        :raises RowIsSealed: always.
        """
        self._refuse("update")

    def delete(self) -> tuple[int, dict[str, int]]:
        """Refuse.

        :raises RowIsSealed: always.
        """
        self._refuse("delete")

    def bulk_update(self, *args: Any, **kwargs: Any) -> int:
        """Refuse.

        :raises RowIsSealed: always.
        """
        self._refuse("bulk_update")

    def update_or_create(self, *args: Any, **kwargs: Any) -> tuple[Row, bool]:
        """Refuse.

        :raises RowIsSealed: always.
        """
        self._refuse("update_or_create")

    def bulk_create(self, objs: Iterable[Row], *args: Any, **kwargs: Any) -> list[Row]:
        """Add rows.

        :raises RowIsSealed: if rows that stand already were to be updated.
        """
        if kwargs.get("update_conflicts"):
            self._refuse("bulk_create with update_conflicts")
        return super().bulk_create(objs, *args, **kwargs)


class AppendOnlyModel(models.Model):
    """A row that is written once and never changed or deleted."""

    rows_are_sealed: ClassVar[bool] = True
    objects = models.Manager.from_queryset(AppendOnlyQuerySet)()

    class Meta:
        abstract = True
        base_manager_name = "objects"

    def save(self, *args: Any, **kwargs: Any) -> None:
        """Insert a new row.

        :raises RowIsSealed: if the row was read from the database or saved before.
        """
        if not self._state.adding:
            raise RowIsSealed(table=self._meta.db_table, act="save")
        kwargs["force_insert"] = True
        super().save(*args, **kwargs)

    def delete(self, *args: Any, **kwargs: Any) -> NoReturn:
        """Refuse.

        :raises RowIsSealed: always.
        """
        raise RowIsSealed(table=self._meta.db_table, act="delete")
