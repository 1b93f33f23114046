"""The tables of the journal. An entry is named by (commons, number) everywhere.

Entries, postings and tiles are written once. A text can be erased. Head and balances move.
"""

from django.db import models

from ledger.foundation.appendonly import AppendOnlyModel
from ledger.journal.leaves import AMOUNT_MAX, AMOUNT_MIN, KEY_LENGTH, NAME_LENGTH


class Head(models.Model):
    """The one row of a commons that every writer locks: size, root and open edge of its tree."""

    commons_id = models.BigIntegerField(primary_key=True)
    journal_id = models.BinaryField()
    size = models.BigIntegerField()
    root = models.BinaryField()
    edge = models.BinaryField()
    recorded_at = models.DateTimeField()
    broken = models.TextField(default="")

    class Meta:
        constraints = (
            models.CheckConstraint(
                condition=models.Q(size__gte=0), name="journal_head_size_not_negative"
            ),
        )

    def __str__(self) -> str:
        return f"head of commons {self.commons_id} at {self.size}"


class Entry(AppendOnlyModel):
    """One numbered, sealed record."""

    pk = models.CompositePrimaryKey("commons_id", "number")
    commons_id = models.BigIntegerField()
    number = models.BigIntegerField()
    kind = models.CharField(max_length=NAME_LENGTH)
    occurred_at = models.DateTimeField()
    recorded_at = models.DateTimeField()
    day = models.DateField()
    by = models.BigIntegerField(db_column="recorded_by")
    device = models.CharField(max_length=KEY_LENGTH)
    key = models.CharField(max_length=KEY_LENGTH)
    reverses = models.BigIntegerField(null=True)
    subject = models.BigIntegerField(null=True)
    facts = models.TextField()
    commitments = models.TextField()
    salt = models.BinaryField()
    leaf_hash = models.BinaryField()

    class Meta:
        constraints = (
            models.CheckConstraint(
                condition=models.Q(number__gte=1), name="journal_entry_number_from_one"
            ),
            models.UniqueConstraint(
                fields=("commons_id", "device", "key"),
                condition=~models.Q(key=""),
                name="journal_entry_one_per_key",
            ),
            models.UniqueConstraint(
                fields=("commons_id", "reverses"),
                condition=models.Q(reverses__isnull=False),
                name="journal_entry_one_reversal",
            ),
            models.CheckConstraint(
                condition=models.Q(reverses__isnull=True)
                | models.Q(reverses__lt=models.F("number")),
                name="journal_entry_reverses_earlier",
            ),
        )
        indexes = (
            models.Index(fields=("commons_id", "kind", "day"), name="journal_entry_kind_day"),
            models.Index(fields=("commons_id", "subject", "number"), name="journal_entry_subject"),
        )

    def __str__(self) -> str:
        return f"entry {self.number} of commons {self.commons_id}"


class Posting(AppendOnlyModel):
    """One signed amount of an entry."""

    pk = models.CompositePrimaryKey("commons_id", "number", "line")
    commons_id = models.BigIntegerField()
    number = models.BigIntegerField()
    line = models.SmallIntegerField()
    account = models.CharField(max_length=KEY_LENGTH)
    resource = models.CharField(max_length=NAME_LENGTH)
    unit = models.CharField(max_length=NAME_LENGTH)
    amount = models.BigIntegerField()
    day = models.DateField()

    class Meta:
        indexes = (
            # Holds all that a sum over an account needs, on both databases.
            models.Index(
                fields=("commons_id", "account", "day", "number", "resource", "unit", "amount"),
                name="journal_posting_account",
            ),
        )

    def __str__(self) -> str:
        return f"{self.account}: {self.amount} {self.unit} of {self.resource}"


class Balance(models.Model):
    """The sum of an account's postings, kept by the transaction that appends them."""

    pk = models.CompositePrimaryKey("commons_id", "account", "resource", "unit")
    commons_id = models.BigIntegerField()
    account = models.CharField(max_length=KEY_LENGTH)
    resource = models.CharField(max_length=NAME_LENGTH)
    unit = models.CharField(max_length=NAME_LENGTH)
    amount = models.BigIntegerField()

    class Meta:
        constraints = (
            # SQLite would go on with a rounded float where a sum passes 64 bits.
            models.CheckConstraint(
                condition=models.Q(amount__gte=AMOUNT_MIN, amount__lte=AMOUNT_MAX),
                name="journal_balance_within_64_bits",
            ),
        )

    def __str__(self) -> str:
        return f"{self.account}: {self.amount} {self.unit} of {self.resource}"


class Text(models.Model):
    """A free text of an entry with the salt of its commitment; the one part that can be erased."""

    pk = models.CompositePrimaryKey("commons_id", "number", "name")
    commons_id = models.BigIntegerField()
    number = models.BigIntegerField()
    name = models.CharField(max_length=NAME_LENGTH)
    text = models.TextField()
    salt = models.BinaryField()

    def __str__(self) -> str:
        return f"{self.name} of entry {self.number} of commons {self.commons_id}"


class Tile(AppendOnlyModel):
    """A complete tile: 256 neighbouring hashes of tree level 8 x level, and the root over them."""

    pk = models.CompositePrimaryKey("commons_id", "level", "place")
    commons_id = models.BigIntegerField()
    level = models.SmallIntegerField()
    place = models.BigIntegerField()
    hashes = models.BinaryField()
    root = models.BinaryField()

    def __str__(self) -> str:
        return f"tile {self.level}/{self.place} of commons {self.commons_id}"
