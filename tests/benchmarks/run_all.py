"""Run every benchmark of this folder that gives ratios, and print one table of ratios.

    python tests/benchmarks/run_all.py [PART OF A NAME ...]

Each ratio is against an ordinary alternative that ran in the same process a moment before or after,
so that it means the same on any machine; it is best read on one with nothing else to do.
"""

from __future__ import annotations

import os
import subprocess
import sys
import time
from pathlib import Path

from ratios import MARK
from rich import box
from rich.console import Console
from rich.table import Table

HERE = Path(__file__).parent
# One thread each, so that an alternative in one thread is compared with like.
ALONE = {"OMP_NUM_THREADS": "1", "OPENBLAS_NUM_THREADS": "1", "MKL_NUM_THREADS": "1"}


def main() -> int:
    """Print the table; return 1 if a benchmark failed or a ratio is missed."""
    parts = sys.argv[1:]
    scripts = [
        path
        for path in sorted(HERE.glob("bench_*.py"))
        if "from ratios import" in path.read_text("utf-8")
        and (not parts or any(part in path.name for part in parts))
    ]
    table = Table("compared", "times as long", "wanted", "", box=box.SIMPLE_HEAD)
    wrong = 0
    for script in scripts:
        start = time.perf_counter()
        done = subprocess.run(
            [sys.executable, str(script)], text=True, capture_output=True, env=os.environ | ALONE
        )
        print(f"{script.name}: {time.perf_counter() - start:.0f} s", file=sys.stderr, flush=True)
        lines = done.stdout.splitlines()
        rows = [line.removeprefix(MARK).split("\t") for line in lines if line.startswith(MARK)]
        for row in rows:
            table.add_row(*row)
            wrong += row[-1] == "MISSED"
        if done.returncode and not any(row[-1] == "MISSED" for row in rows):
            print(done.stdout, done.stderr, file=sys.stderr)
            table.add_row(f"{script.name} failed", "", "", "FAILED")
            wrong += 1
    Console(width=110).print(table)
    return int(wrong > 0)


if __name__ == "__main__":
    sys.exit(main())
