"""Season windows of a resource, and the decisions on what may be taken in them."""

from django.db import models

from ledger.foundation.appendonly import AppendOnlyModel


class Season(AppendOnlyModel):
    """A dated window of a resource."""

    commons_id = models.BigIntegerField()
    code = models.SlugField(max_length=60)
    resource = models.CharField(max_length=40)
    first_day = models.DateField()
    until_day = models.DateField()
    entry_number = models.BigIntegerField()

    class Meta(AppendOnlyModel.Meta):
        constraints = [
            models.UniqueConstraint(fields=["commons_id", "code"], name="season_code_once"),
            models.CheckConstraint(
                condition=models.Q(until_day__gt=models.F("first_day")), name="season_holds_a_day"
            ),
        ]


class Allowable(AppendOnlyModel):
    """How much may be taken in a season, as decided; one for each season."""

    commons_id = models.BigIntegerField()
    season = models.SlugField(max_length=60)
    amount = models.BigIntegerField()
    reserve = models.BigIntegerField()
    entry_number = models.BigIntegerField()

    class Meta(AppendOnlyModel.Meta):
        constraints = [
            models.UniqueConstraint(fields=["commons_id", "season"], name="allowable_once"),
            models.CheckConstraint(
                condition=models.Q(amount__gte=0, reserve__gte=0), name="allowable_not_negative"
            ),
        ]


class Close(AppendOnlyModel):
    """The one close of a season."""

    commons_id = models.BigIntegerField()
    season = models.SlugField(max_length=60)
    entry_number = models.BigIntegerField()

    class Meta(AppendOnlyModel.Meta):
        constraints = [
            models.UniqueConstraint(fields=["commons_id", "season"], name="season_closed_once"),
        ]
