"""Twenty sessions at once on the page for two minutes, each doing the main job by itself.

    python tests/benchmarks/load_page.py [SECONDS] [SESSIONS]

A session speaks the page's own protocol over a websocket, as a browser does: it pastes readings
that hold a mark of its own, goes from stop to stop, pastes again. Checked are: every run of the
script ends well; no session is ever sent the mark of another; memory is flat once all sessions have
been everywhere; of sessions that are cut off no socket is left, and nothing of theirs in a file.
Linux only: memory is read from /proc.
"""

from __future__ import annotations

import asyncio
import os
import re
import signal
import socket
import statistics
import subprocess
import sys
import tempfile
import time
import urllib.error
import urllib.request
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np
import websockets
from streamlit.proto.BackMsg_pb2 import BackMsg
from streamlit.proto.ForwardMsg_pb2 import ForwardMsg

MARK = re.compile(rb"mark-(\d+)-of-(\d+)")
STOPS = ("flow-curve", "shear-rates", "route", "pressure", "sizes", "readings")
# More growth than this after every session has been everywhere is a leak.
MOST_GROWTH = 0.15
SLOWEST_RUN = 120.0
# So long the server keeps what belongs to a connection that was cut [s]; a visitor has two sockets.
KEPT = 130.0
OF_ONE_VISITOR = 2


@dataclass
class Session:
    """One visitor: what the page showed them, and what went wrong."""

    number: int
    socket: websockets.ClientConnection
    widgets: dict[str, str] = field(default_factory=dict)
    pages: dict[str, str] = field(default_factory=dict)
    wrong: list[str] = field(default_factory=list)
    seconds: list[float] = field(default_factory=list)
    seen_own: int = 0

    async def run(self, page: str = "", values: dict[str, str] | None = None) -> None:
        """Ask for a run of the script, with widgets set, and take what it draws."""
        asked = BackMsg()
        asked.rerun_script.page_script_hash = self.pages.get(page, "")
        for name, value in (values or {}).items():
            one = asked.rerun_script.widget_states.widgets.add()
            one.id = self.widgets[name]
            if name.startswith("button "):
                one.trigger_value = True
            else:
                one.string_value = value
        start = time.perf_counter()
        await self.socket.send(asked.SerializeToString())
        while True:
            data = await asyncio.wait_for(self.socket.recv(), SLOWEST_RUN)
            assert isinstance(data, bytes)
            if self._take(data):
                break
        self.seconds.append(time.perf_counter() - start)

    def _take(self, data: bytes) -> bool:
        for found in MARK.findall(data):
            if int(found[0]) == self.number:
                self.seen_own += 1
            else:
                self.wrong.append(f"was sent the mark of session {int(found[0])}")
        message = ForwardMsg.FromString(data)
        kind = message.WhichOneof("type")
        if kind == "navigation":
            self.pages = {
                one.url_pathname or "readings": one.page_script_hash
                for one in message.navigation.app_pages
            }
        elif kind == "delta":
            element = message.delta.new_element
            drawn = element.WhichOneof("type")
            if drawn == "exception":
                self.wrong.append(element.exception.message[:200])
            elif drawn == "text_area":
                self.widgets["pasted"] = element.text_area.id
            elif drawn == "button":
                self.widgets[f"button {element.button.label}"] = element.button.id
        elif kind == "script_finished":
            ended = message.script_finished
            if ended == ForwardMsg.FINISHED_WITH_COMPILE_ERROR:
                self.wrong.append("the script did not compile")
            return ended == ForwardMsg.FINISHED_SUCCESSFULLY
        return False

    async def main_job(self, turn: int) -> None:
        """Paste readings and go from stop to stop."""
        rate = np.geomspace(0.5, 300.0, 14)
        random = np.random.default_rng([self.number, turn])
        stress = (12.0 + self.number + 4.2 * rate**0.45) * np.exp(0.01 * random.standard_normal(14))
        head = f"Shear rate [1/s],Shear stress [Pa],mark-{self.number}-of-{turn}"
        lines = [f"{a:.5g},{b:.5g},{n}" for n, (a, b) in enumerate(zip(rate, stress, strict=True))]
        text = "\n".join([head, *lines])
        await self.run("readings", {"pasted": text, "button Use this table": ""})
        for stop in STOPS:
            await self.run(stop)


def _memory(pid: int) -> float:
    status = Path(f"/proc/{pid}/status").read_text("ascii")
    return int(re.search(r"VmRSS:\s+(\d+)", status)[1]) / 1024.0


