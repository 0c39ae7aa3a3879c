"""Folders of one kind of file each: a batch's work on one core against lmfit in a loop on one core.

    python tests/benchmarks/bench_batch_families.py

A folder of each model's flow curves (noise 2 %), and one of torques in the wide gap of a cup and
bob. Both sides are processor time in the same run; the batch's is that of one of its processes,
without the start of it. A loop of lmfit is quick where every model follows the readings well, and
slow where some do not: so its time says as much of the product as of lmfit. It screens nothing and
ranks nothing. Torques are predicted in the loop by the program's own quick relation; the second row
of torques has the loop fit points converted as if the fluid were Newtonian, which is another and a
wrong answer.
"""

from __future__ import annotations

import os
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

os.environ["OMP_NUM_THREADS"] = os.environ["OPENBLAS_NUM_THREADS"] = "1"

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[1]))

from flow_curves import KEYS, example
from lmfit_loop import Ended, fit_all, fit_curve, start_of_curve, worse_and_better
from ratios import report

import rheo
from rheo.batches import Row
from rheo.batches.job import Job, Settings, run_job
from rheo.batches.run import TOGETHER
from rheo.geometry import make_geometry
from rheo.models import ModelRecord

FILES, SAMPLE, POINTS, NOISE, SPREAD = 100, 4, 30, 0.02, 0.1
TORQUE_FILES, TORQUE_SAMPLE = 20, 1
# Fits of torques by lmfit are given up after so many evaluations, or the benchmark would not end.
MOST_EVALUATIONS = 300
CUP = make_geometry("concentric-cylinders", inner_radius=0.01, outer_radius=0.02, length=0.05)
RATE = np.geomspace(0.1, 1000.0, POINTS)
SPEED = np.geomspace(0.05, 60.0, POINTS)
LEAST = 15.0


def _product(key: str, random: np.random.Generator) -> rheo.Model:
    """Return the product of a lot: exponents stay, the rest varies."""
    return rheo.model(
        key,
        **{
            name: value
            if name.endswith(("index", "exponent"))
            else value * np.exp(SPREAD * random.standard_normal())
            for name, value in example(key).parameters.items()
        },
    )


def _write(folder: Path, name: str, head: str, first: np.ndarray, second: np.ndarray) -> str:
    path = folder / name
    lines = [f"{a:.8g},{b:.8g}\n" for a, b in zip(first, second, strict=True)]
    path.write_text(head + "".join(lines), "utf-8")
    return str(path)


def _ours(files: list[str]) -> tuple[float, list[Row]]:
    """Return processor seconds a file, and the rows."""
    jobs = [
        Job(tuple(files[first : first + TOGETHER]), Settings(), None)
        for first in range(0, len(files), TOGETHER)
    ]
    run_job(jobs[0])
    begun = time.process_time()
    rows = [row for job in jobs for row in run_job(job)]
    return (time.process_time() - begun) / len(files), rows


def _loop(
    files: list[str],
    count: int,
    fit: Callable[[np.ndarray, np.ndarray], dict[str, Ended]],
    skip: int,
) -> tuple[float, list[tuple[int, dict[str, Ended]]]]:
    """Return processor seconds a file, and what lmfit came to."""
    some = range(0, len(files), len(files) // count)
    begun = time.process_time()
    found = [
        (index, fit(*np.loadtxt(files[index], delimiter=",", skiprows=skip).T)) for index in some
    ]
    return (time.process_time() - begun) / len(found), found


def _torques(speed: np.ndarray, torque: np.ndarray) -> dict[str, Ended]:
    def predict(record: ModelRecord, own: list[float]) -> np.ndarray:
        values = dict(zip(record.parameter_keys, own, strict=True))
        try:
            return CUP.predict(rheo.model(record.key, **values), speed)
        except rheo.InputError:
            # lmfit has tried what is no flow curve.
            return np.full(speed.size, np.nan)

    start = start_of_curve(*CUP.nominal(speed, torque))
    return fit_all(start, torque, predict, MOST_EVALUATIONS)


def _as_newtonian(speed: np.ndarray, torque: np.ndarray) -> dict[str, Ended]:
    return fit_curve(*CUP.nominal(speed, torque))


def main() -> int:
    """Print a row for each folder; return 1 if all together are slower than they may be."""
    random = np.random.default_rng(2)
    total = loop = 0.0
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        for key in KEYS:
            head = "Shear rate [1/s],Shear stress [Pa]\n"
            files = [
                _write(
                    folder,
                    f"{key}{number:03}.csv",
                    head,
                    RATE,
                    _product(key, random).stress(RATE)
                    * np.exp(NOISE * random.standard_normal(POINTS)),
                )
                for number in range(FILES)
            ]
            own, rows = _ours(files)
            slow, ended = _loop(files, SAMPLE, fit_curve, 1)
            total, loop = total + own, loop + slow
            counts = [worse_and_better(one, rows[index].aicc, POINTS) for index, one in ended]
            worse, better = np.sum(counts, axis=0)
            print(
                f"{key:18}{1e3 * own:7.2f} ms a file, lmfit {1e3 * slow:7.1f} ms; of "
                f"{11 * len(ended)} fits lmfit's is worse in {worse}, better in {better}"
            )
            report(f"folder of {key} curves, one core; lmfit in a loop", slow / own)
        met = report("folders of all families, one core; lmfit in a loop", loop / total, LEAST)
        head = (
            "# geometry: concentric-cylinders, inner_radius 10 mm, outer_radius 20 mm, "
            "length 50 mm\n"
            "Angular speed [rad/s],Torque [N m]\n"
        )
        files = []
        for number in range(TORQUE_FILES):
            torque = CUP.predict(_product("herschel-bulkley", random), SPEED)
            torque *= np.exp(NOISE * random.standard_normal(POINTS))
            files.append(_write(folder, f"torque{number:03}.csv", head, SPEED, torque))
        own, rows = _ours(files)
        assert all(row.geometry == CUP.key for row in rows)
        exact, ended = _loop(files, TORQUE_SAMPLE, _torques, 2)
        counts = [worse_and_better(one, rows[index].aicc, POINTS) for index, one in ended]
        worse, better = np.sum(counts, axis=0)
        rough, _ = _loop(files, TORQUE_SAMPLE * 2, _as_newtonian, 2)
        print(
            f"torques of a cup   {1e3 * own:7.2f} ms a file, lmfit {1e3 * exact:7.0f} ms, "
            f"{1e3 * rough:.0f} ms to Newtonian points; of {11 * len(ended)} fits lmfit's is worse "
            f"in {worse}, better in {better}"
        )
        met &= report(
            "folder of torques in a wide gap, one core; lmfit in a loop, given up early",
            exact / own,
            LEAST,
        )
        report("the same; lmfit in a loop to points converted as Newtonian", rough / own)
    return int(not met)


if __name__ == "__main__":
    sys.exit(main())
