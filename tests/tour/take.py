"""Takes the pictures of the README's tour from a running demo: python -m tests.tour.take [address]."""

from __future__ import annotations

import sys
from pathlib import Path

from playwright.sync_api import Page, sync_playwright

CHROMIUM = "/usr/bin/chromium"
OPTIONS = ["--no-sandbox", "--disable-gpu", "--no-first-run", "--disable-background-networking", "--disable-sync"]
HERE = Path(__file__).resolve().parent
PASSWORD = "marram quay demo"
WIDE, PHONE = {"width": 1280, "height": 860}, {"width": 360, "height": 760}


def newest(page: Page, path: str, row: str) -> str:
    """The address of the first row of a list that holds some words."""
    page.goto(path)
    return str(page.locator("tbody tr", has_text=row).first.locator("th a").get_attribute("href"))


def main(address: str) -> None:
    """Sign in as each role and take its pages."""
    with sync_playwright() as engine:
        browser = engine.chromium.launch(executable_path=CHROMIUM, args=OPTIONS)

        def signed_in(name: str, size: dict[str, int]) -> Page:
            page = browser.new_context(viewport=size, base_url=address).new_page()
            page.goto("/sign-in/")
            page.fill("[name=username]", name)
            page.fill("[name=password]", PASSWORD)
            page.click("main button")
            return page

        def take(page: Page, path: str, name: str) -> None:
            page.goto(path)
            page.wait_for_timeout(900)
            page.screenshot(path=HERE / f"{name}.png")

        analyst, supervisor = signed_in("icastell", WIDE), signed_in("mokafor", WIDE)
        take(analyst, "/", "bench")
        curve = newest(analyst, "/runs/?q=TA-VIN-C&state=approved", "approved")
        take(analyst, curve, "run-by-curve")
        outside = newest(supervisor, "/runs/?state=submitted&q=TA-VIN", "does not conform")
        take(supervisor, outside, "out-of-specification")
        take(supervisor, newest(supervisor, "/batches/?state=testing", "testing"), "batch")
        take(supervisor, "/charts/CS-VIN/", "chart")
        take(signed_in("rlindqvist", WIDE), f"/lineage{curve}", "lineage")
        take(signed_in("icastell", PHONE), outside, "phone")
        browser.close()


if __name__ == "__main__":
    main(sys.argv[1] if len(sys.argv) > 1 else "http://127.0.0.1:8000")
