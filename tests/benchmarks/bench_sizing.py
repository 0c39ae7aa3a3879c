"""Sizing 60 catalogue sizes with 1,000 draws each: one call against a loop over the scalar path.

The loop solves the same line for one size and one draw at a time. It is timed on a sample of all
size and draw pairs, spread evenly, and scaled up; the pressures of that sample are compared.

Run: python tests/benchmarks/bench_sizing.py
"""

from __future__ import annotations

import time

import numpy as np
from ratios import report

import rheo
from rheo.line import (
    Costs,
    Entrance,
    Fitting,
    Limits,
    Line,
    Pipe,
    Product,
    Vessel,
    catalogue,
)
from rheo.line.size_values import size_values, with_diameters
from rheo.line.walk import walk

DRAWS, SIZES, SAMPLE = 1000, 60, 1500
FLOW = 2e-3


def _case(key: str) -> tuple[Product, rheo.Model]:
    rng = np.random.default_rng(1)

    def spread(value: float, relative: float) -> np.ndarray:
        return value * np.exp(relative * rng.standard_normal(DRAWS))

    parameters = {
        "herschel-bulkley": {
            "yield_stress": spread(12.0, 0.1),
            "consistency": spread(4.2, 0.1),
            "flow_index": spread(0.45, 0.03),
        },
        "carreau": {
            "zero_shear_viscosity": spread(20.0, 0.1),
            "infinite_shear_viscosity": spread(0.01, 0.1),
            "time_constant": spread(1.0, 0.1),
            "flow_index": spread(0.4, 0.03),
        },
    }[key]
    draws = rheo.model(key, **parameters)
    centre = rheo.model(key, **{name: float(np.median(v)) for name, v in parameters.items()})
    return Product(centre, 1100.0, vapour_pressure=2300.0, draws=(draws,)), draws


def main() -> None:
    """Print one line a model: seconds, ratio, largest difference."""
    line = Line(
        suction=(Vessel(2.0), Entrance(), Pipe(3.0, 0.0729, fixed_size=True)),
        discharge=(Pipe(60.0, 0.05, rise=5.0), Fitting("bends", 6, loss_coefficient=0.9), Vessel()),
    )
    sizes = catalogue()[:: len(catalogue()) // SIZES][:SIZES]
    limits = Limits(pressure=6e5, max_velocity=2.5, min_npsh=3.0)
    costs = Costs(hours=5000.0, energy_price=0.2, efficiency=0.5)
    print(f"{'model':18}{'one call [s]':>14}{'loop [s]':>12}{'ratio':>8}{'difference':>14}")
    for key in ("herschel-bulkley", "carreau"):
        product, draws = _case(key)
        start = time.perf_counter()
        rheo.size_line(line, product, FLOW, sizes, limits=limits, costs=costs)
        together = time.perf_counter() - start
        table = size_values(line, product, FLOW, sizes, source=draws).pressure
        pairs = np.linspace(0, SIZES * DRAWS - 1, SAMPLE).astype(int)
        worst, start = 0.0, time.perf_counter()
        for pair in pairs:
            row, column = divmod(int(pair), DRAWS)
            one = rheo.model(
                key, **{name: float(v[column]) for name, v in draws.parameters.items()}
            )
            sized = with_diameters(line, np.asarray(sizes[row].inside_diameter))
            alone = float(walk(sized, product, FLOW, source=one).differential_pressure)
            worst = max(worst, abs(alone / table[row, column] - 1.0))
        apart = (time.perf_counter() - start) * SIZES * DRAWS / SAMPLE
        print(f"{key:18}{together:14.3f}{apart:12.1f}{apart / together:8.0f}{worst:14.1e}")
        what = f"{SIZES} sizes x {DRAWS} draws, {key}; one size and draw at a time"
        report(what, apart / together)


if __name__ == "__main__":
    main()
