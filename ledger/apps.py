"""The project itself, as Django knows it: it holds the commands."""

from django.apps import AppConfig


class LedgerConfig(AppConfig):
    """Register the commands."""

    name = "ledger"
    label = "ledger"
