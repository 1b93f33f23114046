#!/usr/bin/env python
"""Run a command of the book."""

import os
import sys

from django.core.exceptions import ImproperlyConfigured
from django.core.management import execute_from_command_line
from django.db.utils import OperationalError

if __name__ == "__main__":
    os.environ.setdefault("DJANGO_SETTINGS_MODULE", "ledger.settings")
    try:
        execute_from_command_line(sys.argv)
    except ImproperlyConfigured as error:
        sys.exit(f"A setting is wrong. {error}")
    except OperationalError as error:
        sys.exit(f"The database does not answer: {str(error).strip()}")
