"""The movements slice, as Django knows it."""

from django.apps import AppConfig


class MovementsConfig(AppConfig):
    """Register the slice."""

    name = "ledger.movements"
    label = "movements"
    default_auto_field = "django.db.models.BigAutoField"
