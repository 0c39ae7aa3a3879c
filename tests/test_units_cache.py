"""The units' cache on disk: sessions and processes that begin together, and half a file in it."""

from __future__ import annotations

import os
import subprocess
import sys

import pytest

READ = """
import threading
from rheo.units import parse_quantity
found = []
threads = [
    threading.Thread(target=lambda: found.append(parse_quantity("2.5 bar", "Pa")))
    for _ in range(16)
]
for thread in threads:
    thread.start()
for thread in threads:
    thread.join()
assert found == [250000.0] * 16, found
"""


def started(folder):
    places = {"HOME": str(folder), "XDG_CACHE_HOME": str(folder), "LOCALAPPDATA": str(folder)}
    return subprocess.Popen(
        [sys.executable, "-c", READ], env=os.environ | places, stderr=subprocess.PIPE, text=True
    )


def ends_well(process):
    _, said = process.communicate(timeout=60)
    assert (process.returncode, said) == (0, "")


def test_threads_and_processes_that_begin_together(tmp_path):
    together = [started(tmp_path) for _ in range(3)]
    for process in together:
        ends_well(process)


@pytest.mark.parametrize("kept", [0, 1, 40, 200])
def test_half_a_file_in_the_cache(tmp_path, kept):
    ends_well(started(tmp_path))
    files = [path for path in tmp_path.rglob("*") if path.is_file()]
    assert files
    for path in files:
        path.write_bytes(path.read_bytes()[:kept])
    ends_well(started(tmp_path))
