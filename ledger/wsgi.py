"""What a web server calls."""

import os
from importlib import import_module

from django.core.wsgi import get_wsgi_application
from django.db import connection

from ledger.foundation import durability, logs

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "ledger.settings")

application = get_wsgi_application()
# So that a fault in an address shows at the start, and the first caller does not wait a second.
import_module("ledger.urls")
logs.begin()
# A server must not take slips into a database that might lose them.
durability.check()
# The threads that answer open their own connections.
connection.close()
