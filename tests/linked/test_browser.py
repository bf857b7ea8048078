"""The pages in a real browser: Chromium of Debian, headless, driven through its own driver."""

from __future__ import annotations

import time
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest

from .needs import program
from .service import Client

pytestmark = pytest.mark.xdist_group("linked")  # one worker shares what is started for these tests

FLAGS = (
    "--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
    "--disable-component-update", "--disable-sync", "--disable-dev-shm-usage", "--window-size=1200,900",
)  # fmt: skip


@pytest.fixture(scope="module")
def downloads(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("downloads")


@pytest.fixture(scope="module")
def browser(downloads: Path, tmp_path_factory: pytest.TempPathFactory) -> Iterator[Any]:
    chromium, driver = (
        program("chromium", "the Debian package chromium"),
        program("chromedriver", "the Debian package chromium-driver"),
    )
    from selenium import webdriver
    from selenium.webdriver.chrome.service import Service

    options = webdriver.ChromeOptions()
    options.binary_location = chromium
    for flag in (*FLAGS, f"--user-data-dir={tmp_path_factory.mktemp('profile')}"):
        options.add_argument(flag)
    options.add_experimental_option(
        "prefs", {"download.default_directory": str(downloads), "download.prompt_for_download": False}
    )
    options.set_capability("goog:loggingPrefs", {"browser": "ALL"})
    window = webdriver.Chrome(options=options, service=Service(driver))
    window.set_page_load_timeout(30)
    try:
        yield window
    finally:
        window.quit()


def wait(what: Callable[[], Any], seconds: float = 15.0) -> Any:
    """What the browser shows once it shows it."""
    deadline = time.monotonic() + seconds
    while time.monotonic() < deadline:
        try:
            if found := what():
                return found
        except Exception as error:  # the page is still changing
            last = error
        time.sleep(0.05)
    raise AssertionError(f"not there after {seconds} s: {locals().get('last')}")


def one(browser: Any, selector: str) -> Any:
    return browser.find_element("css selector", selector)


def text(browser: Any) -> str:
    return str(one(browser, "main").text)


def test_from_the_start_to_a_design(browser: Any, client: Client) -> None:
    browser.get(client.url)
    assert browser.title == "Headrace"
    rows = browser.find_elements("css selector", "main table tbody tr")
    assert len(rows) == 5
    browser.find_element("partial link text", "HR-12, lysine on glucose").click()
    wait(lambda: "/id/run/" in browser.current_url)
    assert one(browser, "h1").text.startswith("HR-12, lysine on glucose")


def test_search_from_any_page(browser: Any, client: Client) -> None:
    browser.get(f"{client.url}/browse")
    one(browser, "#q").send_keys("malate")
    one(browser, "header form button").click()
    wait(lambda: "Search: malate" in one(browser, "h1").text)
    browser.find_element("link text", "L-malate").click()
    wait(lambda: browser.current_url.endswith("/id/compound/malate"))
    assert "C4H4O5" in text(browser)


def test_the_editor_runs_a_shipped_query(browser: Any, client: Client) -> None:
    browser.get(f"{client.url}/sparql")
    browser.find_element("partial link text", "How many skeletons a mole").click()
    wait(lambda: "hr:content" in one(browser, "#query").get_attribute("value"))
    one(browser, "#run").click()
    wait(lambda: browser.find_elements("css selector", "#answer table tbody tr"))
    head = one(browser, "#answer thead th button")
    head.click()
    assert one(browser, "#answer thead th").get_attribute("aria-sort") == "ascending"
    first = [row.text.split()[0] for row in browser.find_elements("css selector", "#answer tbody tr td:first-child")]
    assert first == sorted(first, key=str.lower)


def test_ctrl_enter_runs_it_too(browser: Any, client: Client) -> None:
    from selenium.webdriver.common.keys import Keys

    browser.get(f"{client.url}/sparql")
    area = one(browser, "#query")
    area.clear()
    area.send_keys("ASK { ?h a hr:Host }", Keys.CONTROL + Keys.ENTER)
    wait(lambda: "Yes." in one(browser, "#answer").text)


def test_a_wrong_query_is_explained_beside_it(browser: Any, client: Client) -> None:
    browser.get(f"{client.url}/sparql")
    area = one(browser, "#query")
    area.clear()
    area.send_keys("SELECT * { ?s ?p ")
    one(browser, "#run").click()
    assert "not SPARQL 1.1" in wait(lambda: one(browser, "#answer").text)
    assert one(browser, "#query").get_attribute("value").startswith("SELECT * { ?s ?p")


def test_a_download(browser: Any, client: Client, downloads: Path) -> None:
    browser.get(f"{client.url}/id/compound/malate")
    browser.find_element("link text", "Turtle").click()
    file = wait(lambda: next(iter(downloads.glob("malate*.ttl")), None))
    assert "a hr:Compound" in file.read_text()


def test_by_keyboard_alone(browser: Any, client: Client) -> None:
    """The first stop is the skip link; each link and field can be reached, and what has the focus shows it."""
    from selenium.webdriver.common.keys import Keys

    browser.get(f"{client.url}/id/compound/malate")
    one(browser, "body").send_keys(Keys.TAB)
    focus = browser.switch_to.active_element
    assert focus.text == "Skip to the content" and focus.rect["x"] >= 0
    focus.send_keys(Keys.ENTER)
    wait(lambda: browser.switch_to.active_element.get_attribute("id") == "main")
    reached = set()
    for _ in range(12):
        browser.switch_to.active_element.send_keys(Keys.TAB)
        here = browser.switch_to.active_element
        reached.add(here.get_attribute("href") or here.tag_name)
        assert "none" not in here.value_of_css_property("outline-style")
    assert len(reached) >= 8


@pytest.mark.parametrize("path", ["/", "/id/compound/malate", "/sparql", "/ask", "/ns", "RUN"])
def test_readable_on_a_phone(browser: Any, client: Client, path: str, tmp_path: Path) -> None:
    """At 360 pixels nothing but tables and code scrolls sideways, and text keeps its size."""
    where = (
        client.query("SELECT ?r { ?r a hr:Run ; hr:answer 'feasible' ; hr:question 'refills' }").rows()[0]["r"]
        if path == "RUN"
        else ""
    )
    browser.execute_cdp_cmd(
        "Emulation.setDeviceMetricsOverride", {"width": 360, "height": 740, "deviceScaleFactor": 1, "mobile": True}
    )
    try:
        browser.get(client.url + (where.removeprefix("https://w3id.org/headrace") if where else path))
        wide = browser.execute_script("return document.documentElement.scrollWidth")
        size = browser.execute_script("return parseFloat(getComputedStyle(document.body).fontSize)")
        shot = browser.get_screenshot_as_png()
        (tmp_path / "phone.png").write_bytes(shot)
    finally:
        browser.execute_cdp_cmd("Emulation.clearDeviceMetricsOverride", {})
    assert wide <= 360 and size >= 16 and len(shot) > 5000


def test_without_scripts(browser: Any, client: Client) -> None:
    browser.execute_cdp_cmd("Emulation.setScriptExecutionDisabled", {"value": True})
    try:
        browser.get(f"{client.url}/sparql?example=designs")
        one(browser, "#run").click()
        wait(lambda: "5 rows." in one(browser, "#answer").text)
        browser.get(f"{client.url}/ask")
        assert one(browser, "form[action='/ask'] button").text == "Ask"
    finally:
        browser.execute_cdp_cmd("Emulation.setScriptExecutionDisabled", {"value": False})


def test_titles_run_nothing(browser: Any, client: Client) -> None:
    """A design called <script>... shows its name, and the browser has nothing to complain about."""
    browser.get_log("browser")
    browser.get(client.url)
    assert "HR-13, <script>alert(1)</script>" in text(browser)
    for path in ("/", "/sparql", "/id/compound/malate", "/ask"):
        browser.get(client.url + path)
    assert browser.get_log("browser") == []
