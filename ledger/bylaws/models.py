"""Editions of a bylaw book, as adopted."""

from django.db import models

from ledger.foundation.appendonly import AppendOnlyModel


class Edition(AppendOnlyModel):
    """The text of an edition, its SHA-256 in hex, and the entry that adopted it."""

    commons_id = models.BigIntegerField()
    number = models.PositiveIntegerField()
    text = models.TextField()
    digest = models.CharField(max_length=64)
    in_force_from = models.DateField()
    entry_number = models.BigIntegerField()

    class Meta(AppendOnlyModel.Meta):
        constraints = [
            models.UniqueConstraint(fields=["commons_id", "number"], name="edition_number_once"),
            models.UniqueConstraint(
                fields=["commons_id", "in_force_from"], name="edition_in_force_once"
            ),
        ]
