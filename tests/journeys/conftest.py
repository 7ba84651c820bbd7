"""Real people at a real site: chromium, the worker, the database, nothing in between."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from labrecords.models import User
from tests.factories.people import PASSWORD

playwright = pytest.importorskip("playwright.sync_api")
CHROMIUM = Path("/usr/bin/chromium")
OPTIONS = [
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
    "--disable-component-update", "--disable-sync",
]  # fmt: skip
ARTEFACTS = Path(__file__).resolve().parent.parent.parent / "artefacts"


class Person:
    """One person in a browser of their own, who presses and types what the page offers."""

    def __init__(self, page: playwright.Page, base: str, user: User) -> None:
        self.page, self.base, self.user = page, base, user
        self.problems: list[str] = []
        page.on("console", lambda message: self._heard(message))
        page.on("pageerror", lambda error: self.problems.append(str(error)))

    def open(self, path: str) -> None:
        """Go to a page."""
        self.page.goto(self.base + path)

    def sign_in(self) -> None:
        """By the page."""
        self.open("/sign-in/")
        self.page.fill("[name=username]", self.user.username)
        self.page.fill("[name=password]", PASSWORD)
        self.page.click("main button")
        playwright.expect(self.page.locator("header")).to_contain_text(self.user.full_name)

    def press(self, name: str, *, role: str = "button") -> None:
        """A button or a link by its words."""
        self.page.get_by_role(role, name=name, exact=True).first.click()

    def sees(self, text: str) -> None:
        """Wait until the page says it."""
        playwright.expect(self.page.locator("main")).to_contain_text(text, timeout=20_000)

    def type_cells(self, field: str, values: list[str], *, skip: int = 0) -> None:
        """Type a column of the sheet, leaving each cell with Enter, and wait until each is kept."""
        cells = self.page.locator(f"input[name^='{field}-']")
        cells.first.wait_for()
        self.page.wait_for_load_state()  # the scripts of the sheet are there
        for place, value in enumerate(values, start=skip):
            cell = cells.nth(place)
            cell.fill(value)
            cell.press("Enter")
            kept = self.page.locator(f"#{cell.get_attribute('id')}-kept")
            playwright.expect(kept).to_contain_text("saved")

    def sign(self, button: str, *, reason: str = "") -> None:
        """Name and password in the form of a button, and press it."""
        form = self.page.locator("form", has=self.page.get_by_role("button", name=button, exact=True))
        if reason:
            form.locator("[name=reason]").fill(reason)
        form.locator("[name=username]").fill(self.user.username)
        form.locator("[name=password]").fill(PASSWORD)
        with self.page.expect_navigation():
            form.get_by_role("button", name=button, exact=True).click()

    def picture(self, name: str) -> None:
        """A screenshot for people who look at what was built."""
        ARTEFACTS.mkdir(exist_ok=True)
        quiet = {"caret": "initial", "animations": "allow"}  # otherwise a style is injected, which the site refuses
        self.page.screenshot(path=ARTEFACTS / f"{name}.png", full_page=True, **quiet)

    def _heard(self, message: playwright.ConsoleMessage) -> None:
        if message.type == "error" and "status of 4" not in message.text:
            self.problems.append(message.text)


@pytest.fixture
def at_the_site(live_server, worker, monkeypatch) -> Iterator[Callable[..., Person]]:
    """``at_the_site(user)`` opens a browser for a person, signed in; ``width`` sets how wide it is."""
    if not CHROMIUM.exists():
        pytest.skip("no chromium on this machine")
    monkeypatch.setenv("DJANGO_ALLOW_ASYNC_UNSAFE", "true")  # the browser's loop runs in the thread of the test
    with playwright.sync_playwright() as engine:
        browser = engine.chromium.launch(executable_path=str(CHROMIUM), args=OPTIONS)

        def person(user: User, *, width: int = 1280) -> Person:
            context = browser.new_context(viewport={"width": width, "height": 900})
            somebody = Person(context.new_page(), live_server.url, user)
            somebody.sign_in()
            return somebody

        yield person
        browser.close()
