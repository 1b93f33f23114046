"""The journal slice, as Django knows it."""

from django.apps import AppConfig


class JournalConfig(AppConfig):
    """Register the slice."""

    name = "ledger.journal"
    label = "journal"
    default_auto_field = "django.db.models.BigAutoField"
