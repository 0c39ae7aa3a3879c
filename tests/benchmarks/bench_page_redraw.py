"""How soon the page is at rest again after one change, in a real headless Chromium.

    python tests/benchmarks/bench_page_redraw.py

For each sample and each widget the time runs from the key or click to the last change of what is
drawn. Beside it the same browser times a page of one text field that shows what is typed: no redraw
can be quicker, and what is left above it is the program's and the pictures' own. Chromium draws in
software here; on a desk with a graphics card the share of the pictures is smaller. Every value that
is typed is a new one, so that nothing comes from the caches.
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
from pathlib import Path
from typing import Any

from playwright.sync_api import Page, sync_playwright
from ratios import report

ROOT = Path(__file__).resolve().parent.parent.parent
FLAGS = ["--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run"]
REPEATS = 3
# At rest: the script has run and nothing drawn has changed for so long [ms].
QUIET = 250.0
BARE = """
import streamlit as st
st.write(st.text_input("Title"))
"""
WATCH = """
() => {
  window.lastChange = 0;
  const main = document.querySelector('[data-testid="stMain"]');
  const bar = document.querySelector('[data-testid="stSidebar"]');
  const seen = () => { window.lastChange = performance.now(); };
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


@contextmanager
def served(script: Path) -> Iterator[str]:
    """Serve a script of Streamlit for the time of one call; gives its address."""
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
            yield f"http://127.0.0.1:{port}"
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

    def __init__(self, page: Page) -> None:
        self.page = page
        self.new = itertools.count(1)

    def rest(self) -> None:
        """Wait until the page is at rest."""
        self.page.wait_for_function(AT_REST, arg=QUIET, timeout=60_000, polling=20)

    def seconds(self, act: Callable[[], None]) -> float:
        """Return how long after an act the last change of what is drawn came [s]."""
        self.page.evaluate("() => { window.lastChange = performance.now(); }")
        start = self.page.evaluate("() => performance.now()")
        act()
        # The script begins a moment after the act.
        self.page.wait_for_timeout(60)
        self.rest()
        return float(self.page.evaluate("() => window.lastChange") - start) / 1000.0

    def typed(self, label: str, text: str) -> float:
        """Time a text that is typed into a field and ended with Enter."""
        field = self.page.locator(f'[data-testid="stMain"] input[aria-label^="{label}"]').first
        field.fill(text)
        return self.seconds(lambda: field.press("Enter"))

    def pressed(self, name: str) -> float:
        """Time a choice of a view."""
        found = self.page.get_by_test_id("stMain").get_by_role("radio", name=name).first
        return self.seconds(lambda: found.click(force=True))

    def goes_to(self, stop: str) -> float:
        """Time the way to a stop by the walk at the side."""
        link = self.page.get_by_test_id("stSidebar").get_by_role("link", name=stop)
        return self.seconds(lambda: link.first.click())


def sample_opened(browser: Any, address: str, name: str) -> Visitor:
    """Open the page with a sample at hand."""
    page = browser.new_page(viewport={"width": 1280, "height": 900})
    page.goto(address)
    page.wait_for_selector(".rheo-strip .value", timeout=60_000)
    page.evaluate(WATCH)
    visitor = Visitor(page)
    visitor.rest()
    if name != "Sauce":
        page.get_by_role("button", name="Use a sample").click()
        page.get_by_role("button", name=name).click()
        page.wait_for_timeout(500)
        visitor.rest()
    return visitor


def measured(visitor: Visitor) -> dict[str, float]:
    """Return the median of each change [s]."""
    found: dict[str, list[float]] = {}

    def note(what: str, took: float) -> None:
        found.setdefault(what, []).append(took)

    def flow() -> str:
        return f"{3.0 + 0.11 * next(visitor.new):.2f} m3/h"

    for turn in range(REPEATS):
        for stop in ("Flow curve", "Shear rates", "Route", "Pressure", "Sizes", "Note"):
            note(f"go to {stop}", visitor.goes_to(stop))
            if stop == "Flow curve":
                note("viscosity for stress", visitor.pressed("Viscosity"))
                visitor.pressed("Stress")
            if stop == "Route":
                note("flow of the duty", visitor.typed("Flow", flow()))
            if stop == "Pressure":
                note("what if: flow", visitor.typed("Flow", flow()))
                warmer = f"{turn + 0.5:g}"
                note("what if: thicker", visitor.typed("Thinner or thicker", f"{7 + turn}"))
                visitor.typed("Warmer or colder", warmer)
                keep = visitor.page.get_by_role("button", name="Keep these values").first
                note("keep what was tried", visitor.seconds(keep.click))
                for view in ("System and pump", "Regime and profile", "Start-up", "Along"):
                    note(f"view: {view}", visitor.pressed(view))
            if stop == "Sizes":
                note(
                    "limit of the sizes", visitor.typed("Velocity ≤", f"{2 + 0.07 * turn:.2f} m/s")
                )
            if stop == "Note":
                note("title of the note", visitor.typed("Title", f"Line {turn}"))
    return {what: statistics.median(took) for what, took in found.items()}


def bare(browser: Any, folder: Path) -> float:
    """Return the median of a page of one text field [s]."""
    script = folder / "bare.py"
    script.write_text(BARE, "utf-8")
    with served(script) as address:
        page = browser.new_page(viewport={"width": 1280, "height": 900})
        page.goto(address)
        page.get_by_label("Title").wait_for(timeout=60_000)
        page.evaluate(WATCH)
        visitor = Visitor(page)
        visitor.rest()
        return statistics.median(visitor.typed("Title", f"{n}") for n in range(9))


def main() -> int:
    """Print the table and the ratios."""
    with sync_playwright() as play, tempfile.TemporaryDirectory() as folder:
        browser = play.chromium.launch(executable_path="/usr/bin/chromium", args=FLAGS)
        floor = bare(browser, Path(folder))
        found = {}
        with served(ROOT / "ui" / "app.py") as address:
            for name in ("Sauce", "Thickener", "Gum"):
                visitor = sample_opened(browser, address, name)
                found[name] = measured(visitor)
                visitor.page.close()
        browser.close()
    print(f"a page of one text field: {floor:.3f} s")
    print(f"{'median, s':26}" + "".join(f"{name:>11}" for name in found))
    for what in found["Sauce"]:
        print(f"{what:26}" + "".join(f"{times[what]:11.3f}" for times in found.values()))
    everything = [took for times in found.values() for took in times.values()]
    within = sum(took < 0.5 for took in everything) / len(everything)
    print(f"{within:.0%} of the medians lie under half a second")
    report(
        "a bare page of one text field; the page after one change (median of all)",
        floor / statistics.median(everything),
    )
    report(
        "a bare page of one text field; the page after its slowest change", floor / max(everything)
    )
    return 0


if __name__ == "__main__":
    sys.exit(main())
