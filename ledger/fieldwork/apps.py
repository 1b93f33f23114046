"""The fieldwork slice, as Django knows it."""

from django.apps import AppConfig


class FieldworkConfig(AppConfig):
    """Register the slice."""

    name = "ledger.fieldwork"
    label = "fieldwork"
    default_auto_field = "django.db.models.BigAutoField"
