"""Fits against lmfit and scipy in the same run.

    python tests/benchmarks/bench_fit.py [--global]

Prints the processor time of eleven models fitted to 30 raw torques in a wide gap and to a flow
curve, over that of one lmfit fit of a plain Herschel-Bulkley curve; and how often lmfit from a
default start, 1 for every parameter, fails or ends above the minimum. With --global also compares
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
from lmfit_loop import default_start, fit_curve
from ratios import report

import rheo
from rheo.geometry import make_geometry

sys.path.insert(0, str(Path(__file__).parent.parent))

from flow_curves import KEYS, example
from random_starts import lowest_of_random_starts

# Curves of each family, and the excess of a sum of squares that counts as another end.
CURVES_A_FAMILY, WORSE = 4, 1e-3
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


def default_starts() -> None:
    """Print how often lmfit from a default start ends above the minimum, over all families."""
    random = np.random.default_rng(7)
    rate = np.geomspace(0.1, 1000.0, 30)
    fits = failed = above = far = below = own_fits = own_lost = 0
    ours = theirs = 0.0
    for key in KEYS:
        for _ in range(CURVES_A_FAMILY):
            # Every parameter but exponents up to three times as large or as small.
            values = {
                name: value
                if name.endswith(("index", "exponent"))
                else value * 3.0 ** random.uniform(-1.0, 1.0)
                for name, value in example(key).parameters.items()
            }
            stress = rheo.model(key, **values).stress(rate)
            stress = stress * (1.0 + 0.02 * random.standard_normal(rate.size))
            begun = time.process_time()
            found = rheo.fit(rheo.FlowCurve(rate, stress))
            ours += time.process_time() - begun
            begun = time.process_time()
            ended = fit_curve(rate, stress, default_start)
            theirs += time.process_time() - begun
            for fit in found:
                one = ended[fit.key]
                excess = one.sum_of_squares / fit.weighted_ss - 1.0
                lost = not one.success or excess > WORSE
                fits += 1
                failed += not one.success
                above += one.success and excess > WORSE
                far += one.success and excess > 1.0
                below += excess < -WORSE
                own_fits += fit.key == key
                own_lost += fit.key == key and lost
    print(
        f"{fits} lmfit fits from 1 for every parameter: {failed} fail, {above} end more than "
        f"{WORSE:.1%} above the global fit's sum of squares ({far} at over twice of it), "
        f"{below} below it; of the {own_fits} with the curve's own model {own_lost} fail or "
        f"end above"
    )
    share = (failed + above) / fits
    report(f"global fit of 11 models; 11 lmfit from 1s, {share:.0%} lost", theirs / ours)


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
    default_starts()
    if "--global" in sys.argv:
        minima()
