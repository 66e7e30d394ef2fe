"""One browser for all tests, one server and one page for each; skipped with a reason where there is no browser."""

import os
import shutil
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

import pytest

from tests.web.conftest import Running, start_server

CHROMIUM = "/usr/bin/chromium"
FLAGS = [
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]


def missing() -> str:
    """Why no browser can be driven here, or ""."""
    if shutil.which(CHROMIUM) is None:
        return f"there is no {CHROMIUM}"
    try:
        import playwright.sync_api  # noqa: F401
    except ImportError:
        return "playwright is not installed"
    return ""


# for a module at a time: while it is open, playwright keeps an event loop that other tests would stumble over
@pytest.fixture(scope="module")
def browser() -> Iterator[Any]:
    """Chromium, driven by playwright.  Where it is missing the tests are skipped, except in CI."""
    reason = missing()
    if reason and os.environ.get("CI"):
        pytest.fail(f"browser tests must run here, but {reason}")
    if reason:
        pytest.skip(reason)
    from playwright.sync_api import sync_playwright

    with sync_playwright() as driver:
        opened = driver.chromium.launch(executable_path=CHROMIUM, args=FLAGS)
        yield opened
        opened.close()


@pytest.fixture(scope="session")
def shared_server(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Running]:
    """A server for tests that begin with a problem of their own."""
    running = start_server(tmp_path_factory.mktemp("desk"), "--port", "0")
    yield running
    running.stop()


class Desk:
    """A page at the desk, with what it asked for and complained about."""

    def __init__(self, page: Any, address: str) -> None:
        self.page = page
        self.address = address
        self.requests: list[str] = []
        self.complaints: list[str] = []
        page.on("request", lambda request: self.requests.append(request.url))
        page.on("console", lambda message: self.complaints.append(message.text))
        page.on("pageerror", lambda error: self.complaints.append(str(error)))
        page.set_default_timeout(15_000)

    def open(self) -> "Desk":
        self.page.goto(self.address)
        return self

    def answer(self) -> str:
        """The first verdict as a sentence."""
        text: str = self.page.locator(".answer").first.inner_text()
        return text

    def read_type(self, shorthand: str) -> None:
        """Type a shorthand, press Enter and wait for the answer."""
        with self.answered():
            self.page.fill("#shorthand", shorthand)
            self.page.press("#shorthand", "Enter")

    @contextmanager
    def answered(self) -> Iterator[None]:
        """What is done inside makes the page post; afterwards it has brought in the answer."""
        with self.page.expect_response("**/desk"):
            yield
        self.page.locator("#desk-form:not([aria-busy])").wait_for()

    def values(self) -> Any:
        """The fields of the eigenvalues' values."""
        return self.page.locator("input[name^='eigenvalue.'][name$='.value']")

    def edit(self, field: Any, text: str) -> None:
        """Fill a field and wait until the server has answered."""
        with self.answered():
            field.fill(text)

    def press(self, name: str) -> None:
        """Press a button and wait until the server has answered."""
        with self.answered():
            self.page.get_by_role("button", name=name, exact=True).first.click()


@pytest.fixture
def desk_at(browser: Any) -> Iterator[Callable[..., Desk]]:
    """Opens desks at an address, each in a context of its own; everything they asked for must be local."""
    opened: list[tuple[Any, Desk]] = []

    def open_desk(running: Running, **options: Any) -> Desk:
        context = browser.new_context(viewport={"width": 1440, "height": 1000}, **options)
        desk = Desk(context.new_page(), f"http://127.0.0.1:{running.port}/")
        opened.append((context, desk))
        return desk

    yield open_desk
    for context, desk in opened:
        context.close()
        assert all(url.startswith((desk.address, "blob:", "data:")) for url in desk.requests), desk.requests


@pytest.fixture
def desk(desk_at: Callable[..., Desk], shared_server: Running) -> Desk:
    """A desk at the shared server with four log poles of rank 2 on it; it must end without complaints."""
    opened = desk_at(shared_server).open()
    opened.read_type("11,11,11,11")
    return opened


@pytest.fixture
def server_in() -> Iterator[Callable[[Path], Running]]:
    """Starts servers on a data folder."""
    started: list[Running] = []

    def start(data: Path) -> Running:
        started.append(start_server(data, "--port", "0"))
        return started[-1]

    yield start
    for running in started:
        running.stop()
