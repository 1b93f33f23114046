"""The browser for tests: the one that the environment names, and none beside it."""

import os
from collections.abc import Iterator
from contextlib import contextmanager

from playwright import sync_api

BROWSER = "STINTBOOK_TEST_BROWSER"
_QUIETLY = (
    "--no-sandbox",
    "--disable-gpu",
    "--disable-dev-shm-usage",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
    "--no-first-run",
)


@contextmanager
def opened() -> Iterator[sync_api.Browser]:
    """Open the browser, without a window and without a word to anybody, and close it afterwards."""
    with sync_api.sync_playwright() as playwright:
        browser = playwright.chromium.launch(
            executable_path=os.environ[BROWSER], args=list(_QUIETLY)
        )
        try:
            yield browser
        finally:
            browser.close()
