"""A real browser against a real server: headless Chromium, two sizes, axe on each page.

Without a browser these tests are left out and say so; where everything must run
(TESTS_RUN_EVERYTHING) a missing browser is a failure.
"""

from __future__ import annotations

import os
import shutil
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

os.environ.setdefault("DJANGO_ALLOW_ASYNC_UNSAFE", "true")
EVERYTHING = bool(os.environ.get("TESTS_RUN_EVERYTHING"))
CHROMIUM = shutil.which("chromium") or shutil.which("chromium-browser")
FLAGS = [
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]
WIDE, NARROW = {"width": 1280, "height": 900}, {"width": 390, "height": 844}


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    for item in items:
        if Path(__file__).parent in item.path.parents:
            item.add_marker(pytest.mark.browser)
            item.add_marker(pytest.mark.django_db(transaction=True))


@pytest.fixture(scope="session")
def chromium() -> Iterator[Any]:
    """The browser, started once."""
    try:
        from playwright.sync_api import sync_playwright
    except ImportError:
        _absent("the browser extra is not installed")
    if CHROMIUM is None:
        _absent("no chromium is installed")
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=CHROMIUM, args=FLAGS)
        yield browser
        browser.close()


def _absent(why: str) -> None:
    if EVERYTHING:
        pytest.fail(f"The browser tests must run here, but {why}.")
    pytest.skip(f"Browser tests left out: {why}.")


@pytest.fixture
def visitor(chromium: Any, live_server: Any) -> Iterator[Visitors]:
    visitors = Visitors(chromium, live_server.url)
    yield visitors
    visitors.close()


class Visitors:
    """People at their browsers, each signed in once through the page."""

    def __init__(self, chromium: Any, url: str) -> None:
        self.chromium, self.url = chromium, url
        self.contexts: list[Any] = []

    def page(self, email: str = "", password: str = "", *, phone: bool = False) -> Any:
        """A new person's page; signed in when an address is given."""
        context = self.chromium.new_context(
            viewport=NARROW if phone else WIDE, has_touch=phone, base_url=self.url
        )
        context.set_default_timeout(10_000)
        self.contexts.append(context)
        page = context.new_page()
        page.on("pageerror", lambda error: pytest.fail(f"Script error: {error}"))
        if email:
            page.goto("/sign-in/")
            page.get_by_label("E-mail").fill(email)
            page.get_by_label("Password").fill(password)
            page.get_by_role("button", name="Sign in").click()
            page.wait_for_url(lambda url: "sign-in" not in url)
        return page

    def close(self) -> None:
        for context in self.contexts:
            context.close()


def looks_right(page: Any) -> None:
    """axe finds nothing, and nothing is wider than the screen."""
    from axe_playwright_python.sync_playwright import Axe

    found = Axe().run(page).response["violations"]
    told = [f"{v['id']}: {v['nodes'][0]['html'][:160]}" for v in found]
    assert not told, (page.url, told)
    wide = page.evaluate("document.documentElement.scrollWidth - innerWidth")
    assert wide <= 0, f"{page.url} is {wide} px wider than the screen"
