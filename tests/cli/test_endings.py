"""How the command line ends: status, streams, one plain sentence, no traceback."""

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

import rheo.cli.models
from rheo import __version__

# Loaded by none of what `rheo --help` needs; each costs a tenth of a second or more.
HEAVY = {"numpy", "scipy", "pandas", "lmfit", "pint", "pydantic", "fluids", "plotly", "streamlit"}


def test_help_names_every_command(command):
    ended = command("--help")
    assert ended.status == 0
    for name in ("run", "fit", "pipe", "convert", "size", "batch", "models", "open"):
        assert f" {name} " in ended.out
    assert ended.err == ""


@pytest.mark.parametrize(
    "name", ["run", "fit", "pipe", "convert", "size", "batch", "models", "open"]
)
def test_every_command_explains_itself(command, name):
    ended = command(name, "--help")
    assert ended.status == 0
    assert "Usage: rheo" in ended.out


def test_help_loads_nothing_heavy():
    script = (
        "import sys\nsys.argv = ['rheo', '--help']\nfrom rheo.cli import main\n"
        "try:\n    main()\nexcept SystemExit:\n    pass\n"
        "import json\nprint('\\n' + json.dumps(sorted(sys.modules)))"
    )
    done = subprocess.run(
        [sys.executable, "-c", script], capture_output=True, text=True, check=True
    )
    loaded = {name.split(".")[0] for name in json.loads(done.stdout.splitlines()[-1])}
    assert "typer" in loaded
    assert loaded.isdisjoint(HEAVY)


def test_version(command):
    assert command("--version") == (0, f"rheo {__version__}\n", "")


@pytest.mark.parametrize(
    "arguments",
    [
        ("nonsense",),
        ("pipe",),
        ("pipe", "--nonsense"),
        ("run",),
        ("fit", "a", "b"),
        ("open", "--port", "0"),
    ],
)
def test_wrong_usage_ends_with_2(command, arguments):
    ended = command(*arguments)
    assert ended.status == 2
    assert ended.out == ""
    assert "Traceback" not in ended.err


def test_no_arguments_show_the_help(command):
    ended = command()
    assert "Usage: rheo" in ended.out + ended.err


def test_ctrl_c_ends_plainly(command, monkeypatch):
    def stopped():
        raise KeyboardInterrupt

    monkeypatch.setattr("rheo.models.model_records", stopped)
    ended = command("models")
    assert ended.status == 130
    assert "Traceback" not in ended.err


def test_an_error_of_the_system_ends_plainly(command, monkeypatch):
    def full():
        raise OSError(28, "No space left on device", "note.html")

    monkeypatch.setattr("rheo.models.model_records", full)
    assert command("models") == (1, "", "rheo: note.html: No space left on device\n")


def _started(arguments: list[str], **how):
    return subprocess.run(
        [sys.executable, "-m", "rheo", *arguments], text=True, stderr=subprocess.PIPE, **how
    )


def test_a_reader_that_leaves_is_no_error_to_speak_of():
    read, write = os.pipe()
    os.close(read)
    done = _started(["models"], stdout=write)
    os.close(write)
    assert done.returncode == 1
    assert done.stderr == ""


def test_a_full_disk_is_said_plainly():
    device = Path("/dev/full")
    assert device.exists(), "this test needs a device that is always full"
    with device.open("w") as full:
        done = _started(["models", "--json"], stdout=full)
    assert done.returncode == 1
    assert done.stderr == "rheo: No space left on device\n"


def test_letters_that_the_terminal_lacks_do_not_end_the_work():
    done = _started(
        ["models"], stdout=subprocess.PIPE, env={**os.environ, "PYTHONIOENCODING": "ascii"}
    )
    assert done.returncode == 0
    assert "yield_stress" in done.stdout
    assert done.stderr == ""


def test_the_page_that_is_not_there_is_said_plainly(command, monkeypatch):
    monkeypatch.setattr("importlib.util.find_spec", lambda _: None)
    ended = command("open")
    assert ended.status == 1
    assert (
        ended.err
        == "rheo: ui/app.py: the page is not installed; install rheo with its folder 'ui'\n"
    )


def test_models_are_listed_from_the_registry(command):
    listed = json.loads(command("models", "--json").out)
    assert [one["key"] for one in listed] == list(rheo.model_records())
    assert rheo.cli.models.models.__doc__


def test_open_starts_the_page_in_this_process(command, monkeypatch):
    started = []

    def main():
        started.append(list(sys.argv))
        return 0

    monkeypatch.setattr("streamlit.web.cli.main", main)
    # A server that ends without an error was told to, by Ctrl-C.
    assert command("open", "--no-browser", "--port", "8600").status == 130
    (arguments,) = started
    assert arguments[:2] == ["streamlit", "run"]
    assert Path(arguments[2]).parts[-2:] == ("ui", "app.py")
    assert Path(arguments[2]).exists()
    assert arguments[3:] == ["--server.port", "8600", "--server.headless", "true"]
