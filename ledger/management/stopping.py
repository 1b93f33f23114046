"""When a process that serves is told to stop."""

import signal
import threading


def on_signal() -> threading.Event:
    """Return an event that is set once this process is interrupted or told to end."""
    stop = threading.Event()
    for each in (signal.SIGINT, signal.SIGTERM):
        signal.signal(each, lambda *_: stop.set())
    return stop
