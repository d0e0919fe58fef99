"""A real browser for the tests: shared for desk pages, one profile a phone."""

from __future__ import annotations

import os
import signal
from collections.abc import Callable, Iterator
from contextlib import suppress
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import Browser, BrowserContext, Page, Playwright, sync_playwright

from tests.browser.find import chromium

ARGUMENTS = [
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
    "--disable-component-update", "--disable-sync",
]
PHONE: dict[str, Any] = {
    "viewport": {"width": 360, "height": 740}, "device_scale_factor": 2, "has_touch": True, "is_mobile": True,
    "permissions": ["geolocation"], "geolocation": {"latitude": -19.9462, "longitude": 66.0318, "accuracy": 4.5},
}


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Everything beneath this folder drives a browser."""
    for item in items:
        if Path(__file__).parent in Path(item.path).parents:
            item.add_marker("browser")


@pytest.fixture(scope="session")
def chromium_path() -> str:
    """The browser; `make test` has installed one where there was none."""
    found = chromium()
    assert found, "no Chrome or Chromium: python tests/browser/find.py --install"
    return found


@pytest.fixture(scope="session")
def playwright() -> Iterator[Playwright]:
    with sync_playwright() as running:
        yield running


@pytest.fixture(scope="session")
def browser(playwright: Playwright, chromium_path: str) -> Iterator[Browser]:
    """One browser for all desk tests; each takes a context of its own."""
    running = playwright.chromium.launch(executable_path=chromium_path, args=ARGUMENTS)
    yield running
    running.close()


@pytest.fixture
def desk(browser: Browser) -> Iterator[Page]:
    """A page at desk size; an error on it fails the test."""
    context = browser.new_context(viewport={"width": 1280, "height": 900})
    page = context.new_page()
    errors = watched_errors(page)
    yield page
    context.close()
    assert errors == []


def watched_errors(page: Page) -> list[str]:
    """A list that collects every error of the page, broken content rules included."""
    errors: list[str] = []
    page.on("pageerror", lambda error: errors.append(str(error)))
    page.on(
        "console",
        lambda message: errors.append(message.text)
        if message.type == "error" and "Content Security Policy" in message.text
        else None,
    )
    return errors


@dataclass
class Phone:
    """A phone: a browser profile on disk that outlives its browser."""

    playwright: Playwright
    chromium_path: str
    folder: Path
    options: dict[str, Any] = field(default_factory=dict)
    context: BrowserContext | None = None
    errors: list[str] = field(default_factory=list)

    def open(self, address: str) -> Page:
        """Switch it on if it is off, and open an address in a new page."""
        if self.context is None:
            self.context = self.playwright.chromium.launch_persistent_context(
                str(self.folder), executable_path=self.chromium_path, headless=True, args=ARGUMENTS,
                **{**PHONE, **self.options},
            )
        page = self.context.new_page()
        self.errors = watched_errors(page)
        page.goto(address)
        return page

    def move_to(self, lat_deg: float, lon_deg: float, accuracy_m: float = 4.5) -> None:
        """Walk: what the phone's position says from now on."""
        assert self.context is not None
        self.context.set_geolocation({"latitude": lat_deg, "longitude": lon_deg, "accuracy": accuracy_m})

    def signal(self, *, on: bool) -> None:
        """Walk out of reach of any network, or back into it."""
        assert self.context is not None
        self.context.set_offline(not on)

    @property
    def page(self) -> Page:
        """The page that was opened last."""
        assert self.context is not None
        return self.context.pages[-1]

    def kill(self) -> None:
        """End the browser's processes at once, as a flat battery does."""
        needle = f"--user-data-dir={self.folder}\0"
        for process in Path("/proc").glob("[0-9]*"):
            with suppress(OSError):
                if needle in (process / "cmdline").read_text(errors="replace"):
                    os.kill(int(process.name), signal.SIGKILL)
        self.forget()

    def forget(self) -> None:
        """Close what is left of the browser."""
        if self.context is not None:
            with suppress(Exception):
                self.context.close()
            self.context = None


@pytest.fixture
def new_phone(playwright: Playwright, chromium_path: str, tmp_path: Path) -> Iterator[Callable[..., Phone]]:
    """Makes phones, each with a profile of its own; all are switched off at the end."""
    made: list[Phone] = []

    def make(**options: Any) -> Phone:
        made.append(Phone(playwright, chromium_path, tmp_path / f"phone-{len(made) + 1}", options))
        return made[-1]

    yield make
    for phone in made:
        phone.forget()
