"""The advice slice, as Django knows it."""

from django.apps import AppConfig


class AdviceConfig(AppConfig):
    """Register the slice."""

    name = "ledger.advice"
    label = "advice"
    default_auto_field = "django.db.models.BigAutoField"
