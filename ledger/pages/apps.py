"""The pages, as Django knows them: their templates and their static files."""

from django.apps import AppConfig


class PagesConfig(AppConfig):
    """Register the door."""

    name = "ledger.pages"
    label = "pages"
