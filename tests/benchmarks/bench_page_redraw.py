"""How soon the page is at rest again after one change, in a real headless Chromium.

    python tests/benchmarks/bench_page_redraw.py [SAMPLE ...]

For each sample and each widget the time runs from the key or click to the last change of what is
drawn; a change after which the page reads as before is an error. Beside it stands the processor
time of the server for that change. The same browser times a page of one text field that shows what
is typed: no redraw can be quicker, and what is left above it is the program's and the pictures'
own. Chromium draws in software here; with a graphics card the share of the pictures is smaller.
Every value that is typed is a new one, so that nothing comes from the caches. Linux only: processor
time is read from /proc.
"""

from __future__ import annotations

import itertools
import os
import socket
import statistics
import subprocess
import sys
import tempfile
import time
import urllib.error
import urllib.request
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

from playwright.sync_api import Browser, Locator, Page, sync_playwright
from ratios import report

ROOT = Path(__file__).resolve().parent.parent.parent
FLAGS = ["--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run"]
REPEATS = 3
# After one change of a widget the page shall be at rest within this [s].
WANTED = 0.5
FIRST = "Sauce"
# At rest: the script has run and nothing drawn has changed for so long [ms].
QUIET = 250.0
BARE = """
import streamlit as st
st.write(st.text_input("Title"))
"""
# What stands inside a canvas is for screen readers: a table puts it there some time after it is
# drawn.
WATCH = """
() => {
  window.lastChange = 0;
  const main = document.querySelector('[data-testid="stMain"]');
  const bar = document.querySelector('[data-testid="stSidebar"]');
  const drawn = one => !(one.target.closest ?? (() => null)).call(one.target, 'canvas')
    || one.type === 'attributes';
  const seen = all => { if (all.some(drawn)) window.lastChange = performance.now(); };
  for (const one of [main, bar]) {
    if (one) new MutationObserver(seen).observe(
      one, {subtree: true, childList: true, characterData: true, attributes: true});
  }
}
"""
AT_REST = """
quiet => document.querySelector('[data-testid="stApp"]').dataset.testScriptState === 'notRunning'
  && !document.querySelector('[data-testid="stSpinner"]')
  && performance.now() - window.lastChange > quiet
"""


# What the page reads, pictures included.
TEXT = "() => document.querySelector('[data-testid=\"stApp\"]').textContent"
OTHER_TEXT = f"before => ({TEXT})() !== before"
# Boxes of the readings, inside diameters of the route: columns of tables drawn on a canvas [px].
USE_COLUMN, INSIDE_COLUMN = 127, 519
HEADING, ROW = 35, 35


@dataclass(frozen=True)
class Server:
    """A page that is served.

    Parameters
    ----------
    address : str
        Where it is.
    process : int
        Number of its process.
    """

    address: str
    process: int

    def processor(self) -> float:
        """Return the processor time that it has taken so far [s]."""
        text = Path(f"/proc/{self.process}/stat").read_text()
        user, system = text.rpartition(")")[2].split()[11:13]
        return (int(user) + int(system)) / os.sysconf("SC_CLK_TCK")


@dataclass(frozen=True)
class Took:
    """What one change took.

    Parameters
    ----------
    seen : float
        Until the last change of what is drawn [s].
    server : float
        Processor time of the server [s].
    """

    seen: float
    server: float


@contextmanager
def served(script: Path) -> Iterator[Server]:
    """Serve a script of Streamlit for the time of one call."""
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        port = int(probe.getsockname()[1])
    with tempfile.TemporaryDirectory() as home:
        running = subprocess.Popen(
            [
                *(sys.executable, "-m", "streamlit", "run", str(script)),
                *("--server.port", str(port), "--server.headless", "true"),
                *("--browser.gatherUsageStats", "false"),
            ],
            cwd=ROOT,
            env={**os.environ, "HOME": home},
            stdin=subprocess.DEVNULL,
            stdout=subprocess.DEVNULL,
            stderr=subprocess.DEVNULL,
        )
        try:
            _wait_for(f"http://127.0.0.1:{port}/_stcore/health")
            yield Server(f"http://127.0.0.1:{port}", running.pid)
        finally:
            running.terminate()
            running.wait(timeout=20)


def _wait_for(address: str) -> None:
    for _ in range(300):
        try:
            with urllib.request.urlopen(address, timeout=2):
                return
        except (urllib.error.URLError, OSError):
            time.sleep(0.1)
    raise TimeoutError(address)


