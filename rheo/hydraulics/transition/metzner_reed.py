"""A Metzner-Reed Reynolds number of 2100."""

from __future__ import annotations

import numpy as np

from rheo.geometry.tube_flow import nominal_rate
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Criterion
from rheo.hydraulics.roots import IndexArray, solve_rising

CRITICAL_REYNOLDS = 2100.0


def critical_wall_rate(pipe: Pipe) -> FloatArray:
    """Return the laminar wall shear rate [1/s] at which 8ρV²/τw is 2100."""

    def gap(log_rate: FloatArray, index: IndexArray) -> FloatArray:
        part = pipe.take(index)
        rate = np.exp(log_rate)
        stress = part.model.record.stress(rate, *part.model)
        velocity = 0.125 * part.diameter * nominal_rate(part.model, rate)
        return np.log(8.0 * part.density * velocity**2 / (CRITICAL_REYNOLDS * stress))

    viscosity = pipe.model.record.stress(np.ones(pipe.size), *pipe.model)
    start = np.log(8.0 * CRITICAL_REYNOLDS * viscosity / (pipe.density * pipe.diameter**2))
    with np.errstate(over="ignore"):
        return np.exp(solve_rising(gap, start, step=2.0))


RECORD = Criterion(
    key="metzner-reed",
    name="Metzner-Reed Reynolds number 2100",
    critical_wall_rate=critical_wall_rate,
    models=None,
    source="A. B. Metzner & J. C. Reed, AIChE J. 1 (1955) 434",
    validity="Any flow curve, as a first estimate: at flow indices near 0.4 laminar flow lasts to "
    "about 2400, at high yield stresses the number says little.",
)
