"""The foundation slice, as Django knows it."""

from typing import Any

from django.apps import AppConfig
from django.db import connections
from django.db.models.signals import post_migrate

from ledger.foundation import triggers


def _reinstall_triggers(*, using: str, **kwargs: Any) -> None:
    triggers.install_triggers(connections[using])


class FoundationConfig(AppConfig):
    """Register the slice; seal append-only tables after every migrate."""

    name = "ledger.foundation"
    label = "foundation"
    default_auto_field = "django.db.models.BigAutoField"

    def ready(self) -> None:
        """Have every migrate put the triggers back."""
        post_migrate.connect(_reinstall_triggers, sender=self)
