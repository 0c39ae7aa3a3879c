"""Points of a flow curve found from readings without a model, by each geometry's exact inverse."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.geometry.smoothing import SmoothLog, smooth_log

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class FlowPoints:
    """True shear rates and stresses from readings.

    Parameters
    ----------
    rate : array
        Shear rate where the stress is largest [1/s].
    stress : array
        Shear stress there [Pa].
    local_index : array
        The smoothed slope d ln(reading)/d ln(setting) on which the correction rests [-]; 1 for a
        Newtonian fluid, NaN where none was needed.
    local_index_error : array
        Its standard error from the scatter of the points [-].
    degree : int
        Degree of the smoothing polynomial of logarithms; 0 where none was needed.
    """

    rate: FloatArray
    stress: FloatArray
    local_index: FloatArray
    local_index_error: FloatArray
    degree: int


def smoothed(nominal_rate: FloatArray, nominal_stress: FloatArray) -> SmoothLog:
    """Return the smooth ln(stress) against ln(rate) of nominal points.

    Raises
    ------
    InputError
        For points that are not above 0, too few of them, or points that do not rise.
    """
    rate, stress = np.broadcast_arrays(nominal_rate, nominal_stress)
    wrong = ~((rate > 0) & (stress > 0) & np.isfinite(rate) & np.isfinite(stress))
    if np.any(wrong):
        first = int(np.flatnonzero(wrong.ravel())[0])
        raise InputError(
            f"reading {first + 1} gives a nominal shear rate of {rate.ravel()[first]:g} 1/s and a "
            f"stress of {stress.ravel()[first]:g} Pa; both must be above 0 for a local slope"
        )
    return smooth_log(np.log(rate), np.log(stress))


def points(rate: FloatArray, stress: FloatArray, curve: SmoothLog, at: FloatArray) -> FlowPoints:
    """Return flow points with the slope of the smooth curve at ln(nominal rate)."""
    shape = np.broadcast_shapes(rate.shape, stress.shape)
    return FlowPoints(
        rate=np.broadcast_to(rate, shape),
        stress=np.broadcast_to(stress, shape),
        local_index=curve.slope(at),
        local_index_error=curve.slope_error(at),
        degree=curve.degree,
    )


def exact_points(rate: FloatArray, stress: FloatArray) -> FlowPoints:
    """Return flow points of a geometry whose nominal conversion holds for every fluid."""
    shape = np.broadcast_shapes(rate.shape, stress.shape)
    unused = np.full(shape, np.nan)
    return FlowPoints(
        np.broadcast_to(rate, shape), np.broadcast_to(stress, shape), unused, unused, 0
    )
