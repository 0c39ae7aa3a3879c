"""Arguments as people mistype them: an exit status of 0, 1 or 2, a sentence, no traceback."""

from __future__ import annotations

import io
import json
import sys
from contextlib import redirect_stderr, redirect_stdout

import numpy as np
import pytest
from damage import SAMPLES, VALUES, bytes_changed, number_changed, picked

from rheo.cli import main

RIGHT = {
    "convert": [
        *("-m", "power-law", "-s", "consistency=3", "-s", "flow_index=0.4", "-g", "tube"),
        *("-d", "diameter=50mm", "-d", "length=10m", "--at", "4 m3/h"),
        *("--to", "concentric-cylinders inner_radius=14mm outer_radius=15mm length=42mm"),
    ],
    "pipe": [
        *("--model", "herschel-bulkley", "--set", "yield_stress=12 Pa", "--set", "consistency=4"),
        *("--set", "flow_index=0.45", "--diameter", "50mm", "--flow", "5 m^3/h"),
        *("--density", "1100", "--length", "30m", "--roughness", "0.05mm"),
    ],
    "fit": ["READINGS", "-m", "power-law", "--sweep", "both", "--weighting", "relative"],
    "batch": ["FOLDER", "-m", "power-law", "--workers", "1", "--rate", "10 1/s"],
    "models": [],
    "run": ["CASE"],
    "size": ["CASE"],
}


@pytest.fixture
def typed(monkeypatch):
    """Run ``rheo`` with arguments; return what it ended in."""

    def run(arguments: list[str]) -> tuple[int, str, str]:
        monkeypatch.setattr(sys, "argv", ["rheo", *arguments])
        out, err = io.StringIO(), io.StringIO()
        with redirect_stdout(out), redirect_stderr(err):
            try:
                main()
            except SystemExit as ended:
                status = ended.code or 0
        assert status in {0, 1, 2}, arguments
        said = err.getvalue()
        assert "Traceback" not in said
        assert "Error:" not in said or status == 2
        if status == 1:
            assert said.startswith("rheo: ")
            assert said.count("\n") == 1, said
        if status == 0:
            assert said == ""
            if "--json" in arguments:
                json.loads(out.getvalue())
            else:
                assert " nan " not in out.getvalue()
        return status, out.getvalue(), said

    return run


def mistyped(random: np.random.Generator, right: list[str]) -> list[str]:
    """Return arguments with one or two of them replaced, doubled, left out or exchanged."""
    result = list(right)
    for _ in range(int(random.integers(1, 3))):
        if not result:
            break
        at = int(random.integers(len(result)))
        kind = int(random.integers(5))
        if kind == 0:
            result[at] = picked(random, VALUES)
        elif kind == 1:
            result.insert(at, result[at])
        elif kind == 2:
            del result[at]
        elif kind == 3:
            result[at] = number_changed(result[at], random)
        else:
            name, sign, _ = result[at].partition("=")
            result[at] = name + sign + picked(random, VALUES)
    return result


@pytest.mark.parametrize("command", ["convert", "pipe", "models"])
def test_mistyped_arguments(command, typed, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    assert typed([command, *RIGHT[command]])[0] == 0
    random = np.random.default_rng(len(command))
    for number in range(250):
        more = ["--json"] if number % 2 else []
        typed([command, *mistyped(random, RIGHT[command]), *more])


def test_mistyped_arguments_of_files(typed, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    sample = (SAMPLES / "sauce_readings.csv").read_bytes()
    (tmp_path / "READINGS").write_bytes(sample)
    assert typed(["fit", *RIGHT["fit"]])[0] == 0
    random = np.random.default_rng(2)
    for number in range(60):
        (tmp_path / "READINGS").write_bytes(bytes_changed(sample, random) if number % 2 else sample)
        typed(["fit", *mistyped(random, RIGHT["fit"]), *(["--json"] if number % 3 else [])])


@pytest.mark.parametrize("command", ["run", "size", "batch"])
def test_mistyped_arguments_of_cases_and_folders(command, typed, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    (tmp_path / "FOLDER").mkdir()
    random = np.random.default_rng(3)
    case = (SAMPLES / "sauce.toml").read_bytes()
    for _ in range(40):
        (tmp_path / "CASE").write_bytes(bytes_changed(case, random))
        arguments = mistyped(random, RIGHT[command])
        # Work that ends in a page of results is tried elsewhere; here the way to it is.
        (tmp_path / "CASE").write_bytes(b"schema = " + bytes_changed(case, random))
        typed([command, *arguments])


def test_words_at_random(typed):
    random = np.random.default_rng(5)
    words = (*RIGHT, *VALUES, "--help", "--json", "--version", "-m", "-s", "--out", "-g", "tube")
    for _ in range(150):
        picks = [picked(random, words) for _ in range(int(random.integers(0, 6)))]
        # The page would start a server, and a folder to batch may be any on this machine.
        if "batch" not in picks:
            typed(picks)
