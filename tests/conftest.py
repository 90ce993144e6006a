"""Fixtures every group of tests shares: the repository, a browser, a web server of one folder."""

from __future__ import annotations

import functools
import os
import threading
from collections.abc import Callable, Iterator
from http.server import SimpleHTTPRequestHandler, ThreadingHTTPServer
from pathlib import Path

import pytest
from hypothesis import settings
from playwright.sync_api import Browser, ConsoleMessage, Error, Page, sync_playwright

# The same random cases in every run: what fails for one fails for all.
settings.register_profile("same", derandomize=True)
settings.load_profile("same")

NO_BROWSER = (
    "Chromium not found: install Debian's chromium (apt-get install chromium) or set CHROMIUM"
)
# The browser is to ask nothing of anyone by itself, so that every request seen is the page's own.
BROWSER_ARGUMENTS = [
    "--no-sandbox",
    "--disable-gpu",
    "--disable-background-networking",
    "--no-first-run",
    "--disable-component-update",
    "--disable-sync",
    "--disable-quic",
]


@pytest.fixture(scope="session")
def repository() -> Path:
    """The root folder of the project."""
    return Path(__file__).resolve().parent.parent


@pytest.fixture(scope="session")
def browser() -> Iterator[Browser]:
    """Chromium, started once; a machine without it fails the tests that need it."""
    program = os.environ.get("CHROMIUM", "/usr/bin/chromium")
    if not Path(program).is_file():
        pytest.fail(NO_BROWSER, pytrace=False)
    with sync_playwright() as play:
        try:
            started = play.chromium.launch(executable_path=program, args=BROWSER_ARGUMENTS)
        except Error as error:
            reason = str(error).splitlines()[0]
            pytest.fail(f"{program} did not start: {reason}", pytrace=False)
        yield started
        started.close()


@pytest.fixture
def page_errors() -> list[str]:
    """What the page complained of: uncaught errors and console errors.

    A test that expects one takes it out (`page_errors.clear()`); whatever is left fails the test.
    """
    return []


@pytest.fixture
def page(browser: Browser, page_errors: list[str]) -> Iterator[Page]:
    """A blank page in a context of its own; fails the test when the page complained."""
    context = browser.new_context()
    opened = context.new_page()

    def hear(message: ConsoleMessage) -> None:
        if message.type == "error":
            page_errors.append(f"console: {message.text}")

    opened.on("console", hear)
    opened.on("pageerror", lambda error: page_errors.append(f"uncaught: {error}"))
    yield opened
    context.close()
    if page_errors:
        pytest.fail("the page complained: " + "; ".join(page_errors), pytrace=False)


class _QuietHandler(SimpleHTTPRequestHandler):
    """Serves files without writing a line for each."""

    def log_message(self, format: str, *args: object) -> None:
        """Say nothing: the test's own output is what is read."""


@pytest.fixture
def local_server() -> Iterator[Callable[[Path], str]]:
    """`local_server(folder)` serves the folder on 127.0.0.1 and returns its address, no slash."""
    running: list[tuple[ThreadingHTTPServer, threading.Thread]] = []

    def serve(folder: Path) -> str:
        handler = functools.partial(_QuietHandler, directory=str(folder))
        server = ThreadingHTTPServer(("127.0.0.1", 0), handler)
        thread = threading.Thread(target=server.serve_forever, daemon=True)
        thread.start()
        running.append((server, thread))
        return f"http://127.0.0.1:{server.server_address[1]}"

    yield serve
    for server, thread in running:
        server.shutdown()
        thread.join()
        server.server_close()
