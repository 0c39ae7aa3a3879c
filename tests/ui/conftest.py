"""The page without a browser (AppTest), and a server with a real headless Chromium."""

from __future__ import annotations

import os
import signal
import socket
import subprocess
import sys
import time
import urllib.error
import urllib.request
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from streamlit.testing.v1 import AppTest

from ui.pressure.views import VIEWS

ROOT = Path(__file__).resolve().parent.parent.parent
APP = ROOT / "ui" / "app.py"
SAMPLES = ROOT / "sample_data"
CHROMIUM = Path("/usr/bin/chromium")
FLAGS = [
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
    "--disable-background-networking", "--disable-component-update", "--disable-sync",
]  # fmt: skip


class Page:
    """The page under AppTest, with what the tests ask of it."""

    def __init__(self) -> None:
        self.app = AppTest.from_file(str(APP), default_timeout=60)
        self.run()

    def run(self) -> Page:
        """Run the script; nothing may break in it."""
        self.app.run()
        assert [one.value for one in self.app.exception] == []
        return self

    def go(self, stop: str) -> Page:
        """Go to a stop."""
        self.app.switch_page(f"stops/{stop}.py")
        return self.run()

    @property
    def html(self) -> str:
        """Everything that is drawn as HTML, side bar included."""
        return "\n".join(str(one.proto.body) for one in self.app.get("html"))

    @property
    def words(self) -> str:
        """Everything that can be read: HTML, Markdown, captions, messages."""
        app = self.app
        parts = [*app.markdown, *app.caption, *app.error, *app.warning, *app.info]
        return "\n".join([self.html, *(str(one.value) for one in parts)])

    @property
    def errors(self) -> list[str]:
        """The messages in error boxes."""
        return [str(one.value) for one in self.app.error]

    def strip(self) -> list[tuple[str, str, str]]:
        """Return name, value and note of each cell of the answer strip."""
        import re

        found = re.findall(
            r'<div class="name">(.*?)</div><div class="value">(.*?)</div>'
            r'<div class="note.*?">(.*?)</div>',
            self.html,
        )
        return [(name, value, note) for name, value, note in found]

    def widget(self, kind: str, label: str) -> Any:
        """Return the widget of a kind with a label that begins so."""
        found = [one for one in self.app.get(kind) if str(one.label).startswith(label)]
        assert found, f"no {kind} '{label}'; there are {[one.label for one in self.app.get(kind)]}"
        return found[0]

    def press(self, label: str) -> Page:
        """Press a button."""
        self.widget("button", label).click()
        return self.run()

    def choose(self, label: str, value: Any) -> Page:
        """Choose in a select box."""
        self.widget("selectbox", label).set_value(value)
        return self.run()

    def type(self, label: str, text: str) -> Page:
        """Type into a text field and leave it."""
        self.widget("text_input", label).set_value(text)
        return self.run()

    def look_at(self, view: str) -> Page:
        """Choose a view of the pressure stop; one in which Cautions stand has a mark behind it."""
        for control in self.app.get("button_group"):
            names = [str(one).removesuffix(" :material/warning:") for one in control.options]
            if view in names:
                control.set_value(list(VIEWS)[names.index(view)])
                return self.run()
        raise AssertionError(f"there is no view '{view}'")

    def upload(self, name: str, data: bytes, label: str = "Your readings") -> Page:
        """Upload a file."""
        self.widget("file_uploader", label).set_value((name, data, "application/octet-stream"))
        return self.run()

    def kept(self, name: str) -> Any:
        """Return what the page keeps in the session under one of its own keys."""
        return self.app.session_state[f"rheo.{name}"]

    def figure(self, number: int = 0) -> dict[str, Any]:
        """Return a Plotly figure of the page as data."""
        import json

        figure: dict[str, Any] = json.loads(self.app.get("plotly_chart")[number].proto.spec)
        return figure


@pytest.fixture
def page() -> Page:
    """A first visit."""
    return Page()


@pytest.fixture(scope="module")
def chromium() -> Iterator[Any]:
    """A running Chromium; without one the tests step aside and say so."""
    if not CHROMIUM.exists():
        reason = f"there is no {CHROMIUM}; it would drive the page"
        if os.environ.get("RHEO_REQUIRE_BROWSER"):
            pytest.fail(reason)
        pytest.skip(reason)
    from playwright.sync_api import sync_playwright

    with sync_playwright() as play:
        started = play.chromium.launch(executable_path=str(CHROMIUM), args=FLAGS)
        yield started
        started.close()


@pytest.fixture(scope="module")
def server(tmp_path_factory: pytest.TempPathFactory) -> Iterator[str]:
    """Address of a server of its own, started from another folder with an empty home."""
    home = tmp_path_factory.mktemp("home")
    elsewhere = tmp_path_factory.mktemp("elsewhere")
    port = _free_port()
    log = (home / "server.log").open("wb")
    command = [sys.executable, "-m", "rheo", "open", "--port", str(port), "--no-browser"]
    running = subprocess.Popen(
        command,
        cwd=elsewhere,
        env={**os.environ, "HOME": str(home), "TMPDIR": str(home)},
        stdin=subprocess.DEVNULL,
        stdout=log,
        stderr=subprocess.STDOUT,
    )
    try:
        _wait_for(f"http://127.0.0.1:{port}/_stcore/health", running)
        yield f"http://127.0.0.1:{port}"
    finally:
        running.send_signal(signal.SIGTERM)
        running.wait(timeout=20)
        log.close()
    said = (home / "server.log").read_text(errors="replace")
    assert "Traceback" not in said, said[-3000:]


def _free_port() -> int:
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return int(probe.getsockname()[1])


def _wait_for(address: str, running: subprocess.Popen[bytes]) -> None:
    for _ in range(300):
        assert running.poll() is None, "the server ended before it was ready"
        try:
            with urllib.request.urlopen(address, timeout=2) as answer:
                if answer.status == 200:
                    return
        except (urllib.error.URLError, OSError):
            time.sleep(0.1)
    pytest.fail("the server was not ready within 30 s")
