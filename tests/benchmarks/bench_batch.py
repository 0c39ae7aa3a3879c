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
import warnings
from pathlib import Path

os.environ["OMP_NUM_THREADS"] = os.environ["OPENBLAS_NUM_THREADS"] = "1"

import lmfit
import numpy as np
from ratios import report

import rheo

FILES, POINTS, SAMPLE = 1000, 30, 25
LEAST = 15.0
# An upper bound beyond this is left out: lmfit's map of two far bounds onto a sine loses digits.
FAR = 20.0


def _start(rate: np.ndarray, stress: np.ndarray) -> dict[str, float]:
    """What one reads off the ends of a curve."""
    viscosity = stress / rate
    return {
        "viscosity": viscosity[-1],
        "consistency": stress[0] / rate[0] ** 0.5,
        "flow_index": 0.5,
        "yield_stress": stress[0] / 2.0,
        "plastic_viscosity": viscosity[-1],
        "casson_viscosity": viscosity[-1],
        "zero_shear_viscosity": viscosity[0],
        "infinite_shear_viscosity": viscosity[-1],
        "time_constant": (rate[0] * rate[-1]) ** -0.5,
        "yasuda_exponent": 2.0,
        "rate_index": 0.5,
        "rate_offset": rate[0],
        "half_stress": (stress[0] * stress[-1]) ** 0.5,
        "stress_index": 2.0,
    }


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


def _lmfit_all(path: Path) -> dict[str, float]:
    rate, stress = np.loadtxt(path, delimiter=",", skiprows=1).T
    begin = _start(rate, stress)
    found = {}
    for record in rheo.model_records().values():
        start = lmfit.Parameters()
        for one in record.parameters:
            upper = one.upper if one.upper <= FAR else np.inf
            start.add(one.key, value=begin[one.key], min=one.lower, max=upper)

        def residual(values: lmfit.Parameters, record=record) -> np.ndarray:
            return (
                record.stress(rate, *(values[key].value for key in record.parameter_keys)) / stress
                - 1
            )

        with warnings.catch_warnings(), np.errstate(all="ignore"):
            warnings.simplefilter("ignore")
            try:
                found[record.key] = float(lmfit.minimize(residual, start).chisqr)
            except ValueError:
                found[record.key] = np.inf
    return found


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
    worse = better = 0
    for index, found in zip(some, loop, strict=True):
        row = result.rows[index]
        for key, total in found.items():
            count = len(rheo.model_record(key).parameters) + 1
            own = POINTS * np.log(total / POINTS) + 2 * count
            own += 2 * count * (count + 1) / (POINTS - count - 1)
            gap = own - (row.aicc[key] or np.nan)
            better += gap > 0.01
            worse += gap < -0.01
    print(
        f"batch of {FILES} files x {POINTS} points x 11 models: {took:.1f} s on "
        f"{os.cpu_count()} cores ({alone:.1f} s with one worker, scaled from 200); "
        f"lmfit in a loop {ordinary:.0f} s "
        f"(scaled from {len(loop)} files); {ordinary / took:.0f} times, wanted {LEAST:.0f}; "
        f"{len(result.fitted)} fitted; of "
        f"{11 * len(loop)} fits lmfit's is worse in {better} and better in {worse}"
    )
    what = f"batch of {FILES} files, 11 models each; lmfit in a loop on one core"
    return int(not report(what, ordinary / took, LEAST))


if __name__ == "__main__":
    sys.exit(main())
