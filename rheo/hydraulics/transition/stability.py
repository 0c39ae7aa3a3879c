"""Stability parameter of Ryan and Johnson on the actual velocity profile, for any flow curve."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.geometry.curve_integrals import moment_ratio
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Criterion
from rheo.hydraulics.roots import solve_rising

CRITICAL_STABILITY = 808.0

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(16)
_NODES, _WEIGHTS = 0.5 * (1.0 + _NODES), 0.5 * _WEIGHTS
# The depth enters the stability number squared: 1e-7 leaves 1e-14.
_DEPTH_TOLERANCE = 1e-7
_NUDGE = 1e-4


class _Depth:
    """How far in ln(rate) below the wall the stability number is largest, kept between calls.

    With s = ln(rate), Z(s) is rate(s)·∫_s^{s_w} τγ̇n ds but for a factor of the wall alone, so it is
    largest where that integral equals τγ̇n at s; the depth s_w - s is ln(2 + n)/(1 + n) for a power
    law.
    """

    def __init__(self, pipe: Pipe) -> None:
        self.pipe = pipe
        self.depth = np.full(pipe.size, 0.55)

    def largest(
        self, log_rate: FloatArray, index: NDArray[np.intp]
    ) -> tuple[FloatArray, FloatArray]:
        """Return ln of the largest Z, and its depth, at wall rates of the elements `index`."""
        pipe = self.pipe.take(index)
        model = pipe.model
        wide = model.with_new_axis()
        depth = self.depth[index]
        for _ in range(30):
            nodes = np.exp(log_rate[:, None] - depth[:, None] * _NODES)
            stress = wide.record.stress(nodes, *wide)
            slope = wide.record.log_slope(nodes, *wide)
            integral = depth * ((stress * nodes * slope) @ _WEIGHTS)
            low = _log_integrand(pipe, log_rate - depth - _NUDGE)
            high = _log_integrand(pipe, log_rate - depth + _NUDGE)
            here = 0.5 * (low + high)
            rise = np.maximum((high - low) / (2.0 * _NUDGE), 0.0)
            gap = np.log(integral) - here
            step = np.clip(gap / (np.exp(here) / integral + rise), -0.5 * depth, 1.0)
            depth = depth - np.clip(step, -1.0, 0.5 * depth)
            if np.all(np.abs(step) <= _DEPTH_TOLERANCE):
                break
        self.depth[index] = depth
        wall = model.record.stress(np.exp(log_rate), *model)
        log_number = (
            np.log(pipe.density * (0.5 * pipe.diameter) ** 2)
            - 2.0 * np.log(wall)
            + log_rate
            - depth
            + np.log(integral)
        )
        return log_number, depth


def _log_integrand(pipe: Pipe, log_rate: FloatArray) -> FloatArray:
    model = pipe.model
    rate = np.exp(log_rate)
    return (
        np.log(model.record.stress(rate, *model))
        + log_rate
        + np.log(model.record.log_slope(rate, *model))
    )


def stability_number(pipe: Pipe, wall_rate: FloatArray) -> FloatArray:
    """Return the largest Z(r) = Rρu(-du/dr)/τw [-] over the radius at a wall shear rate [1/s]."""
    log_number, _ = _Depth(pipe).largest(np.log(wall_rate), np.arange(pipe.size))
    return np.exp(log_number)


def surely_stable(pipe: Pipe, wall_rate: FloatArray) -> NDArray[np.bool_]:
    """Return where flow is laminar by a bound that needs no search: u and -du/dr both largest."""
    model = pipe.model
    radius = 0.5 * pipe.diameter
    wall = model.record.stress(wall_rate, *model)
    bound = pipe.density * (radius * wall_rate) ** 2 * moment_ratio(model, wall_rate, 0) / wall
    return bound < CRITICAL_STABILITY


def critical_wall_rate(pipe: Pipe) -> FloatArray:
    """Return the laminar wall shear rate [1/s] at which the largest Z is 808.

    0 or infinite for a fluid (flow index 2) whose stability does not depend on the velocity.
    """
    depth = _Depth(pipe)
    target = np.log(CRITICAL_STABILITY)
    start = np.log(CRITICAL_STABILITY / (pipe.density * pipe.diameter**2))
    viscosity = pipe.model.record.stress(np.ones(pipe.size), *pipe.model)
    start = start + np.log(viscosity)
    with np.errstate(over="ignore"):
        return np.exp(
            solve_rising(lambda x, index: depth.largest(x, index)[0] - target, start, step=2.0)
        )


RECORD = Criterion(
    key="stability",
    name="stability parameter Z = 808 (Ryan and Johnson)",
    critical_wall_rate=critical_wall_rate,
    models=None,
    source="N. W. Ryan & M. M. Johnson, AIChE J. 5 (1959) 433; on the actual profile of any flow "
    "curve",
    validity="Laminar flow in a long straight round pipe, any flow curve that rises with the rate. "
    "Newtonian: Reynolds number 2099. Tested by its authors for power-law flow.",
)
