"""The main job in a real headless Chromium, as an engineer with a file of their own would do it."""

from __future__ import annotations

import re
import time
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest

if TYPE_CHECKING:
    from playwright.sync_api import Page

pytestmark = pytest.mark.browser

WIDTHS = (1280, 390)
STOPS = ("Flow curve", "Shear rates", "Route", "Pressure", "Sizes", "Note")
# A page address below the root makes Streamlit look for its services there first.
EXPECTED_404 = re.compile(r"/_stcore/(health|host-config)$")
OWN = "Speed [rpm],Torque [mN.m]\n" + "".join(
    f"{speed},{0.62 + 0.31 * speed**0.42:.5g}\n" for speed in (1, 2, 5, 10, 20, 50, 100, 200, 400)
)


class Browser:
    """One page of the browser, with what it complains of and how often it was clicked."""

    def __init__(self, page: Page, address: str, pictures: Path) -> None:
        self.page = page
        self.address = address
        self.pictures = pictures
        self.clicks = 0
        self.complaints: list[str] = []
        page.on("pageerror", lambda error: self.complaints.append(str(error)))
        page.on("console", self._on_console)

    def _on_console(self, message: Any) -> None:
        expected = EXPECTED_404.search(str(message.location.get("url", "")))
        if message.type == "error" and not expected:
            self.complaints.append(message.text)

    def open(self, path: str = "/") -> None:
        self.page.goto(self.address + path)
        self._begun()

    def reload(self) -> None:
        """Load the page anew, as by the browser's own button."""
        self.page.reload()
        self._begun()

    def _begun(self) -> None:
        # Before its script has begun a page rests too: the answer stands at the top of every stop.
        self.page.wait_for_selector(".rheo-strip .value", timeout=60_000)
        self.settle()

    def settle(self) -> None:
        """Wait until the script has run and nothing is drawn any more."""
        self.page.wait_for_selector('[data-testid="stMainBlockContainer"]', timeout=60_000)
        self.page.wait_for_timeout(150)
        self.page.wait_for_selector(
            '[data-testid="stApp"][data-test-script-state="notRunning"]', timeout=60_000
        )
        self.page.wait_for_function(
            "() => !document.querySelector('[data-testid=\"stSpinner\"]')", timeout=60_000
        )

    def click(self, target: Any) -> None:
        target.click()
        self.clicks += 1
        self.settle()

    def onward(self, title: str) -> None:
        """Go to the next stop by the link at the foot of this one."""
        link = self.page.get_by_test_id("stMain").get_by_role("link", name=title, exact=False)
        self.click(link.last)
        self.page.get_by_role("heading", name=title, exact=True).wait_for(timeout=20_000)
        self.settle()

    def picture(self, name: str) -> None:
        self.page.wait_for_timeout(400)
        self.page.screenshot(path=self.pictures / f"{name}.png")

    def strip(self) -> list[str]:
        return list(self.page.locator(".rheo-strip .value").all_inner_texts())

    def assert_well(self) -> None:
        """No exception box, no error box, nothing wider than the window, no complaint."""
        assert self.page.get_by_test_id("stException").count() == 0
        assert self.page.locator('[data-testid="stAlertContentError"]').all_inner_texts() == []
        width = self.page.evaluate("document.documentElement.scrollWidth")
        assert width <= self.page.viewport_size["width"]
        assert self.complaints == []


