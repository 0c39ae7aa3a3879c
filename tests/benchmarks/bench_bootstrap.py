"""Bootstrap of a Herschel-Bulkley fit against lmfit, replicate by replicate, in the same run.

    python tests/benchmarks/bench_bootstrap.py

Prints processor times and their ratio, and how far the percentiles of 200 replicates differ.
"""

from __future__ import annotations

import time
from collections.abc import Callable
from typing import Any

import lmfit
import numpy as np
from ratios import report

import rheo
from rheo.fitting.bootstrap import bootstrap_parameters, drawn_readings

REPLICATES = 2000
BY_LMFIT = 200


def seconds(work: Callable[[], Any], count: int) -> float:
    """Return the median processor time of several runs."""
    work()
    taken = []
    for _ in range(count):
        begun = time.process_time()
        work()
        taken.append(time.process_time() - begun)
    return float(np.median(taken))


def main() -> None:
    """Print the ratio."""
    truth = rheo.model("herschel-bulkley", yield_stress=12.0, consistency=4.2, flow_index=0.45)
    rate = np.geomspace(0.5, 300.0, 20)
    random = np.random.default_rng(1)
    stress = truth.stress(rate) * (1.0 + 0.02 * random.standard_normal(20))
    found = rheo.fit(rheo.FlowCurve(rate, stress), "herschel-bulkley").best
    ours = seconds(lambda: found.bootstrap(REPLICATES, seed=1), 5)

    def refit(drawn: np.ndarray) -> list[float]:
        start = lmfit.Parameters()
        for key, one in found.parameters.items():
            start.add(key, value=one.value, min=0.0)

        def residual(values: lmfit.Parameters) -> np.ndarray:
            v = values.valuesdict()
            return (v["yield_stress"] + v["consistency"] * rate ** v["flow_index"]) / drawn - 1.0

        return list(lmfit.minimize(residual, start).params.valuesdict().values())

    readings = drawn_readings(found, BY_LMFIT, 1, "residual")
    begun = time.process_time()
    plain = np.array([refit(drawn) for drawn in readings])
    theirs = (time.process_time() - begun) * REPLICATES / BY_LMFIT
    replicates = bootstrap_parameters(found, BY_LMFIT, seed=1)
    ends = [2.5, 50.0, 97.5]
    apart = np.percentile(replicates, ends, axis=0) / np.percentile(plain, ends, axis=0) - 1.0
    print(f"{REPLICATES} replicates at once: {ours * 1e3:.1f} ms")
    print(f"{REPLICATES} lmfit fits (from {BY_LMFIT}): {theirs * 1e3:.0f} ms")
    report(
        f"bootstrap, {REPLICATES} Herschel-Bulkley refits; as many lmfit fits", theirs / ours, 60.0
    )
    print(f"largest relative difference of percentiles: {np.abs(apart).max():.1e}")


if __name__ == "__main__":
    main()
