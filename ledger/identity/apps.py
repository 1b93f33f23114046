"""The identity slice, as Django knows it."""

from django.apps import AppConfig


class IdentityConfig(AppConfig):
    """Register the slice."""

    name = "ledger.identity"
    label = "identity"
    default_auto_field = "django.db.models.BigAutoField"
