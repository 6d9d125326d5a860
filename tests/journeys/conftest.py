"""A real browser on a real server with the invented demo workshop in it."""

import os
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from typing import Any

import pytest
from axe_playwright_python.sync_playwright import Axe
from playwright.sync_api import (
    Browser,
    BrowserContext,
    ConsoleMessage,
    Page,
    Request,
    Response,
    sync_playwright,
)
from pytest_django.live_server_helper import LiveServer

from compliance.ops.demo import load_demo

CHROMIUM = os.environ.get("CHROMIUM", "/usr/bin/chromium")
QUIET = [  # no look-ups of the browser's own: nothing but the server under test is asked
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
    "--disable-component-update", "--disable-sync",
]  # fmt: skip
PHONE, DESK = {"width": 390, "height": 844}, {"width": 1280, "height": 900}


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Mark every journey as needing the browser; the longest begins first, so that nobody waits for it at the end."""
    items.sort(key=lambda item: "test_every_page_is_accessible" not in item.nodeid)
    for item in items:
        if Path(__file__).parent in item.path.parents:
            item.add_marker(pytest.mark.browser)


@pytest.fixture(scope="session")
def browser() -> Iterator[Browser]:
    """Start Chromium once."""
    os.environ["DJANGO_ALLOW_ASYNC_UNSAFE"] = "1"  # playwright runs an event loop in the thread of the tests
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=CHROMIUM, args=QUIET)
        yield browser
        browser.close()
    del os.environ["DJANGO_ALLOW_ASYNC_UNSAFE"]


@dataclass
class Visitor:
    """A person at a screen: opens pages of the server, and collects what the browser complains of."""

    page: Page
    url: str
    complaints: list[str]

    def go(self, path: str) -> None:
        """Open a page by its path; an error page fails the journey."""
        response = self.page.goto(self.url + path)
        assert response is not None
        assert response.status < 400, f"{path} answers {response.status}"

    def sign_in(self, email: str, password: str) -> None:
        """Sign in through the form."""
        self.go("/sign-in")
        self.page.get_by_label("E-mail").fill(email)
        self.page.get_by_label("Password").fill(password)
        self.page.get_by_role("button", name="Sign in").click()
        self.page.wait_for_load_state()

    def check_page(self) -> None:
        """Fail on anything that axe finds, on sideways scrolling, and on complaints of the browser."""
        found = Axe().run(self.page)
        assert found.violations_count == 0, found.generate_report()
        wide = self.page.evaluate("document.documentElement.scrollWidth - document.documentElement.clientWidth")
        assert wide == 0, f"{self.page.url} scrolls sideways by {wide} px"
        assert self.complaints == []


@pytest.fixture
def demo(transactional_db: None, now: datetime) -> dict[str, tuple[str, str]]:
    """Load the demo workshop; return (e-mail address, password) by role."""
    return {role: (email, password) for email, password, role in load_demo(now=now)}


@pytest.fixture
def visit(browser: Browser, live_server: LiveServer) -> Iterator[Callable[..., Visitor]]:
    """Return a way to open a browser window of a size, light or dark."""
    contexts: list[BrowserContext] = []

    def open_window(size: dict[str, int] = PHONE, scheme: Any = "light", **options: Any) -> Visitor:
        context = browser.new_context(viewport=size, color_scheme=scheme, **options)  # type: ignore[arg-type]
        contexts.append(context)
        page = context.new_page()
        complaints: list[str] = []
        page.on("pageerror", lambda error: complaints.append(str(error)))
        page.on("console", lambda message: complaints.append(message.text) if _is_complaint(message) else None)
        page.on("response", lambda response: complaints.append(response.url) if _is_lost(response) else None)
        page.on("requestfailed", lambda request: complaints.append(_tell(request)) if _is_refused(request) else None)
        return Visitor(page, live_server.url, complaints)

    yield open_window
    for context in contexts:
        context.close()


def _is_refused(request: Request) -> bool:
    """Say whether a request failed by itself: who opens the next page ends what the last one still asks for."""
    return request.failure != "net::ERR_ABORTED"


def _tell(request: Request) -> str:
    return f"failed: {request.url} {request.failure}"


def _is_complaint(message: ConsoleMessage) -> bool:
    """Say whether the browser complains; answers are judged one by one, not by what the console says of them."""
    return message.type == "error" and not message.text.startswith("Failed to load resource")


def _is_lost(response: Response) -> bool:
    """Say whether something that a page needs is not there; that a refused form is answered with 400 is meant."""
    return response.status >= 400 and response.request.resource_type != "document"


@pytest.fixture(scope="session")
def pictures() -> Path | None:
    """Return the folder for screenshots, if SCREENSHOTS names one."""
    folder = os.environ.get("SCREENSHOTS")
    return Path(folder) if folder else None
