"""The outbox: work that was promised in the transaction that made it necessary."""

from django.db import models


class Job(models.Model):
    """One piece of promised work; it rings when due and its handler asks the book again."""

    commons_id = models.BigIntegerField()
    kind = models.CharField(max_length=64)
    key = models.CharField(max_length=255)
    due_at = models.DateTimeField()
    payload = models.JSONField()
    enqueued_at = models.DateTimeField()
    done_at = models.DateTimeField(null=True)
    outcome = models.TextField(default="")
    attempts = models.PositiveIntegerField(default=0)
    # Attempts in a row that began and never ended, because the worker went down in them.
    unended = models.PositiveIntegerField(default=0)
    last_error = models.TextField(default="")
    parked_at = models.DateTimeField(null=True)

    class Meta:
        constraints = (
            models.UniqueConstraint(
                fields=("commons_id", "kind", "key"), name="foundation_job_once"
            ),
        )
        indexes = (
            models.Index(
                fields=("due_at", "id"),
                name="foundation_job_due",
                condition=models.Q(done_at__isnull=True),
            ),
        )

    def __str__(self) -> str:
        return f"{self.kind} {self.key} of commons {self.commons_id}, due {self.due_at}"
