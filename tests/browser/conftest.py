"""A real browser without a window; where there is none its tests are skipped, and say so."""

from __future__ import annotations

import shutil
from typing import TYPE_CHECKING

import pytest

from tests.unit.studied import page_at

if TYPE_CHECKING:
    from collections.abc import Iterator
    from pathlib import Path

    from selenium.webdriver import Chrome

OPTIONS = (
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
)
PAGES = {
    "plant": "examples/plant/case.yaml",
    "ideas": "tests/browser/ideas.case.yaml",
    "infeasible": "tests/golden/infeasible.case.yaml",
}
"""Pages that together have every section."""


def _found(*names: str) -> str | None:
    return next((path for name in names if (path := shutil.which(name))), None)


@pytest.fixture(scope="session")
def browser(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Chrome]:
    """Chromium of this machine, with its own empty profile."""
    program = _found("chromium", "chromium-browser", "google-chrome")
    driver = _found("chromedriver")
    if program is None or driver is None:
        pytest.skip("no chromium with chromedriver here, so the page is not tested in a browser")
    from selenium.webdriver import Chrome, ChromeOptions
    from selenium.webdriver.chrome.service import Service

    options = ChromeOptions()
    options.binary_location = program
    for option in (*OPTIONS, f"--user-data-dir={tmp_path_factory.mktemp('profile')}"):
        options.add_argument(option)
    options.set_capability("goog:loggingPrefs", {"browser": "ALL", "performance": "ALL"})
    started = Chrome(options=options, service=Service(driver))
    yield started
    started.quit()


@pytest.fixture(scope="session")
def pages(tmp_path_factory: pytest.TempPathFactory) -> dict[str, str]:
    """Addresses of the pages as files."""
    folder: Path = tmp_path_factory.mktemp("pages")
    found = {}
    for name, case in PAGES.items():
        path = folder / f"{name}.html"
        path.write_text(page_at(case), "utf-8")
        found[name] = path.as_uri()
    return found
