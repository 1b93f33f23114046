"""The whole service in one process: web, worker and clock, each in threads of its own.

The bell is in memory and the work in rows: what was promised when the process ended, or fell due
while it was off, is done as soon as it starts again.
"""

import logging
import queue
import threading
import time
from collections.abc import Callable
from typing import Any

from celery.beat import Scheduler, Service
from celery.worker import WorkController
from django.conf import settings
from django.core.wsgi import get_wsgi_application
from django.db import connection
from waitress.server import create_server

from ledger.celery import app
from ledger.foundation import ringing
from ledger.management import stopping
from ledger.tasks import bell

WEB_THREADS = 8
# Requests in hand when the service stops get so long to end.
LAST_REQUESTS_SECONDS = 30.0
START_SECONDS = 10.0
logger = logging.getLogger(__name__)


def serve(*, address: str, port: int, started: Callable[[str], None]) -> bool:
    """Serve until a signal says stop; return whether it ended because of one.

    The job and the requests in hand are finished first. False means that one of the parts ended by
    itself, which the log explains.

    :param started: is given the address at which the service answers.
    :raises OSError: if the address is not free.
    """
    stop = stopping.on_signal()
    _ring_in_memory()
    web = create_server(
        get_wsgi_application(),
        host=address,
        port=port,
        threads=WEB_THREADS,
        # Behind HTTPS the proxy says so in a header, which the server would take away otherwise.
        clear_untrusted_proxy_headers=not settings.HTTPS,
    )
    clock = Service(app, max_interval=1.0, scheduler_cls=Scheduler)
    ready: queue.Queue[Any] = queue.Queue()
    broken = threading.Event()
    parts = {"worker": lambda: _work(ready), "clock": clock.start, "web": web.run}
    for name, run in parts.items():
        _start(name, run, stop=stop, broken=broken)
    ringing.ring()
    started(f"http://{address}:{port}/")
    stop.wait()
    bell.closing.set()
    clock.stop()
    _finish_requests(web)
    _finish_job(ready)
    return not broken.is_set()


def _ring_in_memory() -> None:
    """Have the bell ring in this process, whatever broker the settings name."""
    app.conf.broker_url = "memory://localhost/"
    app.conf.broker_transport_options = {"polling_interval": 0.1}
    ringing.answer_here()


def _work(ready: queue.Queue[Any]) -> None:
    """Run a worker whose jobs run in threads: one on SQLite, where one writes at a time.

    It is made in its own thread, for it closes the connection of the thread that makes it, and the
    main one may hold a lock by that.

    :param ready: is given the worker once it listens; until then it cannot be stopped.
    """
    WorkController(
        app=app,
        pool_cls="threads",
        concurrency=1 if connection.vendor == "sqlite" else 2,
        without_gossip=True,
        without_mingle=True,
        without_heartbeat=True,
        hostname="serve@localhost",
        ready_callback=lambda consumer: ready.put(consumer.controller),
    ).start()


def _finish_job(ready: queue.Queue[Any]) -> None:
    """Stop the worker once the job in hand is done; one that never listened has none."""
    try:
        worker = ready.get(timeout=START_SECONDS)
    except queue.Empty:
        return
    worker.stop()


def _start(
    name: str, run: Callable[[], Any], *, stop: threading.Event, broken: threading.Event
) -> None:
    """Start a part of the service; if it ends by itself, the others stop too."""

    def runs() -> None:
        try:
            run()
        except BaseException:  # A part may leave with SystemExit too.
            logger.exception("the %s broke", name)
        if not stop.is_set():
            broken.set()
            stop.set()

    threading.Thread(target=runs, name=f"stintbook-{name}", daemon=True).start()


def _finish_requests(web: Any) -> None:
    """Take no more calls; give those in hand time to be answered, down to the last byte."""
    until = time.monotonic() + LAST_REQUESTS_SECONDS
    channels = list(web._map.values()) if hasattr(web, "_map") else list(web.map.values())
    for each in channels:
        if getattr(each, "accepting", False):
            each.close()
    while time.monotonic() < until and any(_is_busy(each) for each in channels):
        time.sleep(0.05)
    web.task_dispatcher.shutdown(timeout=1)


def _is_busy(channel: Any) -> bool:
    """Return whether a connection has a request in hand, or bytes of an answer on their way."""
    return bool(getattr(channel, "requests", None) or getattr(channel, "total_outbufs_len", 0))
