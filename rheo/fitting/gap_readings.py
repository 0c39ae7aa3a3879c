"""Torque in a gap of any width with its derivatives, quick enough for a search.

At a given torque the speed is ω = ½∫γ̇ d(ln τ) or, by parts, γ̇_o ln(R_o/R_i) + ½∫ln(τ_i/τ) dγ̇ from
the rate at the cup γ̇_o to that at the bob γ̇_i. A change of the flow curve changes the bob stress at
a given speed by

    dτ_i = τ_i/(γ̇_i - γ̇_o) ∫(dτ/τ) dγ̇,

a mean of the change over the rates in the gap. One rule of Gauss and Legendre serves both
integrals. The rate at the bob is found by Newton's method from rates known beforehand, and the
last step is taken in the result.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.nodes import crowded_rule
from rheo.fitting.several import SeveralCurves

FloatArray = NDArray[np.float64]

# Nodes that keep 1e-8, and those that keep 1e-6, for gaps up to so much of ln(R_o/R_i).
_NARROW, _COMMON, _WIDE = (14, 10), (24, 14), (72, 72)
_NARROW_GAP, _WIDE_GAP = 0.1, 1.2
_PASSES = 12
# The last step is exact to the square of this: a rough one for the way to a minimum.
_NEAR, _ROUGH = 1e-4, 1e-3
_LARGEST_STEP = 3.0
# Deeper in ln(rate) nothing is left of the flow.
_DEEPEST = -40.0
# The error of the cup's rate enters the speed in second order only.
_CLOSE = 1e-5


@dataclass(frozen=True, eq=False)
class GapRates:
    """Where a solution stands, and the next may start.

    Parameters
    ----------
    bob : array, shape (b, n)
        Shear rate at the bob [1/s].
    drop : array, shape (b, n), optional
        ln of the shear rate at the cup over that at the bob [-].
    rough : bool
        Whether stresses need to be right to 1e-6 only, instead of 1e-8.
    """

    bob: FloatArray
    drop: FloatArray | None = None
    rough: bool = False


def bob_stress(
    curves: SeveralCurves, speed: FloatArray, log_ratio: FloatArray, start: GapRates
) -> tuple[FloatArray, FloatArray, GapRates]:
    """Return stress (b, n) at the bob, its derivatives (b, p, n) and the rates.

    Parameters
    ----------
    curves : SeveralCurves
        Of b rows.
    speed, log_ratio : array, shape (n,)
        Angular speed [rad/s], ln(outer over inner radius).
    start : GapRates
        From which to start.

    Returns
    -------
    tuple
        Stress [Pa] and derivatives, NaN where Newton's method did not settle; and the rates
        before the last step.
    """
    widest = np.max(log_ratio)
    nodes = _WIDE if widest > _WIDE_GAP else _COMMON if widest > _NARROW_GAP else _NARROW
    position, weight = crowded_rule(nodes[start.rough])
    wanted = np.log(speed)
    at = np.log(start.bob)
    width = np.where(np.isfinite(log_ratio), log_ratio, 0.0)
    fall = np.exp(-2.0 * log_ratio)
    near = _ROUGH if start.rough else _NEAR
    drop = start.drop
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
        total = curves.stress(inside)
        found = cup * width + 0.5 * span * (np.log(stress[..., np.newaxis] / total) @ weight)
        rise = 0.5 * span * slope / found
        gap = wanted - np.log(found)
        if not np.any(np.abs(gap) > near) or last == _PASSES - 1:
            break
        at = at + np.clip(gap / rise, -_LARGEST_STEP, _LARGEST_STEP)
    means = (curves.slopes(inside) / total) @ weight
    # From the rate where Newton's method stands to the speed asked for, along the flow curve.
    onward = np.where(np.abs(gap) <= near, np.exp(gap * slope / rise), np.nan)
    return (
        stress * onward,
        np.moveaxis(means * (stress * onward), 0, 1),
        GapRates(rate, drop, start.rough),
    )
