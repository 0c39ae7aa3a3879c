"""How often intervals cover a known truth and the right family is chosen, over 500 sets each.

python tests/benchmarks/bench_fit_coverage.py [SETS]
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np

import rheo

sys.path.insert(0, str(Path(__file__).parent.parent))

from flow_curves import example


def simulated(truth: rheo.Model, rate: np.ndarray, seed: int) -> rheo.FlowCurve:
    """Return a curve of 20 points with 2 % noise."""
    random = np.random.default_rng(seed)
    return rheo.FlowCurve(rate, truth.stress(rate) * (1.0 + 0.02 * random.standard_normal(20)))


def main(sets: int) -> None:
    """Print shares."""
    for key in ("herschel-bulkley", "casson", "power-law", "carreau", "cross", "sisko", "ellis"):
        truth = example(key)
        rate = np.geomspace(0.01 if truth.yield_stress == 0 else 0.1, 1000.0, 20)

        def gradient(model: rheo.Model) -> np.ndarray:
            flow = rheo.pipe_flow(
                model, diameter=0.05, velocity=1.0, density=1100.0, regime="laminar"
            )
            return flow.pressure_gradient

        true = float(gradient(truth))
        covered = dict.fromkeys((*truth.parameters, "pressure drop", "right family"), 0)
        for seed in range(sets):
            fits = rheo.fit(simulated(truth, rate, seed))
            found = fits[key]
            for name, value in truth.parameters.items():
                one = found.parameters[name]
                covered[name] += one.low <= float(value) <= one.high
            low, high = np.percentile(gradient(found.bootstrap(600, seed)), [2.5, 97.5])
            covered["pressure drop"] += bool(low <= true <= high)
            same = fits.best.record.has_yield_stress == truth.record.has_yield_stress
            covered["right family"] += same
        shares = ", ".join(f"{name} {count / sets:.3f}" for name, count in covered.items())
        print(f"{key}: {shares}", flush=True)


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 500)
