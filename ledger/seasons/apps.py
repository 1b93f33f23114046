"""The seasons slice, as Django knows it."""

from django.apps import AppConfig


class SeasonsConfig(AppConfig):
    """Register the slice."""

    name = "ledger.seasons"
    label = "seasons"
    default_auto_field = "django.db.models.BigAutoField"
