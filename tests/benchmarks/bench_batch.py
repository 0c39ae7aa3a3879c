"""A batch of 1,000 files of 30 points, eleven models each, against lmfit in a loop on one core.

    python tests/benchmarks/bench_batch.py

The loop does the least that an ordinary script would: numbers read by numpy, each model fitted by
lmfit from one start that is read off the ends of the curve, with the numerical derivatives that
lmfit takes by itself; it screens nothing and ranks nothing. It is timed on a sample of the files
and scaled up. The batch is timed as it is called: processes started, files read and screened,
models ranked, rows back. Both are timed by the clock on the wall in the same run.
"""

from __future__ import annotations

import os
import sys
import tempfile
import time
from pathlib import Path

os.environ["OMP_NUM_THREADS"] = os.environ["OPENBLAS_NUM_THREADS"] = "1"

import numpy as np
from lmfit_loop import Ended, fit_curve, worse_and_better
from ratios import report

import rheo

FILES, POINTS, SAMPLE = 1000, 30, 25
LEAST = 15.0


def _write(folder: Path) -> list[Path]:
    rng = np.random.default_rng(1)
    rate = np.geomspace(0.1, 1000.0, POINTS)
    paths = []
    for number in range(FILES):
        if number % 2:
            model = rheo.model(
                "herschel-bulkley",
                yield_stress=12.0 * np.exp(0.1 * rng.standard_normal()),
                consistency=4.2 * np.exp(0.1 * rng.standard_normal()),
                flow_index=0.45,
            )
        else:
            model = rheo.model(
                "carreau",
                zero_shear_viscosity=20.0 * np.exp(0.1 * rng.standard_normal()),
                infinite_shear_viscosity=0.01,
                time_constant=1.0,
                flow_index=0.4,
            )
        stress = model.stress(rate) * np.exp(0.02 * rng.standard_normal(POINTS))
        lines = [f"{a:.6g},{b:.6g}\n" for a, b in zip(rate, stress, strict=True)]
        paths.append(folder / f"lot{number:04}.csv")
        paths[-1].write_text("Shear rate [1/s],Shear stress [Pa]\n" + "".join(lines), "utf-8")
    return paths


def _lmfit_all(path: Path) -> dict[str, Ended]:
    return fit_curve(*np.loadtxt(path, delimiter=",", skiprows=1).T)


def main() -> int:
    """Print times and ratios; return 1 if the batch is slower than it may be."""
    with tempfile.TemporaryDirectory() as name:
        paths = _write(Path(name))
        start = time.perf_counter()
        result = rheo.batch(paths)
        took = time.perf_counter() - start
        start = time.perf_counter()
        rheo.batch(paths[:200], workers=1)
        alone = (time.perf_counter() - start) * FILES / 200
        # An odd step, so that both products are in the sample as they are in the batch.
        some = range(0, FILES, FILES // SAMPLE + 1)
        start = time.perf_counter()
        loop = [_lmfit_all(paths[index]) for index in some]
        ordinary = (time.perf_counter() - start) * FILES / len(loop)
    counts = [
        worse_and_better(found, result.rows[index].aicc, POINTS)
        for index, found in zip(some, loop, strict=True)
    ]
    worse, better = np.sum(counts, axis=0)
    print(
        f"batch of {FILES} files x {POINTS} points x 11 models: {took:.1f} s on "
        f"{os.cpu_count()} cores ({alone:.1f} s with one worker, scaled from 200); "
        f"lmfit in a loop {ordinary:.0f} s "
        f"(scaled from {len(loop)} files); {ordinary / took:.0f} times, wanted {LEAST:.0f}; "
        f"{len(result.fitted)} fitted; of "
        f"{11 * len(loop)} fits lmfit's is worse in {worse} and better in {better}"
    )
    what = f"batch of {FILES} files, 11 models each; lmfit in a loop on one core"
    return int(not report(what, ordinary / took, LEAST))


if __name__ == "__main__":
    sys.exit(main())
