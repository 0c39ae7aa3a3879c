"""Slatter's Reynolds number of 2100, with the unsheared core left out."""

from __future__ import annotations

import numpy as np

from rheo.geometry.tube_flow import nominal_rate, velocity_ratio
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Criterion
from rheo.hydraulics.roots import IndexArray, solve_rising

CRITICAL_REYNOLDS = 2100.0


def sheared_reynolds(pipe: Pipe, rate: FloatArray) -> FloatArray:
    """Return Re₃ = 8ρV_a²/τ(8V_a/D_s) [-] at a laminar wall shear rate [1/s].

    V_a is the mean velocity in the sheared ring, D_s = D - D_plug; with τ the flow curve this is
    Slatter's τ_y + K(8V_a/D_s)^n for a Herschel-Bulkley fluid.
    """
    model = pipe.model
    stress = model.record.stress(rate, *model)
    velocity = 0.125 * pipe.diameter * nominal_rate(model, rate)
    plug = model.yield_stress / stress
    # 1 - x taken from the difference of stresses.
    sheared = (stress - model.yield_stress) / stress
    # The ring's share of the flow over its share of the area.
    ring = (1.0 - velocity_ratio(model, rate) * plug**2) / (sheared * (1.0 + plug)) * velocity
    ring_rate = 8.0 * ring / (pipe.diameter * sheared)
    return 8.0 * pipe.density * ring**2 / model.record.stress(ring_rate, *model)


def critical_wall_rate(pipe: Pipe) -> FloatArray:
    """Return the laminar wall shear rate [1/s] at which Re₃ is 2100."""

    def gap(log_rate: FloatArray, index: IndexArray) -> FloatArray:
        part = pipe.take(index)
        return np.log(sheared_reynolds(part, np.exp(log_rate)) / CRITICAL_REYNOLDS)

    viscosity = pipe.model.record.stress(np.ones(pipe.size), *pipe.model)
    start = np.log(8.0 * CRITICAL_REYNOLDS * viscosity / (pipe.density * pipe.diameter**2))
    with np.errstate(over="ignore"):
        return np.exp(solve_rising(gap, start, step=2.0))


RECORD = Criterion(
    key="slatter",
    name="Slatter Reynolds number 2100",
    critical_wall_rate=critical_wall_rate,
    models=None,
    source="P. T. Slatter, PhD thesis, University of Cape Town (1995)",
    validity="Made for Herschel-Bulkley slurries; for other curves with a yield stress the same "
    "definition is used with the flow curve itself (our extension).",
)
