"""Shear rates at the bob from measured speeds and torques, for any gap and without a model."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.geometry.flow_points import FlowPoints, points, smoothed
from rheo.geometry.gap_flow import power_law_bob_rate
from rheo.geometry.smoothing import SmoothLog

FloatArray = NDArray[np.float64]

# After these terms the rest of the series is small in a wide gap and smooth in a narrow one.
_TERMS = 8


def power_law_form(speed: FloatArray, stress: FloatArray, log_ratio: FloatArray) -> FlowPoints:
    """Return points by the power law that fits the readings locally.

    γ̇_i = 2ω/[n'(1 - (R_i/R_o)^(2/n'))] with n' = d ln M/d ln ω; exact for a power law, and for
    every fluid in a gap without end, where it is 2ω/n' (Krieger & Maron 1952).

    Parameters
    ----------
    speed : array, shape (n,)
        Angular speed [rad/s].
    stress : array, shape (n,)
        Stress at the bob [Pa].
    log_ratio : array
        ln(R_o/R_i) [-], the same for all readings.

    Returns
    -------
    FlowPoints
        Rate and stress at the bob.
    """
    curve, at, ratio = _prepared(speed, stress, log_ratio)
    rate = power_law_bob_rate(speed, ratio, curve.slope(at))
    return points(rate, stress, curve, at)


def exact_form(speed: FloatArray, stress: FloatArray, log_ratio: FloatArray) -> FlowPoints:
    """Return points by the series that inverts the integral across the gap.

    γ̇(τ) = 2Σ_p ω'(κ^(2p) τ), ω' = dω/d ln τ, κ = R_i/R_o. The first terms are summed as they
    stand; the rest by its sum for a local power law and Euler and Maclaurin's term for the change
    of the slope. Below the slowest reading the readings are continued as a power law.

    Parameters and result as for `power_law_form`.

    Notes
    -----
    Series of I. M. Krieger & H. Elrod, J. Appl. Phys. 24 (1953) 134, for the narrow gap, and of
    B. D. Coleman, H. Markovitz & W. Noll, Viscometric Flows of Non-Newtonian Fluids (1966), for
    the wide one.
    """
    curve, at, ratio = _prepared(speed, stress, log_ratio)
    width = 2.0 * ratio
    down = np.log(stress) - width * np.arange(_TERMS + 1)[:, np.newaxis, ...]
    # The smooth curve may miss a point; its speeds are used throughout, for one same fluid.
    log_speed = curve.inverse(down)
    slope = 1.0 / curve.slope(log_speed)
    speeds = np.exp(log_speed)
    bend = -curve.curvature(log_speed[-1]) * slope[-1] ** 3
    rest = speeds[-1] * (-slope[-1] / np.expm1(-slope[-1] * width) + width * bend / 12.0)
    rate = 2.0 * (np.sum(speeds[:-1] * slope[:-1], axis=0) + rest)
    return points(rate, stress, curve, at)


def _prepared(
    speed: FloatArray, stress: FloatArray, log_ratio: FloatArray
) -> tuple[SmoothLog, FloatArray, FloatArray]:
    if np.ptp(log_ratio) > 1e-12 * np.max(log_ratio):
        raise InputError(
            "the readings come from cylinders of different gaps; "
            "only those of one gap can be taken together without a model"
        )
    return smoothed(speed, stress), np.log(speed), np.ravel(log_ratio)[0]
