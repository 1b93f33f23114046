"""The bylaws slice, as Django knows it."""

from django.apps import AppConfig


class BylawsConfig(AppConfig):
    """Register the slice."""

    name = "ledger.bylaws"
    label = "bylaws"
    default_auto_field = "django.db.models.BigAutoField"
