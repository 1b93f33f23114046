"""The judgement slice, as Django knows it."""

from django.apps import AppConfig


class JudgementConfig(AppConfig):
    """Register the slice."""

    name = "ledger.judgement"
    label = "judgement"
    default_auto_field = "django.db.models.BigAutoField"
