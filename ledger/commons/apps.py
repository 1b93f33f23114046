"""The commons slice, as Django knows it."""

from django.apps import AppConfig


class CommonsConfig(AppConfig):
    """Register the slice."""

    name = "ledger.commons"
    label = "commons"
    default_auto_field = "django.db.models.BigAutoField"
