"""How far the judge has read, and the findings it made, version by version."""

from django.db import models

from ledger.foundation.appendonly import AppendOnlyModel


class Cursor(models.Model):
    """The last entry and the last day that the judge has taken into account."""

    commons_id = models.BigIntegerField(primary_key=True)
    judged_up_to = models.BigIntegerField(default=0)
    judged_on = models.DateField(null=True)


class FindingVersion(AppendOnlyModel):
    """One version of a finding; the last one holds, and may say that the finding is withdrawn."""

    commons_id = models.BigIntegerField()
    finding = models.PositiveIntegerField()
    version = models.PositiveIntegerField()
    standing = models.BooleanField()
    clause = models.CharField(max_length=80)
    subject_kind = models.CharField(max_length=10)
    subject = models.PositiveIntegerField()
    resource = models.CharField(max_length=40)
    window_first = models.DateField()
    window_until = models.DateField()
    edition = models.PositiveIntegerField()
    or_else = models.CharField(max_length=80)
    base = models.CharField(max_length=20)
    total = models.BigIntegerField()
    limit = models.BigIntegerField()
    breach = models.BigIntegerField()
    overuse = models.BigIntegerField()
    entries = models.JSONField()
    working = models.JSONField()
    inputs = models.CharField(max_length=64)
    judged_up_to = models.BigIntegerField()
    judged_on = models.DateField()

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["commons_id", "finding", "version"], name="finding_version_once"
            ),
        ]
        indexes = [
            models.Index(fields=["commons_id", "subject_kind", "subject"], name="finding_subject"),
        ]
