"""The foundation slice, as Django knows it."""

from django.apps import AppConfig


class FoundationConfig(AppConfig):
    """Register the slice."""

    name = "ledger.foundation"
    label = "foundation"
    default_auto_field = "django.db.models.BigAutoField"
