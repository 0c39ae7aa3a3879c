"""Time of the exact relations, against an ordinary way to the same numbers in the same run.

    python tests/benchmarks/bench_geometry.py

The ordinary way is a loop over the readings: scipy's quad across the gap inside its brentq.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
from scipy.integrate import quad
from scipy.optimize import brentq

sys.path.insert(0, str(Path(__file__).parents[1]))

from flow_curves import EXAMPLES, KEYS, example
from ratios import report

import rheo
from rheo import Model
from rheo.geometry import make_geometry

CUP = make_geometry("concentric-cylinders", inner_radius=0.01, outer_radius=0.02, length=0.05)
SPEEDS = np.geomspace(0.01, 100.0, 30)


def _seconds(work: Callable[[], object], repeats: int = 5) -> float:
    work()
    best = np.inf
    for _ in range(repeats):
        start = time.perf_counter()
        work()
        best = min(best, time.perf_counter() - start)
    return best


def _ordinary_torque(model: Model, speed: float) -> float:
    per_stress = 2.0 * np.pi * 0.01**2 * 0.05

    def gap(log_stress: float) -> float:
        top = np.exp(log_stress)
        low = max(top * 0.25, float(model.yield_stress), 1e-12)
        if low >= top:
            return -speed
        inner, _ = quad(lambda stress: float(model.rate(stress)) / stress, low, top, limit=200)
        return 0.5 * inner - speed

    return float(np.exp(brentq(gap, np.log(1e-6), np.log(1e6), xtol=1e-9)) * per_stress)


def main() -> None:
    """Print one line a model, then vectorised draws."""
    total = loop = 0.0
    for key in KEYS:
        model = example(key)
        fast = _seconds(lambda model=model: CUP.predict(model, SPEEDS))
        total += fast
        start = time.perf_counter()
        few = SPEEDS[::10]
        ordinary = np.array([_ordinary_torque(model, float(speed)) for speed in few])
        slow = (time.perf_counter() - start) * SPEEDS.size / few.size
        loop += slow
        error = float(np.max(np.abs(CUP.predict(model, few) / ordinary - 1.0)))
        print(
            f"{key:18s} 30 torques {1e3 * fast:7.2f} ms; loop of quad and brentq "
            f"{1e3 * slow:8.0f} ms, {slow / fast:7.0f} times as long; differ by {error:.0e}"
        )
    print(f"eleven models x 30 torques: {1e3 * total:.1f} ms")
    report("30 torques of cup and bob, 11 models; quad and brentq one by one", loop / total)
    rng = np.random.default_rng(1)
    for key in ("herschel-bulkley", "carreau"):
        draws = rheo.model(
            key,
            **{
                name: value * np.exp(0.05 * rng.standard_normal((1000, 1)))
                for name, value in EXAMPLES[key].items()
            },
        )
        together = _seconds(lambda draws=draws: CUP.predict(draws, SPEEDS), 2)
        some = [draws.at((row, 0)) for row in range(50)]
        alone = _seconds(lambda some=some: [CUP.predict(one, SPEEDS) for one in some], 2) * 20
        print(
            f"{key:18s} 1000 draws x 30 torques at once {1e3 * together:.0f} ms, "
            f"one draw after another {1e3 * alone:.0f} ms"
        )


if __name__ == "__main__":
    main()
