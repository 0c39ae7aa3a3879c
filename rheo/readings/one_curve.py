"""Screening of readings from several tubes or gaps: do they lie on one curve?"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, in_percent
from rheo.readings.readings import Readings
from rheo.readings.sweeps import SAME_SOLIDS, SAME_TEMPERATURE, curve_or_none

FloatArray = NDArray[np.float64]

# Mean distance of two curves in the logarithm of the stress, and the share of points on the same
# side, that are more than scatter.
APART, SAME_SIDE = 0.03, 0.8
_LEAST_POINTS = 2

# Nominal curves of one fluid from these are one curve, whatever the fluid, as long as it sticks to
# the wall: the rim or wall stress depends on the nominal rate alone.
_WIDTHS = {"tube": "diameter", "parallel-plate": "gap", "slot": "half_gap"}
_LENGTHS = {"tube": "length", "slot": "length"}


def curves_apart(readings: Readings) -> tuple[Caution, ...]:
    """Flag curves from two gaps or tubes that do not lie on one another."""
    geometry = readings.geometry
    pair = None if geometry is None else curve_or_none(readings)
    if geometry is None or pair is None or geometry.key not in _WIDTHS:
        return ()
    if readings.temperature is not None and np.ptp(readings.temperature) > SAME_TEMPERATURE:
        return ()
    share = readings.solids_fraction
    if share is not None and np.ptp(share) > SAME_SOLIDS * np.max(share):
        return ()
    rate, stress = pair
    count = len(readings)
    width = np.broadcast_to(geometry.dimensions[_WIDTHS[geometry.key]], count)
    length = np.broadcast_to(geometry.dimensions.get(_LENGTHS.get(geometry.key, ""), 1.0), count)
    narrow, wide = width == width.min(), width == width.max()
    cautions: list[Caution] = []
    if width.min() < width.max():
        found = _distance(rate, stress, narrow, wide)
        if found is not None:
            cautions.append(_width_caution(readings, found, narrow | wide))
    # Lengths are compared in one tube, the narrowest that comes in two.
    for size in np.unique(width):
        here = width == size
        short, long = here & (length == length[here].min()), here & (length == length[here].max())
        if length[here].min() == length[here].max():
            continue
        found = _distance(rate, stress, short, long)
        if found is not None:
            cautions.append(
                Caution(
                    "entrance-loss",
                    "At equal shear rate the shortest tube shows "
                    f"{in_percent(abs(np.expm1(found)))} {'more' if found > 0 else 'less'} "
                    "wall stress than the longest one.",
                    "Fit the entrance loss with the model, or use the longest tube.",
                    geometry.record.name,
                    tuple(int(index) for index in np.flatnonzero(short | long)),
                )
            )
        break
    return tuple(cautions)


def _width_caution(readings: Readings, found: float, mask: NDArray[np.bool_]) -> Caution:
    assert readings.geometry is not None
    what = "gap" if readings.geometry.key == "parallel-plate" else "tube"
    more = f"{in_percent(abs(np.expm1(found)))} {'more' if found > 0 else 'less'}"
    sentence = f"At equal shear rate the narrowest {what} shows {more} stress than the widest one"
    if found < 0:
        code, why = "slip", ": the product slips at the wall."
        advice = "Fit the slip with the model, or use roughened walls."
    else:
        code, why = "curves-apart", ", which slip cannot explain."
        advice = "Look for an entrance loss, a wrong dimension, or turbulent flow."
    points = tuple(int(index) for index in np.flatnonzero(mask))
    return Caution(code, sentence + why, advice, readings.geometry.record.name, points)


def _distance(
    rate: FloatArray, stress: FloatArray, first: NDArray[np.bool_], second: NDArray[np.bool_]
) -> float | None:
    """Return the mean of ln(stress of first/stress of second) at equal rates, None if it is 0."""
    if first.sum() < _LEAST_POINTS or second.sum() < _LEAST_POINTS:
        return None
    x, y = np.log(rate), np.log(stress)
    order = np.argsort(x[second], kind="stable")
    known_x, known_y = x[second][order], y[second][order]
    inside = (x[first] >= known_x[0]) & (x[first] <= known_x[-1])
    if not inside.any():
        return None
    other = np.interp(x[first][inside], known_x, known_y)
    gap = y[first][inside] - other
    mean = float(gap.mean())
    same_side = float(np.mean(gap * mean > 0))
    return mean if abs(mean) > APART and same_side >= SAME_SIDE else None
