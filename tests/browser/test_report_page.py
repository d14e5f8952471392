"""The report in a real browser: quiet, readable on a telephone, whole on paper, with contrast."""

from __future__ import annotations

import base64
import json
import re
from importlib.resources import files
from typing import TYPE_CHECKING, Any

import pytest

from tests.browser.conftest import PAGES
from tests.unit.studied import page_at

if TYPE_CHECKING:
    from collections.abc import Iterator

    from selenium.webdriver import Chrome

WIDTHS = {390: "telephone", 1440: "screen"}
"""Widths of a window [pixel]."""
PRINTED = round((210 - 2 * 14) / 25.4 * 96)
"""Width of A4 between the margins of the page [pixel]."""
SMALLEST = 12
"""Smallest letters that are read without effort [pixel]."""


def _size(browser: Chrome, width: int) -> None:
    browser.execute_cdp_cmd(
        "Emulation.setDeviceMetricsOverride",
        {"width": width, "height": 900, "deviceScaleFactor": 1, "mobile": width < 500},
    )


@pytest.fixture(autouse=True)
def _as_it_was(browser: Chrome) -> Iterator[None]:
    yield
    browser.execute_cdp_cmd("Emulation.clearDeviceMetricsOverride", {})
    browser.execute_cdp_cmd("Emulation.setEmulatedMedia", {"media": ""})
    browser.execute_cdp_cmd("Emulation.setScriptExecutionDisabled", {"value": False})


def _asked(browser: Chrome) -> list[str]:
    """Addresses that were asked for since this was last called."""
    found = []
    for entry in browser.get_log("performance"):  # type: ignore[no-untyped-call]
        message = json.loads(entry["message"])["message"]
        if message["method"] == "Network.requestWillBeSent":
            found.append(message["params"]["request"]["url"])
    return found


@pytest.mark.parametrize("name", PAGES)
def test_the_page_asks_for_nothing_and_has_no_complaint(
    browser: Chrome, pages: dict[str, str], name: str
) -> None:
    browser.get("about:blank")
    browser.get_log("browser")  # type: ignore[no-untyped-call]
    _asked(browser)
    browser.get(pages[name])
    assert browser.get_log("browser") == []  # type: ignore[no-untyped-call]
    asked = [url for url in _asked(browser) if not url.startswith("data:")]
    assert asked == [pages[name]]
    resources = "return performance.getEntriesByType('resource').map(e => e.name)"
    assert [url for url in browser.execute_script(resources) if url != "data:,"] == []


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("name", PAGES)
def test_tables_are_readable_and_nothing_sticks_out(
    browser: Chrome, pages: dict[str, str], name: str, width: int
) -> None:
    _size(browser, width)
    browser.get(pages[name])
    seen = browser.execute_script(
        """
        const wide = [...document.querySelectorAll('.wide, pre')];
        const reach = (box) => {
          box.scrollLeft = 1e6;
          const inner = box.firstElementChild ?? box;
          const end = inner.getBoundingClientRect().right;
          const rim = box.getBoundingClientRect().right;
          box.scrollLeft = 0;
          return end - rim;
        };
        return {
          width: window.innerWidth,
          page: document.documentElement.scrollWidth,
          outside: wide.filter(
            (box) => box.getBoundingClientRect().right > window.innerWidth + 1).length,
          unreachable: wide.filter((box) => box.matches('.wide') && reach(box) > 1).length,
          smallest: Math.min(...[...document.querySelectorAll(
            'p, li, dd, th, td, caption, figcaption, pre')]
            .map((item) => parseFloat(getComputedStyle(item).fontSize))),
          tables: document.querySelectorAll('table').length,
          first: Math.min(...[...document.querySelectorAll('tbody th')]
            .map((item) => item.getBoundingClientRect().width)),
        };
        """
    )
    assert seen["width"] == width
    assert seen["page"] <= width
    assert seen["outside"] == 0
    assert seen["unreachable"] == 0
    assert seen["smallest"] >= SMALLEST
    assert seen["tables"] > 3
    assert seen["first"] > 10


@pytest.mark.parametrize(("name", "width"), [("plant", 1440), ("ideas", 390), ("infeasible", 390)])
def test_accessibility_rules_hold(
    browser: Chrome, pages: dict[str, str], name: str, width: int
) -> None:
    rules = files("axe_core_python").joinpath("axe.min.js").read_text("utf-8")
    _size(browser, width)
    browser.get(pages[name])
    browser.execute_script(rules)
    result: dict[str, Any] = browser.execute_async_script(
        "const done = arguments[0]; axe.run(document).then(done)"
    )
    faults = [
        f"{item['id']}: {node['html'][:120]}"
        for item in result["violations"]
        for node in item["nodes"]
    ]
    assert faults == []
    # The rule for contrast has looked at something.
    assert "color-contrast" in {item["id"] for item in result["passes"]}


