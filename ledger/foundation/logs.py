"""Log lines of the processes that serve: one JSON object a line, and never a secret.

Commands stay as quiet as they are: only a process that calls ``begin`` writes such lines.
"""

import json
import logging
import logging.config
from collections.abc import Iterator
from contextlib import contextmanager
from contextvars import ContextVar
from datetime import UTC, datetime
from typing import Any

# What is known of the request in hand; None outside a request.
_request: ContextVar[dict[str, Any] | None] = ContextVar("stintbook_request", default=None)


class JsonLine(logging.Formatter):
    """Write a record as one line of JSON, in which no line can be forged."""

    def format(self, record: logging.LogRecord) -> str:
        """Return the line: UTC time, level, logger, message, and what is known of the request."""
        line: dict[str, Any] = {
            "time": datetime.fromtimestamp(record.created, tz=UTC).isoformat(
                timespec="milliseconds"
            ),
            "level": record.levelname.lower(),
            "logger": record.name,
            "message": record.getMessage(),
            **known(),
            **getattr(record, "facts", {}),
        }
        if record.exc_info:
            line["error"] = self.formatException(record.exc_info)
        # ASCII alone: some readers break lines at other signs than a line feed.
        return json.dumps(line, ensure_ascii=True, default=str)


class WithoutPaths(logging.Filter):
    """Take addresses out of Django's own messages: the secret of a card may stand in one."""

    def filter(self, record: logging.LogRecord) -> bool:
        """Put a sign in the place of every address; let the record pass."""
        if isinstance(record.args, tuple):
            record.args = tuple(
                "…" if isinstance(each, str) and each.startswith("/") else each
                for each in record.args
            )
        return True


_LOGGING: dict[str, Any] = {
    "version": 1,
    "disable_existing_loggers": False,
    "filters": {"without_paths": {"()": WithoutPaths}},
    "formatters": {"json": {"()": JsonLine}},
    "handlers": {
        "lines": {
            "class": "logging.StreamHandler",
            "stream": "ext://sys.stdout",
            "formatter": "json",
            "filters": ["without_paths"],
        }
    },
    "root": {"handlers": ["lines"], "level": "INFO"},
    "loggers": {
        "django": {"handlers": [], "level": "INFO", "propagate": True},
        # What was not found or not allowed has its line as a request already.
        "django.request": {"level": "ERROR"},
        "django.server": {"handlers": [], "propagate": True},
        "gunicorn.error": {"handlers": [], "propagate": True},
    },
}


def begin() -> None:
    """Have this process write its log to standard output, one JSON object a line."""
    logging.config.dictConfig(_LOGGING)


@contextmanager
def of_request(**facts: Any) -> Iterator[None]:
    """Give every line written meanwhile what is known of a request."""
    token = _request.set(dict(facts))
    try:
        yield
    finally:
        _request.reset(token)


def note(**facts: Any) -> None:
    """Add to what is known of the request in hand; outside a request there is nothing to add to."""
    known_by_now = _request.get()
    if known_by_now is not None:
        known_by_now.update(facts)


def known() -> dict[str, Any]:
    """Return what is known of the request in hand; outside a request, nothing."""
    return dict(_request.get() or {})
