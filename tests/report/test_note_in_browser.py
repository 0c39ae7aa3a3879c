"""The HTML note in a real browser: every figure is drawn, nothing complains, nothing runs."""

from __future__ import annotations

import datetime
import os
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from rheo.case import CaseResult
from rheo.report import note_html

CHROMIUM = Path("/usr/bin/chromium")
FLAGS = [
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
    "--disable-background-networking", "--disable-component-update", "--disable-sync",
]  # fmt: skip
DATE = datetime.date(2025, 6, 1)

pytestmark = pytest.mark.browser


@pytest.fixture(scope="module")
def browser() -> Iterator[Any]:
    if not CHROMIUM.exists():
        reason = f"there is no {CHROMIUM}; it would open the note"
        if os.environ.get("RHEO_REQUIRE_BROWSER"):
            pytest.fail(reason)
        pytest.skip(reason)
    from playwright.sync_api import sync_playwright

    with sync_playwright() as play:
        started = play.chromium.launch(executable_path=str(CHROMIUM), args=FLAGS)
        yield started
        started.close()


@pytest.mark.parametrize(("kind", "width"), [("small_result", 1280), ("hostile_result", 390)])
def test_the_note_opens(
    kind: str, width: int, browser: Any, request: pytest.FixtureRequest, tmp_path: Path
) -> None:
    result: CaseResult = request.getfixturevalue(kind)
    path = tmp_path / "note.html"
    path.write_text(note_html(result, DATE), "utf-8")
    complaints: list[str] = []
    asked: list[str] = []
    page = browser.new_page(viewport={"width": width, "height": 900})
    page.on("console", lambda message: complaints.append(f"{message.type}: {message.text}"))
    page.on("pageerror", lambda error: complaints.append(str(error)))
    page.on("dialog", lambda dialog: (complaints.append(dialog.message), dialog.dismiss()))
    page.on("request", lambda request: asked.append(request.url))
    page.goto(path.as_uri())
    figures = page.locator("figure").count()
    assert figures >= 9
    page.wait_for_function(
        "n => document.querySelectorAll('.js-plotly-plot .main-svg').length >= n", arg=figures
    )
    assert page.locator(".js-plotly-plot").count() == figures
    # Nothing but wide tables may be scrolled sideways.
    assert page.evaluate("document.documentElement.scrollWidth") <= width
    assert complaints == []
    assert [url for url in asked if not url.startswith(("file:", "data:", "blob:"))] == []
    page.close()