def test_the_rules_would_find_too_little_contrast(browser: Chrome, pages: dict[str, str]) -> None:
    browser.get(pages["infeasible"])
    browser.execute_script(files("axe_core_python").joinpath("axe.min.js").read_text("utf-8"))
    browser.execute_script("document.querySelector('h1').style.color = '#bbbbbb'")
    result: dict[str, Any] = browser.execute_async_script(
        "const done = arguments[0];"
        "axe.run(document, {runOnly: {type: 'rule', values: ['color-contrast']}}).then(done)"
    )
    assert [item["id"] for item in result["violations"]] == ["color-contrast"]


def test_on_paper_no_table_is_cut(browser: Chrome, pages: dict[str, str]) -> None:
    _size(browser, PRINTED)
    browser.execute_cdp_cmd("Emulation.setEmulatedMedia", {"media": "print"})
    for name, address in pages.items():
        browser.get(address)
        widths = browser.execute_script(
            "return [...document.querySelectorAll('table, figure svg, pre')].map("
            "(item) => [item.caption?.textContent ?? item.tagName,"
            " item.getBoundingClientRect().right])"
        )
        assert len(widths) > 5
        assert [item for item in widths if item[1] > PRINTED + 1] == [], name


def test_it_prints_on_a4(browser: Chrome, pages: dict[str, str]) -> None:
    browser.get(pages["plant"])
    printed = browser.execute_cdp_cmd(
        "Page.printToPDF", {"preferCSSPageSize": True, "printBackground": True}
    )
    document = base64.b64decode(printed["data"])
    assert document.startswith(b"%PDF")
    boxes = re.findall(rb"/MediaBox \[0 0 ([\d.]+) ([\d.]+)\]", document)
    # A4 is 210 by 297 mm; a point is 1/72 inch.
    assert 5 < len(boxes) < 60
    for width, height in boxes:
        assert float(width) == pytest.approx(595.3, abs=1)
        assert float(height) == pytest.approx(841.9, abs=1)


def test_without_scripts_it_says_the_same(browser: Chrome, pages: dict[str, str]) -> None:
    text = "return document.body.innerText.replace(/\\s+/g, ' ')"
    browser.get(pages["ideas"])
    with_scripts = browser.execute_script(text)
    browser.execute_cdp_cmd("Emulation.setScriptExecutionDisabled", {"value": True})
    browser.get(pages["ideas"])
    assert browser.execute_script("return document.querySelectorAll('th button').length") == 0
    assert browser.execute_script(text) == with_scripts
    assert "Ideas tried" in with_scripts


def test_a_heading_sorts_its_table_and_gives_the_order_back(
    browser: Chrome, pages: dict[str, str]
) -> None:
    browser.get(pages["plant"])
    column = """
        const table = [...document.querySelectorAll('table')].find(
          (item) => item.caption.textContent.startsWith('Filled in'));
        if (arguments[0]) table.querySelectorAll('thead button')[2].click();
        return [table.querySelectorAll('thead th')[2].getAttribute('aria-sort'),
          ...[...table.tBodies[0].rows].map((row) => row.cells[2].textContent)];
    """
    _, *before = browser.execute_script(column, False)
    way, *up = browser.execute_script(column, True)
    assert way == "ascending"
    assert up == sorted(before, key=float)
    way, *down = browser.execute_script(column, True)
    assert way == "descending"
    assert down == sorted(before, key=float, reverse=True)
    way, *again = browser.execute_script(column, True)
    assert (way, again) == (None, before)


def test_a_table_is_copied_as_cells(browser: Chrome, pages: dict[str, str]) -> None:
    browser.get(pages["plant"])
    copied = browser.execute_script(
        """
        const table = [...document.querySelectorAll('table')].find(
          (item) => item.caption.textContent === 'Enters');
        getSelection().selectAllChildren(table);
        return getSelection().toString();
        """
    )
    rows = [line.split("\t") for line in copied.strip().split("\n")]
    assert rows[0] == ["Enters"]
    assert rows[1] == ["name", "kg/h", "t/y"]
    assert rows[2] == ["glucose", "3030", "23600"]
    assert rows[-1][0] == "total"


def test_the_skip_link_comes_first_and_leads_to_the_study(
    browser: Chrome, pages: dict[str, str]
) -> None:
    from selenium.webdriver import ActionChains, Keys

    browser.get(pages["plant"])
    ActionChains(browser).send_keys(Keys.TAB).perform()
    link = browser.switch_to.active_element
    assert link.text == "Skip to the study"
    assert link.rect["x"] >= 0
    ActionChains(browser).send_keys(Keys.ENTER).perform()
    assert browser.switch_to.active_element.get_attribute("id") == "study"


def test_the_pages_have_every_section() -> None:
    text = "".join(page_at(case) for case in PAGES.values())
    for name in ("ideas", "plant", "trade-off", "measured", "energy", "relaxations", "inputs"):
        assert f'id="{name}"' in text
