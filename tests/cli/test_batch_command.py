"""`rheo batch` as it is typed."""

import csv
import json
import os
import re
import signal
import subprocess
import sys
import time

import pytest
from lot_files import write_lot


@pytest.fixture
def lots(tmp_path):
    folder = tmp_path / "lots"
    (folder / "more").mkdir(parents=True)
    for number in range(3):
        write_lot(folder / f"lot{number}.csv", 1.2 if number == 2 else 1.0, seed=number)
    write_lot(folder / "more" / "lot3.csv", seed=3)
    (folder / "bad.csv").write_text("made-up words\n", "utf-8")
    (folder / "notes.md").write_text("no readings\n", "utf-8")
    (folder / ".hidden.csv").write_text("x\n", "utf-8")
    return folder


def names(table):
    with table.open(encoding="utf-8", newline="") as file:
        return [line["file"] for line in csv.DictReader(file)]


def test_a_folder_to_a_table(command, lots, tmp_path):
    table = tmp_path / "fits.csv"
    ended = command(
        "batch", lots, "--out", table, "--reference", lots / "lot0.csv", "--rate", "10 1/s"
    )
    assert ended.status == 0
    assert names(table) == ["bad.csv", "lot0.csv", "lot1.csv", "lot2.csv"]
    assert "3 fitted" in ended.out
    assert "no table of numbers" in ended.out
    assert "+2" in ended.out
    ended = command("batch", lots, "--out", table, "--recursive")
    assert names(table)[-1] == os.path.join("more", "lot3.csv")
    ended = command("batch", lots, "--out", table, "--recursive")
    assert "5 of them taken up from the journal" in ended.out
    ended = command("batch", lots, "--out", table, "--recursive", "--fresh")
    assert "journal" not in ended.out


def test_a_table_in_the_folder_is_not_read_again(command, lots):
    table = lots / "fits.csv"
    for _ in range(2):
        assert command("batch", lots, "--out", table, "-m", "bingham").status == 0
    assert "fits.csv" not in names(table)


def test_json_and_nothing_else(command, lots):
    ended = command("batch", lots, "--json", "-m", "power-law", "-m", "bingham")
    files = {row["file"]: row for row in json.loads(ended.out)["files"]}
    assert set(files["lot1.csv"]["aicc"]) == {"power-law", "bingham"}
    assert files["bad.csv"]["reason"]
    assert ended.err == ""


def test_what_is_wrong_is_said_in_a_sentence(command, lots, tmp_path):
    wrong = {
        ("batch", tmp_path / "none"): "none: there is no such folder",
        ("batch", lots / "lot0.csv"): "it is a file; give a folder",
        ("batch", lots, "--out", "fits.pdf"): "fits.pdf: the table must be named .csv or .xlsx",
        ("batch", lots, "--rate", "5 1/s"): "--rate: a shear rate needs --reference",
        ("batch", lots, "-m", "syrup"): "syrup",
        (
            "batch",
            lots,
            "-w",
            "heavy",
        ): "--weighting: found 'heavy'; it must be relative",
        ("batch", lots, "--reference", lots / "bad.csv"): "no table of numbers",
    }
    for arguments, words in wrong.items():
        ended = command(*arguments)
        assert ended.status == 1
        assert words in ended.err
        assert ended.err.count("\n") == 1
    empty = tmp_path / "empty"
    empty.mkdir()
    assert "there is no file of readings in it" in command("batch", empty).err


def test_a_folder_of_bad_files_only_ends_with_1(command, tmp_path):
    (tmp_path / "bad.csv").write_text("made-up words\n", "utf-8")
    ended = command("batch", tmp_path)
    assert ended.status == 1
    assert "none of its 1 files could be fitted" in ended.err


def _children(process):
    listed = subprocess.run(
        ["ps", "--ppid", str(process.pid), "-o", "pid="], capture_output=True, text=True
    )
    return [int(pid) for pid in listed.stdout.split()]


def _alive(pid):
    try:
        with open(f"/proc/{pid}/stat", encoding="utf-8") as file:
            return file.read().rsplit(")", 1)[1].split()[0] != "Z"
    except FileNotFoundError:
        return False


@pytest.mark.parametrize("how", [signal.SIGINT, signal.SIGKILL])
def test_stopped_half_way_it_leaves_no_process_and_goes_on(command, tmp_path, how):
    folder = tmp_path / "lots"
    folder.mkdir()
    for number in range(400):
        write_lot(folder / f"lot{number:03}.csv", seed=number)
    table = tmp_path / "fits.csv"
    journal = tmp_path / "fits.csv.journal"
    few_models = ["-m", "power-law", "-m", "bingham"]
    started = subprocess.Popen(
        [sys.executable, "-m", "rheo", "batch", folder, "--out", table, *few_models],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
    )
    until = time.monotonic() + 60
    while time.monotonic() < until and started.poll() is None:
        if journal.exists() and journal.read_bytes().count(b"\n") > 1:
            break
        time.sleep(0.005)
    children = _children(started)
    started.send_signal(how)
    _, said = started.communicate(timeout=60)
    assert "Traceback" not in said
    if how == signal.SIGINT and not table.exists():
        assert started.returncode == 130
        assert re.fullmatch(r"Stopped\. \d+ of 400 files are kept in .*\.\n", said)
    until = time.monotonic() + 20
    while any(map(_alive, children)) and time.monotonic() < until:
        time.sleep(0.05)
    assert not any(map(_alive, children))
    ended = command("batch", folder, "--out", table, *few_models)
    assert ended.status == 0
    assert "taken up from the journal" in ended.out
    assert len(names(table)) == 400