class Visitor:
    """One page of the browser and what can be done on it."""

    def __init__(self, page: Page, server: Server) -> None:
        self.page = page
        self.server = server
        self.main = page.get_by_test_id("stMain")
        self.side = page.get_by_test_id("stSidebar")
        self.new = itertools.count(1)

    def rest(self) -> None:
        """Wait until the page is at rest."""
        self.page.wait_for_function(AT_REST, arg=QUIET, timeout=60_000, polling=20)

    def time(self, act: Callable[[], None]) -> Took:
        """Return what an act takes; it must change what the page reads."""
        before = self.page.evaluate(TEXT)
        worked = self.server.processor()
        start = self.page.evaluate("() => performance.now()")
        act()
        self.page.wait_for_function(OTHER_TEXT, arg=before, timeout=30_000, polling=20)
        self.rest()
        seen = float(self.page.evaluate("() => window.lastChange") - start) / 1000.0
        return Took(seen, self.server.processor() - worked)

    def types(self, label: str, text: str) -> Took:
        """Time a text that is typed into a field and ended with Enter."""
        field = self.page.locator(f'[data-testid="stMain"] input[aria-label^="{label}"]').first
        field.fill(text)
        return self.time(lambda: field.press("Enter"))

    def looks_at(self, name: str) -> Took:
        """Time a choice of a view."""
        found = self.main.get_by_role("radio", name=name).first
        return self.time(lambda: found.click(force=True))

    def presses(self, name: str) -> Took:
        """Time a button."""
        button = self.main.get_by_role("button", name=name).first
        return self.time(button.click)

    def goes_to(self, stop: str) -> Took:
        """Time the way to a stop by the walk at the side."""
        return self.time(self.side.get_by_role("link", name=stop).first.click)

    def chooses(self, place: Locator, label: str, step: int) -> Took:
        """Time another choice in a list: the one so many places on, or before at its end."""
        box = place.get_by_role("combobox", name=label).first
        # Scrolling closes a list that is open.
        box.scroll_into_view_if_needed()
        self.page.wait_for_timeout(300)
        box.click()
        options = self.page.get_by_role("option")
        options.first.wait_for()
        marks = [one.get_attribute("aria-selected") for one in options.all()]
        now = marks.index("true") if "true" in marks else 0
        option = options.nth(now + step if now + step < len(marks) else now - step)
        return self.time(option.click)

    def leaves_out(self, row: int) -> Took:
        """Time a reading that is left out by its box in the table."""
        self._click_cell(self.main.get_by_test_id("stDataFrame").first, USE_COLUMN, row)
        self.page.wait_for_timeout(500)
        return self.time(lambda: self.page.keyboard.press("Enter"))

    def clicks_point(self, number: int) -> Took:
        """Time a click on a point of the picture of the readings."""
        points = self.main.get_by_test_id("stPlotlyChart").first.locator(".points path.point")
        box = points.nth(number).bounding_box()
        if box is None:
            raise RuntimeError("the picture is not drawn")
        x, y = box["x"] + box["width"] / 2, box["y"] + box["height"] / 2
        self.page.mouse.move(x, y)
        self.page.wait_for_timeout(300)
        return self.time(lambda: self.page.mouse.click(x, y))

    def takes_inside(self, text: str) -> Took:
        """Time another inside diameter of the first pipe after the pump."""
        table = self.main.get_by_test_id("stDataFrame").nth(1)
        self._click_cell(table, INSIDE_COLUMN, 0)
        self.page.wait_for_timeout(300)
        self.page.keyboard.press("Enter")
        field = self.page.locator("input.gdg-input, textarea.gdg-input").last
        field.fill(text)
        return self.time(lambda: field.press("Enter"))

    def _click_cell(self, table: Locator, x: float, row: int) -> None:
        table.scroll_into_view_if_needed()
        # A table that was drawn anew takes a moment to hear clicks.
        self.page.wait_for_timeout(700)
        box = table.bounding_box()
        if box is None:
            raise RuntimeError("the table is not drawn")
        self.page.mouse.click(box["x"] + x, box["y"] + HEADING + ROW * row + ROW // 2)


def sample_opened(browser: Browser, server: Server, name: str) -> Visitor:
    """Open the page with a sample at hand."""
    page = browser.new_page(viewport={"width": 1280, "height": 1000})
    page.goto(server.address)
    page.wait_for_selector(".rheo-strip .value", timeout=60_000)
    page.evaluate(WATCH)
    visitor = Visitor(page, server)
    visitor.rest()
    if name != FIRST:
        page.get_by_role("button", name="Use a sample").click()
        visitor.time(page.get_by_role("button", name=name).click)
    return visitor


def one_turn(visitor: Visitor, turn: int) -> Iterator[tuple[str, Took]]:
    """Go through the walk once and change what there is to change; gives each with its time."""

    def flow() -> str:
        return f"{3.0 + 0.11 * next(visitor.new):.2f} m3/h"

    if not turn:
        visitor.goes_to("Note")
    yield "go to Readings", visitor.goes_to("Readings")
    yield "leave a reading out: picture", visitor.clicks_point(2 * turn + 4)
    yield "leave a reading out: table", visitor.leaves_out(2 * turn + 1)
    for system in (1, 1):
        yield "other units", visitor.chooses(visitor.side, "Units", system)

    yield "go to Flow curve", visitor.goes_to("Flow curve")
    yield "view: viscosity", visitor.looks_at("Viscosity")
    yield "view: linear axes", visitor.looks_at("Linear")
    yield "look at another model", visitor.chooses(visitor.main, "Look at the model", turn + 1)
    yield "use it", visitor.presses("Use ")
    visitor.presses("Let the ranking choose")

    yield "go to Shear rates", visitor.goes_to("Shear rates")
    yield "go to Route", visitor.goes_to("Route")
    yield "flow of the duty", visitor.types("Flow", flow())
    yield "diameter of a pipe", visitor.takes_inside(f"{44.0 + 0.7 * turn:.1f} mm")

    yield "go to Pressure", visitor.goes_to("Pressure")
    for view in ("Regime and profile", "Start-up", "Along", "System and pump"):
        yield f"view: {view}", visitor.looks_at(view)
    yield "what if: flow", visitor.types("Flow", flow())
    yield "what if: thicker", visitor.types("Thinner or thicker", f"{7 + turn}")
    yield "what if: warmer", visitor.types("Warmer or colder", f"{turn + 0.5:g}")
    yield "keep it, system curve shown", visitor.presses("Keep these values")

    yield "go to Sizes", visitor.goes_to("Sizes")
    # Far apart, so that other sizes fail each time.
    limit = (0.4, 3.0)[turn % 2] + 0.07 * turn
    yield "limit of the sizes", visitor.types("Velocity ≤", f"{limit:.2f} m/s")
    visitor.chooses(visitor.main, "Another size", 1)
    yield "take another size", visitor.presses("Take this one")

    yield "go to Note", visitor.goes_to("Note")
    yield "title of the note", visitor.types("Title", f"Line {turn}")


def measured(visitor: Visitor) -> dict[str, Took]:
    """Return the medians of each change."""
    found: dict[str, list[Took]] = {}
    for turn in range(REPEATS):
        for what, took in one_turn(visitor, turn):
            found.setdefault(what, []).append(took)
    return {what: _median(several) for what, several in found.items()}


def _median(several: list[Took]) -> Took:
    return Took(
        statistics.median(one.seen for one in several),
        statistics.median(one.server for one in several),
    )


def bare(browser: Browser, folder: Path) -> Took:
    """Return the medians of a page of one text field."""
    script = folder / "bare.py"
    script.write_text(BARE, "utf-8")
    with served(script) as server:
        page = browser.new_page(viewport={"width": 1280, "height": 1000})
        page.goto(server.address)
        page.get_by_label("Title").wait_for(timeout=60_000)
        page.evaluate(WATCH)
        visitor = Visitor(page, server)
        visitor.rest()
        return _median([visitor.types("Title", f"{n}") for n in range(9)])


def main() -> int:
    """Print the table and the ratios."""
    names = [name.capitalize() for name in sys.argv[1:]] or [FIRST, "Thickener", "Gum"]
    with sync_playwright() as play, tempfile.TemporaryDirectory() as folder:
        browser = play.chromium.launch(executable_path="/usr/bin/chromium", args=FLAGS)
        floor = bare(browser, Path(folder))
        found = {}
        with served(ROOT / "ui" / "app.py") as server:
            for name in names:
                visitor = sample_opened(browser, server, name)
                found[name] = measured(visitor)
                visitor.page.close()
        browser.close()
    print(f"a page of one text field: {floor.seen:.3f} s, server {floor.server:.3f} s")
    print(f"{'medians, s: seen (server)':30}" + "".join(f"{name:>16}" for name in found))
    for what in found[names[0]]:
        cells = [f"{times[what].seen:8.3f} ({times[what].server:.2f})" for times in found.values()]
        print(f"{what:30}" + "".join(f"{cell:>16}" for cell in cells))
    walks, widgets = (
        [
            took.seen
            for times in found.values()
            for what, took in times.items()
            if what.startswith("go to") is way
        ]
        for way in (True, False)
    )
    for words, times in (("widgets", widgets), ("ways to a stop", walks)):
        within = sum(took < WANTED for took in times)
        print(f"{words}: {within} of {len(times)} medians lie under half a second")
    report(
        "a bare page of one text field; the page after one change of a widget (median of all)",
        floor.seen / statistics.median(widgets),
    )
    report(
        "a bare page of one text field; the page after the slowest change of a widget",
        floor.seen / max(widgets),
    )
    report(
        "half a second; the page after one change of a widget (median of all)",
        WANTED / statistics.median(widgets),
        1.0,
    )
    report("half a second; the page after the slowest change of a widget", WANTED / max(widgets))
    return 0


if __name__ == "__main__":
    sys.exit(main())
