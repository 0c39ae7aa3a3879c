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

from rheo.fitting.several import SeveralCurves

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
# The error of the cup's rate enters the speed in second order only.
_CLOSE = 1e-5


@cache
def _rule(count: int) -> tuple[FloatArray, FloatArray]:
    nodes, weights = np.polynomial.legendre.leggauss(count)
    t = 0.5 * (1.0 + nodes)
    return t**_POWER, 0.5 * weights * _POWER * t ** (_POWER - 1)


def bob_stress(
    curves: SeveralCurves, speed: FloatArray, log_ratio: FloatArray, start: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return stress (b, n) at the bob, its derivatives (b, p, n) and the rate (b, n) there.

    Parameters
    ----------
    curves : SeveralCurves
        Of b rows.
    speed, log_ratio : array, shape (n,)
        Angular speed [rad/s], ln(outer over inner radius).
    start : array, shape (n,) or (b, n)
        Shear rates at the bob [1/s] from which to start.

    Returns
    -------
    tuple of array
        NaN where Newton's method did not settle. The rate is that before the last step.
    """
    position, weight = _rule(_WIDE_NODES if np.max(log_ratio) > _WIDE_GAP else _NODES)
    wanted = np.log(speed)
    at = np.broadcast_to(np.log(start), (curves.rows, speed.size))
    width = np.where(np.isfinite(log_ratio), log_ratio, 0.0)
    fall = np.exp(-2.0 * log_ratio)
    # d ln(cup rate) below the bob's, from which the next pass starts; none before the first.
    drop: FloatArray | None = None
    for last in range(_PASSES):
        rate = np.exp(at)
        stress = curves.stress(rate)
        slope = curves.log_slope(rate)
        if drop is None:
            drop = np.maximum(-2.0 * log_ratio / np.maximum(slope, 0.01), _DEEPEST)
        drop = curves.rate_below(stress * fall, at, drop, _DEEPEST, _CLOSE)
        cup = np.where(drop > _DEEPEST, rate * np.exp(drop), 0.0)
        span = rate - cup
        inside = cup[..., np.newaxis] + span[..., np.newaxis] * position
        bent = curves.log_slope(inside) * position / inside
        found = cup * width + 0.5 * span**2 * (bent @ weight)
        rise = 0.5 * span * slope / found
        gap = wanted - np.log(found)
        if not np.any(np.abs(gap) > _NEAR) or last == _PASSES - 1:
            break
        at = at + np.clip(gap / rise, -_LARGEST_STEP, _LARGEST_STEP)
    means = (curves.slopes(inside) / curves.stress(inside)) @ weight
    # From the rate where Newton's method stands to the speed asked for, along the flow curve.
    onward = np.where(np.abs(gap) <= _NEAR, np.exp(gap * slope / rise), np.nan)
    return stress * onward, np.moveaxis(means * (stress * onward), 0, 1), rate
