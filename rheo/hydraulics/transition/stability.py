"""Stability parameter of Ryan and Johnson on the actual velocity profile, for any flow curve."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Criterion
from rheo.models import Model

CRITICAL_STABILITY = 808.0

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(16)
_NODES, _WEIGHTS = 0.5 * (1.0 + _NODES), 0.5 * _WEIGHTS
# The error of the depth enters the largest value squared: 1e-7 leaves 1e-14.
_DEPTH_TOLERANCE = 1e-7
_NUDGE = 1e-4
_STEPS = 40
# Elements at a time: what the second-level cache of a processor core holds.
_BLOCK = 2048


def stability_number(pipe: Pipe, wall_rate: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the largest Z(r) = Rρu(-du/dr)/τw over the radius, and where it is.

    With s = ln(rate), Z(s) is γ̇(s)·∫_s^{s_w} τγ̇n ds times ρR²/τw², so that it is largest where the
    integral equals τγ̇n at s. The depth d = s_w - s, ln(2 + n)/(1 + n) for a power law, is found
    by Newton's method on the logarithms of the two.

    Parameters
    ----------
    pipe : Pipe
        Product and pipe, flat.
    wall_rate : array
        Wall shear rate [1/s] of laminar flow, 1-D.

    Returns
    -------
    number : array
        Z [-].
    depth : array
        ln(wall rate/rate) [-] where Z is largest.
    """
    if pipe.size <= _BLOCK:
        return _stability_number(pipe, wall_rate)
    parts = [np.arange(at, min(at + _BLOCK, pipe.size)) for at in range(0, pipe.size, _BLOCK)]
    found = [_stability_number(pipe.take(part), wall_rate[part]) for part in parts]
    number, depth = zip(*found, strict=True)
    return np.concatenate(number), np.concatenate(depth)


def _stability_number(pipe: Pipe, wall_rate: FloatArray) -> tuple[FloatArray, FloatArray]:
    model = pipe.model
    wide = model.with_new_axis()
    top = np.log(wall_rate)
    slope = model.record.log_slope(wall_rate, *model)
    depth = np.log(2.0 + slope) / (1.0 + slope)
    for _ in range(_STEPS):
        nodes = np.exp(top[:, np.newaxis] - depth[:, np.newaxis] * _NODES)
        integral = depth * (_integrand(wide, nodes) @ _WEIGHTS)
        below = np.log(_integrand(model, np.exp(top - depth - _NUDGE)))
        above = np.log(_integrand(model, np.exp(top - depth + _NUDGE)))
        here = 0.5 * (below + above)
        rise = np.maximum((above - below) / (2.0 * _NUDGE), 0.0)
        step = (np.log(integral) - here) / (np.exp(here) / integral + rise)
        # The last depth stays: the value there is flat, and its integral is at hand.
        if np.all(np.abs(step) <= _DEPTH_TOLERANCE):
            break
        depth = depth - np.clip(step, -1.0, 0.5 * depth)
    stress = model.record.stress(wall_rate, *model)
    radius = 0.5 * pipe.diameter
    log_number = top - depth + np.log(integral) - 2.0 * np.log(stress)
    return pipe.density * radius**2 * np.exp(log_number), depth


def _integrand(model: Model, rate: FloatArray) -> FloatArray:
    return model.record.stress(rate, *model) * rate * model.record.log_slope(rate, *model)


def surely_stable(pipe: Pipe, velocity: FloatArray, wall_rate: FloatArray) -> NDArray[np.bool_]:
    """Return where flow is laminar by a bound on Z that needs no search.

    -du/dr is nowhere larger than at the wall, and u nowhere larger than 3V, which a profile comes
    to whose shear rate jumps up at the wall.

    Parameters
    ----------
    pipe : Pipe
        Product and pipe, flat.
    velocity, wall_rate : array
        Mean velocity [m/s] and wall shear rate [1/s] of laminar flow, 1-D.
    """
    stress = pipe.model.record.stress(wall_rate, *pipe.model)
    bound = 1.5 * pipe.diameter * pipe.density * velocity * wall_rate
    return bound < CRITICAL_STABILITY * stress


RECORD = Criterion(
    key="stability",
    name="stability parameter Z = 808 (Ryan and Johnson)",
    number=lambda pipe, rate: stability_number(pipe, rate)[0] / CRITICAL_STABILITY,
    models=None,
    source="N. W. Ryan & M. M. Johnson, AIChE J. 5 (1959) 433; on the actual profile of any flow "
    "curve",
    validity="Laminar flow in a long straight round pipe, any flow curve that rises with the rate. "
    "Newtonian: Reynolds number 2099. Tested by its authors for power-law flow.",
)
