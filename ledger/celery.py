"""The doorbell: Celery calls the workers, the work itself lies in rows of the database."""

import os

from celery import Celery

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "ledger.settings")

app = Celery("stintbook", include=["ledger.tasks.bell", "ledger.tasks.starting"])
app.config_from_object("django.conf:settings", namespace="CELERY")
