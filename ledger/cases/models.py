"""Cases and their events; where a case stands is what its events make of it."""

from django.db import models

from ledger.foundation.appendonly import AppendOnlyModel


class Case(AppendOnlyModel):
    """The procedure on one finding under one ladder; a finding that stands anew gets another."""

    commons_id = models.BigIntegerField()
    number = models.PositiveIntegerField()
    finding = models.PositiveIntegerField()
    ladder = models.CharField(max_length=80)

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["commons_id", "number"], name="case_number_once"),
        ]
        indexes = [models.Index(fields=["commons_id", "finding"], name="case_finding")]


class Event(AppendOnlyModel):
    """One move of a case, with the finding's version that it rests on and its entry.

    The reason stands among the texts of the entry, from which it can be erased.
    """

    commons_id = models.BigIntegerField()
    case = models.PositiveIntegerField()
    place = models.PositiveIntegerField()
    move = models.CharField(max_length=20)
    role = models.CharField(max_length=12)
    member = models.PositiveIntegerField(null=True)
    on = models.DateField()
    details = models.JSONField()
    effects = models.JSONField()
    finding_version = models.PositiveIntegerField()
    entry_number = models.BigIntegerField()

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["commons_id", "case", "place"], name="case_event_place_once"
            ),
        ]
