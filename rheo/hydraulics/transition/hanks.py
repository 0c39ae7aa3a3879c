"""Hanks's criterion for Bingham fluids."""

from __future__ import annotations

import numpy as np

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Criterion
from rheo.hydraulics.roots import IndexArray, solve_rising
from rheo.hydraulics.yield_power_law import as_yield_power_law, hedstrom

_CONSTANT = 16800.0


def critical_wall_rate(pipe: Pipe) -> FloatArray:
    """Return the laminar wall shear rate [1/s] at Hanks's critical point.

    x/(1-x)³ = He/16800 with x = τ_y/τw; solved for z = 1/x - 1 = η_p γ̇w/τ_y, whose equation
    z³/(1+z)² = 16800/He does not cancel near yield; Re_c = 2100 as He goes to 0.
    """
    yield_stress, viscosity, _ = as_yield_power_law(pipe.model)
    rate = 16800.0 * viscosity / (pipe.density * pipe.diameter**2)
    plastic = np.flatnonzero(yield_stress > 0)
    if plastic.size:
        target = np.log(_CONSTANT / hedstrom(pipe)[plastic])

        def gap(log_z: FloatArray, index: IndexArray) -> FloatArray:
            return 3.0 * log_z - 2.0 * np.logaddexp(0.0, log_z) - target[index]

        root = solve_rising(gap, np.where(target > 0, target, target / 3.0), low=-300.0, high=300.0)
        rate[plastic] = np.exp(root) * (yield_stress / viscosity)[plastic]
    return rate


RECORD = Criterion(
    key="hanks",
    name="Hanks",
    critical_wall_rate=critical_wall_rate,
    models=("bingham",),
    source="R. W. Hanks, AIChE J. 9 (1963) 306",
    validity="Bingham fluids; equal to the stability parameter but for the rounded 16800.",
)
