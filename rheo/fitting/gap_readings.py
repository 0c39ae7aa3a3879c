"""Torque in a gap of any width with its derivatives, quick enough for a search.

At a given torque the speed is ω = ½∫γ̇ d(ln τ), so that a change of the flow curve changes the bob
stress at a given speed by

    dτ_i = τ_i/(γ̇_i - γ̇_o) ∫(dτ/τ) dγ̇,

a mean of the change over the rates in the gap. One rule of Gauss and Legendre serves both
integrals. The rate at the bob is found by Newton's method from rates known beforehand, and the
last step is taken in the result.
"""

from __future__ import annotations

from functools import cache

import numpy as np
from numpy.typing import NDArray

from rheo.models import Model

FloatArray = NDArray[np.float64]

# γ̇ = γ̇_o + (γ̇_i - γ̇_o)t³ crowds the nodes where a power of the rate would be steep.
_POWER = 3
_NODES, _WIDE_NODES = 24, 72
_WIDE_GAP = 1.2
_PASSES = 12
# The last step is exact to the square of this.
_NEAR = 1e-4
_LARGEST_STEP = 3.0
# Deeper in ln(rate) nothing is left of the flow.
_DEEPEST = -40.0
_CLOSE = 1e-5


@cache
def _rule(count: int) -> tuple[FloatArray, FloatArray]:
    nodes, weights = np.polynomial.legendre.leggauss(count)
    t = 0.5 * (1.0 + nodes)
    return t**_POWER, 0.5 * weights * _POWER * t ** (_POWER - 1)


def bob_stress(
    model: Model, speed: FloatArray, log_ratio: FloatArray, start: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return stress (b, n) at the bob, its derivatives (b, p, n) and the rate (b, n) there.

    Parameters
    ----------
    model : Model
        Parameters of shape (b, 1).
    speed, log_ratio, start : array, shape (n,)
        Angular speed [rad/s], ln(outer over inner radius), and shear rates at the bob [1/s] from
        which to start.

    Returns
    -------
    tuple of array
        NaN where Newton's method did not settle. The rate is that before the last step.
    """
    position, weight = _rule(_WIDE_NODES if np.max(log_ratio) > _WIDE_GAP else _NODES)
    shape = np.broadcast_shapes(speed.shape, model.shape)
    wanted = np.log(speed)
    at = np.broadcast_to(np.log(start), shape)
    width = np.where(np.isfinite(log_ratio), log_ratio, 0.0)
    local = model.with_new_axis()
    # d ln(cup rate) below the bob's, from which the next pass starts; none before the first.
    drop: FloatArray | None = None
    for last in range(_PASSES):
        rate = np.exp(at)
        stress = model.record.stress(rate, *model)
        slope = model.record.log_slope(rate, *model)
        if drop is None:
            drop = np.maximum(-2.0 * log_ratio / np.maximum(slope, 0.01), _DEEPEST)
        cup, drop = _cup_rate(model, at, stress, log_ratio, drop)
        span = rate - cup
        inside = cup[..., np.newaxis] + span[..., np.newaxis] * position
        bent = model.record.log_slope(inside, *local) * position / inside
        found = cup * width + 0.5 * span**2 * (bent @ weight)
        rise = 0.5 * span * slope / found
        gap = wanted - np.log(found)
        if not np.any(np.abs(gap) > _NEAR) or last == _PASSES - 1:
            break
        at = at + np.clip(gap / rise, -_LARGEST_STEP, _LARGEST_STEP)
    settled = np.abs(gap) <= _NEAR
    total = local.record.stress(inside, *local)
    slopes = np.empty((*shape[:-1], len(model.record.parameters), shape[-1]))
    for index, column in enumerate(local.record.jacobian(inside, *local)):
        slopes[..., index, :] = stress * ((column / total) @ weight)
    # From the rate where Newton's method stands to the speed asked for, along the flow curve.
    onward = np.where(settled, np.exp(gap * slope / rise), np.nan)
    return stress * onward, slopes * onward[..., np.newaxis, :], rate


def _cup_rate(
    model: Model, at: FloatArray, stress: FloatArray, log_ratio: FloatArray, drop: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return the shear rate [1/s] at the cup, 0 where the fluid rests, and ln of cup over bob rate.

    Its error enters the speed in second order only, so that a solution to 1e-5 is enough.
    """
    if model.record.rate is not None:
        return model.record.rate(stress * np.exp(-2.0 * log_ratio), *model), drop
    wanted = np.log(stress) - 2.0 * log_ratio
    for _ in range(_PASSES):
        here = np.exp(at + drop)
        gap = wanted - np.log(model.record.stress(here, *model))
        step = gap / np.maximum(model.record.log_slope(here, *model), 0.01)
        drop = np.clip(drop + step, _DEEPEST, 0.0)
        if not (np.abs(step) > _CLOSE).any():
            break
    return np.exp(at + drop), drop
