"""Start-up and the main job of the command line, against ordinary imports in the same run.

    python tests/benchmarks/bench_command_line.py

Each line is the best of several new processes and its ratio to ``python -c "import numpy"``.
``rheo --help`` may take twice that; the others are printed to be watched.
"""

from __future__ import annotations

import subprocess
import sys
import time
from pathlib import Path

from ratios import report

SAMPLES = Path(__file__).parents[2] / "sample_data"
MOST_FOR_HELP = 2.0
REPEATS = 7


def _seconds(*arguments: str) -> float:
    best = float("inf")
    for _ in range(REPEATS):
        start = time.perf_counter()
        subprocess.run([sys.executable, *arguments], check=True, capture_output=True)
        best = min(best, time.perf_counter() - start)
    return best


def main() -> int:
    """Print the table; return 1 if help takes longer than it may."""
    numpy = _seconds("-c", "import numpy")
    rows = {
        "import numpy": numpy,
        "import pandas, lmfit": _seconds("-c", "import pandas, lmfit"),
        "rheo --help": _seconds("-m", "rheo", "--help"),
    }
    for name in ("sauce", "thickener", "gum"):
        rows[f"rheo run {name}.toml"] = _seconds("-m", "rheo", "run", str(SAMPLES / f"{name}.toml"))
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
