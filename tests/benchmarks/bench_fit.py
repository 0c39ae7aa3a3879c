"""Fits against lmfit and scipy in the same run.

    python tests/benchmarks/bench_fit.py [--global]

Prints the processor time of eleven models fitted to 30 raw torques in a wide gap and to a flow
curve, over that of one lmfit fit of a plain Herschel-Bulkley curve. With --global also compares
every model's weighted sum of squares with the best of 200 random starts of scipy's optimiser.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

import lmfit
import numpy as np
from ratios import report

import rheo
from rheo.geometry import make_geometry

sys.path.insert(0, str(Path(__file__).parent.parent))

from random_starts import lowest_of_random_starts

TRUTH = {"yield_stress": 12.0, "consistency": 4.2, "flow_index": 0.45}


def seconds(work: Callable[[], Any], count: int) -> float:
    """Return the median processor time of several runs."""
    work()
    taken = []
    for _ in range(count):
        begun = time.process_time()
        work()
        taken.append(time.process_time() - begun)
    return float(np.median(taken))


def herschel_bulkley(
    rate: np.ndarray, yield_stress: float, consistency: float, flow_index: float
) -> np.ndarray:
    """Return the stress as a user of lmfit would write it."""
    return yield_stress + consistency * rate**flow_index


def times() -> None:
    """Print ratios of processor time."""
    geometry = make_geometry(
        "concentric-cylinders", inner_radius=0.01, outer_radius=0.02, length=0.06
    )
    speed = np.geomspace(0.05, 60.0, 30)
    random = np.random.default_rng(1)
    scatter = 1.0 + 0.02 * random.standard_normal(30)
    torque = geometry.predict(rheo.model("herschel-bulkley", **TRUTH), speed) * scatter
    readings = rheo.Readings(geometry=geometry, angular_speed=speed, torque=torque)
    curve = readings.flow_curve()
    curve_model = lmfit.Model(herschel_bulkley)

    def by_model() -> None:
        start = curve_model.make_params(
            yield_stress={"value": 5.0, "min": 0.0},
            consistency={"value": 1.0, "min": 0.0},
            flow_index={"value": 0.7, "min": 0.01, "max": 2.0},
        )
        curve_model.fit(curve.stress, start, rate=curve.rate, weights=1.0 / curve.stress)

    def by_minimize() -> None:
        start = lmfit.Parameters()
        start.add("yield_stress", 5.0, min=0.0)
        start.add("consistency", 1.0, min=0.0)
        start.add("flow_index", 0.7, min=0.01, max=2.0)
        lmfit.minimize(
            lambda v: herschel_bulkley(curve.rate, **v.valuesdict()) / curve.stress - 1.0, start
        )

    model_fit, minimize = seconds(by_model, 30), seconds(by_minimize, 30)
    print(f"one lmfit.Model fit: {model_fit * 1e3:.2f} ms; lmfit.minimize: {minimize * 1e3:.2f} ms")
    for name, data in (("30 torques in a wide gap", readings), ("a flow curve", curve)):
        taken = seconds(lambda data=data: rheo.fit(data), 9)
        print(
            f"eleven models to {name}: {taken * 1e3:.1f} ms, "
            f"{taken / model_fit:.1f} lmfit.Model fits, {taken / minimize:.1f} lmfit.minimize"
        )
        report(f"global fit of 11 models to {name}; lmfit.Model.fit of one", model_fit / taken)


def minima() -> None:
    """Print by how much random starts do better, for every model and two products."""
    products = {
        "sauce": (rheo.model("herschel-bulkley", **TRUTH), 0.1, 500.0),
        "gum": (
            rheo.model(
                "cross",
                zero_shear_viscosity=30.0,
                infinite_shear_viscosity=0.01,
                time_constant=1.5,
                rate_index=0.8,
            ),
            0.01,
            1000.0,
        ),
    }
    for name, (truth, low, high) in products.items():
        rate = np.geomspace(low, high, 24)
        random = np.random.default_rng(3)
        stress = truth.stress(rate) * (1.0 + 0.02 * random.standard_normal(24))
        for weighting, sigma in (("relative", stress), ("absolute", np.ones(24))):
            for found in rheo.fit(rheo.FlowCurve(rate, stress), weighting=weighting):
                lowest = lowest_of_random_starts(found.record, rate, stress, sigma, 200)
                print(f"{name}, {weighting}, {found.key}: {found.weighted_ss / lowest - 1.0:+.1e}")


if __name__ == "__main__":
    times()
    if "--global" in sys.argv:
        minima()
