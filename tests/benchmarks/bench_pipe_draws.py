"""Parameter draws through `pipe_flow` in one call, against scipy's quad and brentq one by one.

The ordinary way solves the Rabinowitsch-Mooney integral of each draw by scipy.integrate.quad inside
scipy.optimize.brentq, with scalar formulas from `math`. It is timed on a sample of the draws and
scaled up; the wall stresses of that sample are compared. `pipe_flow` is timed as an ordinary call,
with the regime found.

Run: python tests/benchmarks/bench_pipe_draws.py
"""

from __future__ import annotations

import math
import time
from collections.abc import Callable

import numpy as np
from ratios import report
from scipy.integrate import quad
from scipy.optimize import brentq

import rheo

DIAMETER, VELOCITY, DENSITY = 0.05, 1.0, 1100.0
NOMINAL = 8.0 * VELOCITY / DIAMETER
SAMPLE = 200


def _herschel_bulkley(yield_stress: float, consistency: float, flow_index: float) -> float:
    """Wall stress [Pa] by the integral over the stress."""

    def gap(wall: float) -> float:
        integral, _ = quad(
            lambda stress: stress**2 * ((stress - yield_stress) / consistency) ** (1 / flow_index),
            yield_stress,
            wall,
            epsrel=1e-10,
        )
        return 4.0 * integral / wall**3 - NOMINAL

    power_law = consistency * (NOMINAL * (3 * flow_index + 1) / (4 * flow_index)) ** flow_index
    return brentq(gap, yield_stress * (1 + 1e-9), 2.0 * (yield_stress + power_law), rtol=1e-12)


def _carreau(zero: float, infinite: float, time_constant: float, flow_index: float) -> float:
    """Wall stress [Pa] by the integral over the rate."""

    def stress(rate: float) -> float:
        bend = (1.0 + (time_constant * rate) ** 2) ** (0.5 * (flow_index - 1.0))
        return rate * (infinite + (zero - infinite) * bend)

    def gap(wall_rate: float) -> float:
        integral, _ = quad(lambda rate: stress(rate) ** 3, 0.0, wall_rate, epsrel=1e-10, limit=200)
        return 4.0 / 3.0 * (wall_rate - integral / stress(wall_rate) ** 3) - NOMINAL

    return stress(brentq(gap, 0.5 * NOMINAL, 20.0 * NOMINAL, rtol=1e-12))


def _compare(name: str, model: rheo.Model, one_by_one: Callable[..., float], least: float) -> None:
    count = model.shape[0]
    rheo.pipe_flow(model.map(lambda value: value[:1000]), DIAMETER, VELOCITY, DENSITY)
    took = math.inf
    for _ in range(3):
        start = time.perf_counter()
        flow = rheo.pipe_flow(model, DIAMETER, VELOCITY, DENSITY)
        took = min(took, time.perf_counter() - start)
    sample = np.linspace(0, count - 1, SAMPLE).astype(int)
    rows = np.stack([value[sample] for value in model], axis=1).tolist()
    start = time.perf_counter()
    found = np.array([one_by_one(*row) for row in rows])
    loop = (time.perf_counter() - start) * count / SAMPLE
    laminar = flow.regime[sample] == "laminar"
    off = np.abs(found / flow.wall_stress[sample] - 1)[laminar].max()
    print(
        f"{name}: {count} draws, {laminar.mean():.0%} laminar, one call {took:.3f} s, "
        f"one by one {loop:.0f} s (scaled from {SAMPLE}), {loop / took:.0f} times, "
        f"wanted {least:.0f}; largest difference {off:.1e}"
    )
    report(f"{count} laminar draws, {name}; quad and brentq one by one", loop / took, least)


def main() -> None:
    """Print one line a model."""
    rng = np.random.default_rng(1)

    def spread(value: float, relative: float, count: int) -> np.ndarray:
        return value * np.exp(relative * rng.standard_normal(count))

    herschel_bulkley = rheo.model(
        "herschel-bulkley",
        yield_stress=spread(12.0, 0.2, 100_000),
        consistency=spread(4.2, 0.2, 100_000),
        flow_index=spread(0.45, 0.05, 100_000),
    )
    _compare("Herschel-Bulkley", herschel_bulkley, _herschel_bulkley, 100.0)
    carreau = rheo.model(
        "carreau",
        zero_shear_viscosity=spread(20.0, 0.2, 20_000),
        infinite_shear_viscosity=spread(0.01, 0.2, 20_000),
        time_constant=spread(1.0, 0.2, 20_000),
        flow_index=spread(0.4, 0.05, 20_000),
    )
    _compare("Carreau", carreau, _carreau, 50.0)


if __name__ == "__main__":
    main()
