"""Route, pressure, sizes and note in a real headless Chromium."""

from __future__ import annotations

import io
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

import pytest
from test_browser import WIDTHS, Browser, pictures, visit

from rheo.case import load_case

if TYPE_CHECKING:
    from playwright.sync_api import Locator

pytestmark = pytest.mark.browser
__all__ = ["pictures", "visit"]

VIEWS = (
    "Along the line",
    "System and pump",
    "Regime and profile",
    "Shear rates",
    "Start-up",
    "Doubt",
    "Holding and cleaning",
)


def open_stop(browser: Browser, stop: str) -> None:
    browser.open(f"/{stop.lower()}")
    browser.page.get_by_role("heading", name=stop, exact=True).wait_for(timeout=30_000)
    browser.settle()


def edit_cell(browser: Browser, table: Locator, x: float, row: int, text: str) -> None:
    """Type into a cell of a table, which is drawn on a canvas."""
    page = browser.page
    for _ in range(3):
        table.scroll_into_view_if_needed()
        box = table.bounding_box()
        assert box is not None
        page.mouse.dblclick(box["x"] + x, box["y"] + 35 + 35 * row + 17)
        field = page.locator("input.gdg-input, textarea.gdg-input").last
        page.wait_for_timeout(300)
        if field.count():
            break
    field.fill(text)
    field.press("Enter")
    browser.settle()


def test_the_route_is_edited_in_its_table(visit: Callable[..., Browser]) -> None:
    browser = visit(1280, height=2000)
    open_stop(browser, "Route")
    before = browser.strip()
    page = browser.page
    table = page.get_by_test_id("stDataFrame").nth(1)
    # The middle of the column of lengths, first row: the pipe from the pump to the cooler.
    edit_cell(browser, table, 600, 0, "34")
    page.wait_for_function(
        "old => document.querySelector('.rheo-strip .value').innerText !== old", arg=before[0]
    )
    browser.picture("route-edited")
    edit_cell(browser, table, 600, 0, "wrong")
    page.get_by_text("'wrong' is not a number with a unit").wait_for()
    edit_cell(browser, table, 600, 0, "14")
    page.wait_for_function(
        "old => document.querySelector('.rheo-strip .value').innerText === old", arg=before[0]
    )
    assert page.get_by_text("is not a number with a unit").count() == 0
    browser.assert_well()


def test_a_new_route_from_a_few_values(visit: Callable[..., Browser]) -> None:
    browser = visit(1280, height=2000)
    open_stop(browser, "Route")
    page = browser.page
    browser.click(page.get_by_role("button", name="New route"))
    page.get_by_label("Length of pipe").fill("60")
    page.get_by_label("90° bends").fill("6")
    # The last value is still in the field when the button is pressed.
    page.get_by_label("Liquid above the pump").fill("1.5")
    browser.click(page.get_by_role("button", name="Replace the route"))
    page.get_by_role("button", name="Put the old route back").wait_for()
    level = page.get_by_role("textbox", name="Liquid level").first
    assert level.input_value() == "1.5 m"
    browser.picture("route-new")
    browser.click(page.get_by_role("button", name="Put the old route back"))
    assert level.input_value() == "1.6 m"
    browser.assert_well()


@pytest.mark.parametrize("width", WIDTHS)
def test_every_view_of_the_pressure(visit: Callable[..., Browser], width: int) -> None:
    browser = visit(width, height=2400, dark=width == WIDTHS[1])
    open_stop(browser, "Pressure")
    for view in VIEWS:
        browser.click(browser.page.get_by_role("radio", name=view, exact=True))
        browser.picture(f"pressure-{view.lower().replace(' ', '-')}-{width}")
        browser.assert_well()


def test_what_if_and_then_kept(visit: Callable[..., Browser]) -> None:
    browser = visit(1280, height=1800)
    open_stop(browser, "Pressure")
    page = browser.page
    before = browser.strip()
    flow = page.get_by_role("textbox", name="Flow", exact=True)
    flow.fill("8")
    flow.press("Enter")
    page.get_by_role("cell", name="8.00 m³/h").wait_for()
    assert browser.strip() == before
    browser.picture("pressure-what-if")
    browser.click(page.get_by_role("button", name="Keep these values"))
    page.wait_for_function(
        "old => document.querySelector('.rheo-strip .value').innerText !== old", arg=before[0]
    )
    browser.settle()
    assert page.get_by_role("button", name="Keep these values").count() == 0
    assert page.get_by_role("textbox", name="Flow", exact=True).input_value() == ""
    browser.assert_well()


def test_a_size_is_taken_and_the_files_are_saved(
    visit: Callable[..., Browser], tmp_path: Path
) -> None:
    browser = visit(1280, height=2400)
    open_stop(browser, "Sizes")
    page = browser.page
    take = page.get_by_role("button", name="Take ISO 2037").first
    take.wait_for(timeout=60_000)
    name = take.inner_text().strip().splitlines()[-1].removeprefix("Take ")
    browser.click(take)
    page.get_by_role("button", name=f"{name} is in the route").wait_for(timeout=60_000)
    browser.picture("sizes-taken")
    browser.assert_well()
    browser.onward("Note")
    page.get_by_role("button", name="Workbook, XLSX").wait_for(timeout=60_000)
    found = {}
    for label in ("Workbook, XLSX", "Case, TOML"):
        with page.expect_download(timeout=60_000) as waiting:
            page.get_by_role("button", name=label).click()
        kept = tmp_path / waiting.value.suggested_filename
        waiting.value.save_as(kept)
        found[kept.suffix] = kept
    book = zipfile.ZipFile(io.BytesIO(found[".xlsx"].read_bytes()))
    assert "xl/workbook.xml" in book.namelist()
    case = load_case(found[".toml"])
    assert {one.size for one in case.line.discharge if one.part == "pipe"} == {name}
    assert all(block.text for block in case.readings)
    browser.assert_well()
