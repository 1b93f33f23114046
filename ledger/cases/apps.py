"""The cases slice, as Django knows it."""

from django.apps import AppConfig


class CasesConfig(AppConfig):
    """Register the slice."""

    name = "ledger.cases"
    label = "cases"
    default_auto_field = "django.db.models.BigAutoField"