@pytest.fixture(scope="module")
def pictures(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Where the screenshots are left."""
    return tmp_path_factory.mktemp("screens")


@pytest.fixture
def visit(chromium: Any, server: str, pictures: Path) -> Iterator[Callable[..., Browser]]:
    """A new visitor: ``visit(width, dark=False)``."""
    contexts: list[Any] = []

    def new(width: int, *, height: int = 1000, dark: bool = False) -> Browser:
        context = chromium.new_context(
            viewport={"width": width, "height": height},
            color_scheme="dark" if dark else "light",
            accept_downloads=True,
        )
        contexts.append(context)
        return Browser(context.new_page(), server, pictures)

    yield new
    for context in contexts:
        context.close()


@pytest.mark.parametrize("width", WIDTHS)
def test_from_an_own_file_to_a_sized_line_and_its_note(
    visit: Callable[..., Browser], width: int, tmp_path: Path
) -> None:
    """Within two minutes and fifteen clicks, each choice of a list or field counted as one."""
    browser = visit(width, height=2600)
    own = tmp_path / "my sauce.csv"
    own.write_text(OWN)
    began = time.monotonic()
    browser.open()
    assert len(browser.strip()) == 5
    browser.assert_well()
    browser.picture(f"readings-sample-{width}")
    page = browser.page

    page.locator('input[type="file"]').first.set_input_files(own)
    browser.clicks += 2  # the button, and the file in the machine's own window
    page.get_by_text("my sauce.csv").first.wait_for()
    browser.settle()
    box = page.get_by_role("combobox", name=re.compile("Measured in"))
    box.click()
    page.get_by_role("option", name="concentric cylinders (cup and bob)").click()
    browser.clicks += 2
    browser.settle()
    for label, size in (
        ("Radius of the bob", "14 mm"),
        ("Radius of the cup", "15.2 mm"),
        ("Length of the bob", "42 mm"),
    ):
        field = page.get_by_role("textbox", name=re.compile(label)).first
        field.fill(size)
        field.press("Enter")
        browser.settle()
        browser.clicks += 1
    page.locator(".rheo-strip").wait_for()
    browser.picture(f"readings-{width}")
    browser.assert_well()
    for stop in STOPS:
        browser.onward(stop)
        browser.picture(f"{stop.lower().replace(' ', '-')}-{width}")
        browser.assert_well()
        assert len(browser.strip()) == 5
    for label, start in (("Note, PDF", b"%PDF-"), ("Note, HTML", b"<!doctype html>")):
        with page.expect_download(timeout=60_000) as waiting:
            page.get_by_role("button", name=label).click()
        browser.clicks += 1
        kept = tmp_path / waiting.value.suggested_filename
        waiting.value.save_as(kept)
        assert kept.read_bytes()[:20].lower().startswith(start.lower())
        assert kept.stat().st_size > 20_000
    assert kept.stem == "my-sauce"
    taken = time.monotonic() - began
    assert browser.clicks <= 15
    assert taken < 120
    browser.assert_well()


@pytest.mark.parametrize("width", WIDTHS)
def test_every_stop_in_the_dark(visit: Callable[..., Browser], width: int) -> None:
    browser = visit(width, height=2600, dark=True)
    browser.open()
    background = browser.page.evaluate(
        "getComputedStyle(document.querySelector('[data-testid=\"stApp\"]')).backgroundColor"
    )
    assert background == "rgb(20, 25, 29)"
    browser.picture(f"readings-dark-{width}")
    for stop in STOPS:
        browser.onward(stop)
        browser.picture(f"{stop.lower().replace(' ', '-')}-dark-{width}")
        browser.assert_well()


def test_a_click_on_a_point_leaves_it_out(visit: Callable[..., Browser]) -> None:
    browser = visit(1280, height=1600)
    browser.open()
    page = browser.page
    states = page.locator(".rheo-state")
    assert "left out" not in states.first.inner_text()
    box = page.locator(".scatterlayer .trace .points path").nth(3).bounding_box()
    assert box is not None
    page.mouse.click(box["x"] + box["width"] / 2, box["y"] + box["height"] / 2)
    page.wait_for_function(
        "() => document.querySelector('.rheo-state').innerText.includes('1 left out')",
        timeout=20_000,
    )
    browser.click(page.get_by_role("button", name="Take all in again"))
    assert "left out" not in states.first.inner_text()
    browser.assert_well()


def test_a_box_of_the_table_leaves_a_reading_out(visit: Callable[..., Browser]) -> None:
    browser = visit(1280, height=1700)
    browser.open()
    page = browser.page
    states = page.locator(".rheo-state").first
    # The boxes are drawn on a canvas: the second column; a click picks the cell, Enter turns it.
    for count, row in ((1, 0), (2, 2)):
        for _ in range(5):
            table = page.get_by_test_id("stDataFrame").first.bounding_box()
            assert table is not None
            page.mouse.click(table["x"] + 127, table["y"] + 35 + 35 * row + 17)
            page.wait_for_timeout(500)
            page.keyboard.press("Enter")
            page.wait_for_timeout(1500)
            browser.settle()
            if f"{count} left out" in states.inner_text():
                break
        assert f"{count} left out" in states.inner_text()
    browser.assert_well()


def test_the_case_survives_going_away_and_back(visit: Callable[..., Browser]) -> None:
    browser = visit(1280)
    browser.open()
    page = browser.page
    page.get_by_text("Product, sweep, temperature and solids").click()
    field = page.get_by_role("textbox", name="Density")
    field.fill("1300 kg/m3")
    field.press("Enter")
    browser.settle()
    before = browser.strip()
    browser.onward("Flow curve")
    browser.onward("Shear rates")
    page.go_back()
    page.get_by_role("heading", name="Flow curve", exact=True).wait_for()
    page.go_back()
    page.get_by_role("heading", name="Readings", exact=True).wait_for()
    browser.settle()
    assert browser.strip() == before
    page.get_by_text("Product, sweep, temperature and solids").click()
    assert page.get_by_role("textbox", name="Density").input_value() == "1300 kg/m³"
    browser.reload()
    assert browser.strip() == before
    browser.onward("Flow curve")
    browser.reload()
    page.get_by_role("heading", name="Flow curve", exact=True).wait_for()
    assert browser.strip() == before


def test_a_file_that_is_too_large_is_refused_and_the_server_stays(
    visit: Callable[..., Browser], tmp_path: Path
) -> None:
    large = tmp_path / "large.csv"
    large.write_bytes(b"1,2\n" * (22 * 2**18))
    browser = visit(1280)
    browser.open()
    before = browser.strip()
    browser.page.locator('input[type="file"]').first.set_input_files(large)
    browser.page.get_by_text(re.compile("20(\\.0)?MB|20 MB or smaller")).first.wait_for()
    browser.page.get_by_text(re.compile("must be|exceed|larger|smaller")).first.wait_for()
    browser.open()
    assert browser.strip() == before
