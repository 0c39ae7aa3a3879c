"""`rheo run` end to end against what an ordinary script of the trade does for the same line.

    python tests/benchmarks/bench_run.py

The script reads the gum sample's readings, fits a Carreau curve by lmfit from a start read off the
curve, draws 1,000 flow curves by refitting drawn residuals with lmfit, and takes each through the
pipes of the sample by scipy's quad and brentq. It ranks no rivals, screens nothing, sizes nothing,
starts nothing up. `rheo run` draws as many besides eleven models, system curve, pump,
start-up and doubt. Both are new processes and timed by their processor time, imports included.
"""

from __future__ import annotations

import resource
import statistics
import subprocess
import sys
import tempfile
from pathlib import Path

import numpy as np
from ratios import report

import rheo

ROOT = Path(__file__).parents[2]
CASE = ROOT / "sample_data" / "gum.toml"
REPEATS = 3
SCRIPT = """
import numpy as np, pandas as pd, lmfit
from scipy.integrate import quad
from scipy.optimize import brentq
rate, stress = np.loadtxt({table!r}, delimiter=",").T
pipes, flow, draws = {pipes!r}, {flow!r}, {draws!r}

def curve(g, z, i, l, n):
    return g * (i + (z - i) * (1 + (l * g) ** 2) ** ((n - 1) / 2))

def fitted(measured):
    start = lmfit.Parameters()
    start.add("z", measured[0] / rate[0], min=0)
    start.add("i", 1e-3, min=0)
    start.add("l", 1.0, min=0)
    start.add("n", 0.5, min=0, max=1)
    def residual(p):
        return curve(rate, *p.valuesdict().values()) / measured - 1
    return lmfit.minimize(residual, start).params.valuesdict().values()

def pressure(p):
    total = 0.0
    for diameter, length in pipes:
        wanted = 32 * flow / (np.pi * diameter**3)
        def gap(log_rate):
            top = np.exp(log_rate)
            wall = curve(top, *p)
            # 8V/D = 4 g_w - (4/t_w^3) int t^3 dg, by parts
            area = quad(lambda g: curve(g, *p) ** 3, 0, top, epsrel=1e-9)[0]
            return 4 / 3 * (top - area / wall**3) - wanted
        wall = curve(np.exp(brentq(gap, np.log(wanted / 10), np.log(wanted * 10))), *p)
        total += 4 * wall * length / diameter
    return total

best = list(fitted(stress))
fit = curve(rate, *best)
random = np.random.default_rng(1)
own = stress / fit - 1
found = [pressure(list(fitted(fit * (1 + random.choice(own, own.size))))) for _ in range(draws)]
print(pressure(best), *np.percentile(found, [2.5, 97.5]))
"""
DRAWS = 1000


def _seconds(arguments: list[str]) -> tuple[float, str]:
    before = resource.getrusage(resource.RUSAGE_CHILDREN)
    done = subprocess.run(
        [sys.executable, *arguments], check=True, capture_output=True, text=True, cwd=ROOT
    )
    after = resource.getrusage(resource.RUSAGE_CHILDREN)
    spent = after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime
    return spent, done.stdout


def main() -> int:
    """Print the times, both answers, and the ratio."""
    case = rheo.load_case(CASE)
    result = rheo.run_case(case)
    curve = result.readings[0].flow_curve()
    parts = [part for part in result.line.parts if part.kind == "pipe"]
    pipes = [(float(part.diameter), float(part.length)) for part in parts]
    with tempfile.TemporaryDirectory() as folder:
        table = Path(folder) / "readings.csv"
        np.savetxt(table, np.stack([curve.rate, curve.stress], axis=1), delimiter=",")
        script = Path(folder) / "ordinary.py"
        script.write_text(
            SCRIPT.format(table=str(table), pipes=pipes, flow=float(result.flow), draws=DRAWS),
            encoding="utf-8",
        )
        ours, theirs = [], []
        for _ in range(REPEATS):
            ours.append(_seconds(["-m", "rheo", "run", str(CASE)])[0])
            spent, said = _seconds([str(script)])
            theirs.append(spent)
    own = sum(float(part.pressure_loss) for part in parts)
    print(f"friction of the pipes: rheo {own:.1f} Pa; the script {said.strip()} Pa")
    print(f"rheo run {statistics.median(ours):.2f} s, the script {statistics.median(theirs):.2f} s")
    report(
        "rheo run gum.toml; a script with lmfit, quad and brentq for its draws alone",
        statistics.median(theirs) / statistics.median(ours),
    )
    return 0


if __name__ == "__main__":
    sys.exit(main())
