"""Laminar velocity in a pipe, and the velocity at which laminar flow ends."""

from __future__ import annotations

import numpy as np

from rheo.geometry.tube_flow import nominal_rate
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Criterion
from rheo.hydraulics.roots import IndexArray, solve_rising

# A critical shear rate beyond exp(±50) 1/s is no velocity at all.
_FURTHEST = 50.0


def rate_at_stress(pipe: Pipe, stress: FloatArray) -> FloatArray:
    """Return the shear rate [1/s] at a stress [Pa], 0 up to yield.

    Turbulent stresses may lie where a strongly thinning curve needs more than the 1e20 1/s to
    which `Model.rate` goes; there the search goes on.
    """
    rate = np.array(pipe.model.rate(stress))
    beyond = np.flatnonzero(np.isposinf(rate) & np.isfinite(stress))
    if beyond.size:
        target = np.log(stress[beyond])

        def gap(log_rate: FloatArray, index: IndexArray) -> FloatArray:
            model = pipe.take(beyond[index]).model
            return np.log(model.record.stress(np.exp(log_rate), *model)) - target[index]

        rate[beyond] = np.exp(solve_rising(gap, np.full(beyond.size, 40.0), step=20.0))
    return rate


def laminar_velocity(pipe: Pipe, wall_rate: FloatArray) -> FloatArray:
    """Return the mean velocity [m/s] of laminar flow at a wall shear rate [1/s] above 0."""
    return 0.125 * pipe.diameter * nominal_rate(pipe.model, wall_rate)


def critical_wall_rate(pipe: Pipe, criterion: Criterion) -> FloatArray:
    """Return the wall shear rate [1/s] at which laminar flow ends by a criterion.

    0 or infinite for a fluid (flow index 2) whose stability does not depend on the velocity.
    """

    def gap(log_rate: FloatArray, index: IndexArray) -> FloatArray:
        return np.log(criterion.number(pipe.take(index), np.exp(log_rate)))

    start = np.nan_to_num(_estimate(pipe), posinf=_FURTHEST, neginf=-_FURTHEST)
    root = solve_rising(gap, start, step=0.05, low=-_FURTHEST, high=_FURTHEST)
    return np.exp(root)


def _estimate(pipe: Pipe) -> FloatArray:
    """Return ln of the critical rate [1/s] of the power law along the flow curve's tangent.

    For a power law the stability parameter, 808 there, is ρR²γ̇w²/τw n/(2+n)^((2+n)/(1+n)).
    """

    def gap(log_rate: FloatArray, index: IndexArray) -> FloatArray:
        part, rate = pipe.take(index), np.exp(log_rate)
        n = part.model.record.log_slope(rate, *part.model)
        shape = np.log(n) - (2.0 + n) / (1.0 + n) * np.log(2.0 + n)
        stress = part.model.record.stress(rate, *part.model)
        return shape + 2.0 * log_rate - np.log(stress) + size[index]

    size = np.log(pipe.density * pipe.diameter**2 / (4.0 * 808.0))
    # The Newtonian value for the viscosity at 1 1/s.
    start = np.log(pipe.model.record.stress(np.ones(pipe.size), *pipe.model)) - size + 1.0
    return solve_rising(gap, start, step=2.0, low=-_FURTHEST, high=_FURTHEST)


def critical_point(pipe: Pipe, criterion: Criterion) -> tuple[FloatArray, FloatArray]:
    """Return the critical velocity [m/s] and the laminar wall stress [Pa] there; 0 or infinite."""
    rate = critical_wall_rate(pipe, criterion)
    velocity, stress = rate.copy(), rate.copy()
    found = np.isfinite(rate) & (rate > 0)
    if np.any(found):
        part = pipe.take(found)
        velocity[found] = laminar_velocity(part, rate[found])
        stress[found] = part.model.record.stress(rate[found], *part.model)
    return velocity, stress
