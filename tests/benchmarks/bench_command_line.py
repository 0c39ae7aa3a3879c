"""Start-up and the main job of the command line, against ordinary imports in the same run.

    python tests/benchmarks/bench_command_line.py

Each line is the median processor time of several new processes and its ratio to
``python -c "import numpy"``.
Processes of all lines take turns, so that what else the machine does falls on all alike.
``rheo --help`` may take twice that; the others are printed to be watched.
"""

from __future__ import annotations

import resource
import statistics
import subprocess
import sys
from pathlib import Path

from ratios import report

SAMPLES = Path(__file__).parents[2] / "sample_data"
MOST_FOR_HELP = 2.0
REPEATS = 15
# Lines of a second or more take every third turn.
SELDOM = 3


def _seconds(arguments: list[str]) -> float:
    """Return the processor time of a process, which waiting for others does not lengthen."""
    before = resource.getrusage(resource.RUSAGE_CHILDREN)
    subprocess.run([sys.executable, *arguments], check=True, capture_output=True)
    after = resource.getrusage(resource.RUSAGE_CHILDREN)
    return after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime


def main() -> int:
    """Print the table; return 1 if help takes longer than it may."""
    lines = {
        "import numpy": ["-c", "import numpy"],
        "import pandas, lmfit": ["-c", "import pandas, lmfit"],
        "rheo --help": ["-m", "rheo", "--help"],
        **{
            f"rheo run {name}.toml": ["-m", "rheo", "run", str(SAMPLES / f"{name}.toml")]
            for name in ("sauce", "thickener", "gum")
        },
    }
    taken: dict[str, list[float]] = {name: [] for name in lines}
    for turn in range(REPEATS):
        for name, arguments in lines.items():
            if turn % SELDOM and name not in ("import numpy", "rheo --help"):
                continue
            taken[name].append(_seconds(arguments))
    rows = {name: statistics.median(seconds) for name, seconds in taken.items()}
    numpy = rows["import numpy"]
    for name, seconds in rows.items():
        print(f"{name:24}{1e3 * seconds:8.0f} ms{seconds / numpy:8.2f} times numpy")
    for name in ("sauce", "thickener", "gum"):
        imports = rows["import pandas, lmfit"]
        report(
            f"rheo run {name}.toml; import pandas, lmfit", imports / rows[f"rheo run {name}.toml"]
        )
    what = "rheo --help; import numpy"
    return int(not report(what, numpy / rows["rheo --help"], 1.0 / MOST_FOR_HELP))


if __name__ == "__main__":
    sys.exit(main())
