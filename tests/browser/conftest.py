"""A real browser for the tests of this folder: Debian's Chromium, without a screen and without a network."""

import os
import shutil
from pathlib import Path

import pytest
from playwright.sync_api import sync_playwright

from derive.pipeline import derive
from derive.reading.read import read
from derive.render.html import to_html
from derive.sheet.compose import compose

NAMES = ("chromium", "chromium-browser", "google-chrome")
# As root there is no sandbox; the rest keeps the browser from asking for anything by itself.
ARGUMENTS = [
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]
STAGE = Path(__file__).with_name("stage.toml")


def executable():
    found = os.environ.get("CHROMIUM") or next(filter(None, map(shutil.which, NAMES)), None)
    if found is None:
        pytest.fail(
            "Chromium is missing: run sh .ci/setup --browser, or say where it is with CHROMIUM=..."
        )
    return found


@pytest.fixture(scope="session")
def browser():
    with sync_playwright() as playwright:
        started = playwright.chromium.launch(executable_path=executable(), args=ARGUMENTS)
        yield started
        started.close()


@pytest.fixture(scope="session")
def address(tmp_path_factory):
    """Write one sheet, and give its address as a file."""
    outcome = derive(read(STAGE), other_engine=False).outcome
    path = tmp_path_factory.mktemp("sheet") / "stage.html"
    path.write_bytes(to_html(compose(outcome, "stage")))
    return path.as_uri()


@pytest.fixture
def opened(browser, address):
    """Open the sheet at a width; what the browser complained of and asked for is kept beside it."""
    pages = []

    def at(width, where=""):
        page = browser.new_page(viewport={"width": width, "height": 900}, offline=True)
        page.complaints, page.asked = [], []
        page.on("console", lambda message: page.complaints.append(message.text))
        page.on("pageerror", lambda error: page.complaints.append(str(error)))
        page.on("request", lambda request: page.asked.append(request.url))
        page.goto(address + where)
        pages.append(page)
        return page

    yield at
    for page in pages:
        page.close()
