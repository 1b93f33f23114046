"""Advice as it was made: what went in, the seed, and what came out."""

from django.db import models

from ledger.foundation.appendonly import AppendOnlyModel


class AdviceMade(AppendOnlyModel):
    """One advice for a season; ``result`` is the whole of it, ``digest`` its SHA-256 in hex."""

    commons_id = models.BigIntegerField()
    season = models.SlugField(max_length=60)
    resource = models.CharField(max_length=40)
    seed = models.BigIntegerField()
    known_up_to = models.BigIntegerField()
    result = models.JSONField()
    digest = models.CharField(max_length=64)
    entry_number = models.BigIntegerField()