def _sockets(pid: int) -> int:
    found = Path(f"/proc/{pid}/fd").iterdir()
    return sum(os.readlink(one).startswith("socket:") for one in found)


async def _visit(number: int, address: str, until: float, cut: asyncio.Event) -> Session:
    connection = await websockets.connect(
        f"ws://{address}/_stcore/stream",
        subprotocols=["streamlit"],
        origin=f"http://{address}",
        max_size=None,
    )
    session = Session(number, connection)
    await session.run()
    turn = 0
    while time.monotonic() < until or turn == 0:
        await session.main_job(turn)
        turn += 1
    if session.seen_own == 0:
        session.wrong.append("never saw its own readings")
    await cut.wait()
    # Cut off without a word, as when a laptop is closed.
    connection.transport.abort()
    return session


async def _look_in(address: str) -> None:
    connection = await websockets.connect(
        f"ws://{address}/_stcore/stream",
        subprotocols=["streamlit"],
        origin=f"http://{address}",
        max_size=None,
    )
    await Session(-1, connection).run()
    await connection.close()


async def _load(address: str, pid: int, seconds: float, count: int) -> int:
    start, cut = time.monotonic(), asyncio.Event()
    visits = [
        asyncio.create_task(_visit(number, address, start + seconds, cut))
        for number in range(count)
    ]
    memory: list[tuple[float, float]] = []
    while time.monotonic() < start + seconds:
        await asyncio.sleep(min(5.0, seconds / 10))
        memory.append((time.monotonic() - start, _memory(pid)))
    await asyncio.sleep(1.0)
    cut.set()
    sessions = await asyncio.gather(*visits)
    wrong = [f"session {one.number}: {said}" for one in sessions for said in one.wrong]
    runs = [took for one in sessions for took in one.seconds]
    late = [value for at, value in memory if at > 0.5 * seconds]
    growth = statistics.mean(late[-3:]) / statistics.mean(late[:3]) - 1.0
    print(
        f"{count} sessions, {seconds:.0f} s: {len(runs)} runs of the script, median "
        f"{statistics.median(runs):.1f} s, longest {max(runs):.1f} s; {len(wrong)} wrong"
    )
    print("memory [MB]: " + " ".join(f"{value:.0f}" for _, value in memory))
    print(f"growth over the second half: {growth:+.1%}, allowed {MOST_GROWTH:.0%}")
    for said in wrong[:10]:
        print(said)
    return len(wrong) + int(growth > MOST_GROWTH)


def main() -> int:
    """Print what was found; return 1 if something is wrong."""
    seconds = float(sys.argv[1]) if len(sys.argv) > 1 else 120.0
    count = int(sys.argv[2]) if len(sys.argv) > 2 else 20
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        port = int(probe.getsockname()[1])
    with tempfile.TemporaryDirectory() as home:
        running = subprocess.Popen(
            [sys.executable, "-m", "rheo", "open", "--port", str(port), "--no-browser"],
            env={**os.environ, "HOME": home, "TMPDIR": home},
            stdin=subprocess.DEVNULL,
            stdout=subprocess.DEVNULL,
            stderr=subprocess.DEVNULL,
        )
        try:
            for _ in range(300):
                try:
                    urllib.request.urlopen(f"http://127.0.0.1:{port}/_stcore/health", timeout=2)
                    break
                except (urllib.error.URLError, OSError):
                    time.sleep(0.1)
            before = _sockets(running.pid)
            wrong = asyncio.run(_load(f"127.0.0.1:{port}", running.pid, seconds, count))
            # The server keeps a session for a visitor whose connection failed, and lets those that
            # are too old go when the next visitor comes.
            time.sleep(KEPT)
            asyncio.run(_look_in(f"127.0.0.1:{port}"))
            time.sleep(2.0)
            more = _sockets(running.pid) - before
            files = [path for path in Path(home).rglob("*") if path.is_file()]
            left = [path.name for path in files if MARK.search(path.read_bytes())]
            print(
                f"{KEPT:.0f} s and one visitor later: {more} more sockets, "
                f"files with a mark: {left or 'none'}"
            )
        finally:
            running.send_signal(signal.SIGTERM)
            running.wait(20)
    return int(wrong > 0 or more > OF_ONE_VISITOR or bool(left))


if __name__ == "__main__":
    sys.exit(main())
