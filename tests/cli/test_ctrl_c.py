"""Ctrl-C in every command: one plain sentence, status 130, nothing half written."""

import csv
import os
import signal
import socket
import subprocess
import sys
import time
import urllib.request

import numpy as np
import pytest

import rheo
from rheo.batches import journal as journals

PLAIN = "Stopped. No file is left half written.\n"
COMMANDS = {
    "run": ("run", "case.toml", "--out", "note"),
    "fit": ("fit", "readings.csv"),
    "pipe": (
        *("pipe", "-m", "newtonian", "--set", "viscosity=1 Pa.s", "--diameter", "50 mm"),
        *("--flow", "5 m^3/h", "--density", "1000 kg/m3"),
    ),
    "convert": (
        *("convert", "-m", "newtonian", "--set", "viscosity=1 Pa.s", "--geometry", "tube"),
        *("--dim", "diameter=5 mm", "--dim", "length=1 m", "--rate", "10 1/s"),
    ),
    "size": ("size", "case.toml"),
    "models": ("models",),
}


def _stopped(*_, **__):
    raise KeyboardInterrupt


@pytest.mark.parametrize("name", COMMANDS)
def test_every_command_stops_plainly(command, folder, monkeypatch, name):
    monkeypatch.chdir(folder)
    assert command(*COMMANDS[name]).status == 0
    before = sorted(folder.rglob("*"))
    monkeypatch.setattr("rheo.cli.terminal.console", _stopped)
    assert command(*COMMANDS[name]) == (130, "", PLAIN)
    assert sorted(folder.rglob("*")) == before


def test_a_note_that_is_stopped_leaves_no_part(command, folder, monkeypatch):
    monkeypatch.setattr("rheo.report.files.Path.replace", _stopped)
    ended = command("run", folder / "case.toml", "--out", folder / "note")
    assert ended == (130, "", PLAIN)
    assert list((folder / "note").iterdir()) == []


def test_a_batch_without_a_table_says_that_nothing_is_kept(command, folder, monkeypatch):
    monkeypatch.setattr("rheo.batches.run.run_jobs", _stopped)
    assert command("batch", folder) == (
        130,
        "",
        "Stopped after 0 of 1 files; nothing is kept. With --out a batch keeps what is done and "
        "goes on from there.\n",
    )


def test_a_batch_that_is_stopped_goes_on(tmp_path):
    lots, out = tmp_path / "lots", tmp_path / "table.csv"
    lots.mkdir()
    random = np.random.default_rng(1)
    model = rheo.model("herschel-bulkley", yield_stress=12.0, consistency=4.2, flow_index=0.45)
    rate = np.geomspace(1.0, 300.0, 12)
    for number in range(800):
        stress = model.stress(rate) * np.exp(0.02 * random.standard_normal(rate.size))
        rows = "".join(f"{a:.6g},{b:.6g}\n" for a, b in zip(rate, stress, strict=True))
        (lots / f"lot{number:03}.csv").write_text(
            "Shear rate [1/s],Shear stress [Pa]\n" + rows, "utf-8"
        )
    arguments = [sys.executable, "-m", "rheo", "batch", str(lots), "--workers", "1", "--out"]
    kept = journals.journal_path(out)
    started = subprocess.Popen(
        [*arguments, str(out)], stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True
    )
    end = time.monotonic() + 60.0
    while not (kept.exists() and kept.read_bytes().count(b"\n") > 1):
        assert time.monotonic() < end
        time.sleep(0.01)
    os.kill(started.pid, signal.SIGINT)
    said, complaint = started.communicate(timeout=60)
    done = kept.read_bytes().count(b"\n") - 1
    assert (started.returncode, said) == (130, "")
    assert complaint == (
        f"Stopped. {done} of 800 files are kept in {kept}; the same command goes on from there.\n"
    )
    assert 0 < done < 800
    assert not out.exists()
    again = subprocess.run([*arguments, str(out)], capture_output=True, text=True, check=True)
    assert f"{done} of them taken up from the journal" in " ".join(again.stdout.split())
    fresh = tmp_path / "fresh.csv"
    subprocess.run([*arguments, str(fresh)], capture_output=True, check=True)
    with out.open(encoding="utf-8") as one, fresh.open(encoding="utf-8") as other:
        assert list(csv.reader(one)) == list(csv.reader(other))


def test_the_page_stops_plainly(tmp_path):
    with socket.socket() as free:
        free.bind(("127.0.0.1", 0))
        port = free.getsockname()[1]
    started = subprocess.Popen(
        [sys.executable, "-m", "rheo", "open", "--no-browser", "--port", str(port)],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        cwd=tmp_path,
    )
    end = time.monotonic() + 60.0
    while True:
        assert time.monotonic() < end
        try:
            with urllib.request.urlopen(f"http://127.0.0.1:{port}/_stcore/health", timeout=1.0):
                break
        except OSError:
            time.sleep(0.05)
    started.send_signal(signal.SIGINT)
    _, complaint = started.communicate(timeout=60)
    assert started.returncode == 130, complaint
    assert complaint.splitlines()[-1] == (
        "Stopped. The page is closed; cases that were saved are kept."
    )
    assert "Traceback" not in complaint
