"""Vectorised bracketing root finder for relations that rise with their unknown."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
IndexArray = NDArray[np.intp]
Gap = Callable[[FloatArray, IndexArray], FloatArray]

# Logarithms of a shear rate, velocity or diameter beyond which nothing physical lies.
LOWEST = -230.0
HIGHEST = 230.0
_TOLERANCE = 4e-15
_STEPS = 120
_SMALLEST_STEP = 1e-4


def solve_rising(
    gap: Gap,
    start: FloatArray,
    step: float = 0.5,
    low: float = LOWEST,
    high: float = HIGHEST,
    tolerance: float | None = None,
) -> FloatArray:
    """Find where `gap` rises through 0, element by element.

    The bracket is widened from `start` in growing steps; inside it Chandrupatla's method (Adv.
    Eng. Softw. 28 (1997) 145) mixes inverse quadratic steps with bisection, so that it cannot
    leave the bracket.

    Parameters
    ----------
    gap : callable
        ``gap(x, index)``: values at `x` for the elements `index`; both 1-D and of one length.
    start : array
        First guess, 1-D.
    step : float
        First width of the search for a bracket.
    low, high : float
        Ends of the search.
    tolerance : float, optional
        Of the root, or of its size where that is above 1; 4e-15 when absent.

    Returns
    -------
    array
        The root to `tolerance`; ``-inf`` where `gap` is above 0 on the whole range, ``inf`` where
        it is below 0, NaN where it cannot be worked out on the way.
    """
    start = np.clip(np.asarray(start, dtype=float), low, high)
    # A search that runs to the end of its range may leave what floating point can hold.
    with np.errstate(over="ignore", under="ignore", invalid="ignore", divide="ignore"):
        below, gap_below, above, gap_above = _bracket(gap, start, step, low, high)
        root = np.where(gap_below > 0, -np.inf, np.where(gap_above < 0, np.inf, 0.0))
        root = np.where(np.isnan(gap_below) | np.isnan(gap_above), np.nan, root)
        inside = np.flatnonzero(root == 0.0)
        root[inside] = _chandrupatla(
            gap,
            inside,
            below[inside],
            gap_below[inside],
            above[inside],
            gap_above[inside],
            _TOLERANCE if tolerance is None else tolerance,
        )
    return root


def _bracket(
    gap: Gap, start: FloatArray, step: float, low: float, high: float
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
    value = gap(start, np.arange(start.size))
    below, gap_below = start.copy(), value.copy()
    above, gap_above = start.copy(), value.copy()
    width = np.full(start.size, step)
    active = np.arange(start.size)
    while True:
        down = gap_below[active] > 0
        searching = np.where(
            down, below[active] > low, (gap_above[active] < 0) & (above[active] < high)
        )
        active = active[searching & (width[active] > _SMALLEST_STEP)]
        if active.size == 0:
            break
        down = gap_below[active] > 0
        here = np.where(down, below[active], above[active])
        stride = np.where(down, -width[active], width[active])
        there = np.clip(here + stride, low, high)
        value = gap(there, active)
        # Where the relation cannot be worked out a shorter step is tried.
        known = ~np.isnan(value)
        width[active] *= np.where(known, 2.0, 0.25)
        lower, upper = active[known & down], active[known & ~down]
        # The point left behind closes the bracket from the other side.
        above[lower], gap_above[lower] = below[lower], gap_below[lower]
        below[upper], gap_below[upper] = above[upper], gap_above[upper]
        below[lower], gap_below[lower] = there[known & down], value[known & down]
        above[upper], gap_above[upper] = there[known & ~down], value[known & ~down]
    stuck = (width <= _SMALLEST_STEP) | np.isnan(gap_below) | np.isnan(gap_above)
    gap_below[stuck] = np.nan
    return below, gap_below, above, gap_above


def _chandrupatla(
    gap: Gap,
    index: IndexArray,
    x1: FloatArray,
    f1: FloatArray,
    x2: FloatArray,
    f2: FloatArray,
    tolerance: float,
) -> FloatArray:
    found = np.where(np.abs(f1) <= np.abs(f2), x1, x2)
    active = np.arange(index.size)
    x3, f3 = x1.copy(), f1.copy()
    fraction = np.full(index.size, 0.5)
    secant = f1 / np.where(f1 == f2, 1.0, f1 - f2)
    fraction = np.where((secant > 0) & (secant < 1), secant, fraction)
    for _ in range(_STEPS):
        best = np.where(np.abs(f1) < np.abs(f2), x1, x2)
        least = np.minimum(np.abs(f1), np.abs(f2))
        found[active] = best
        width = np.abs(x2 - x1)
        limit = tolerance * np.maximum(1.0, np.abs(best))
        going = (least > 0) & (width > 2.0 * limit)
        if not np.all(going):
            active = active[going]
            x1, f1, x2, f2, x3, f3, fraction, width, limit = (
                part[going] for part in (x1, f1, x2, f2, x3, f3, fraction, width, limit)
            )
        if active.size == 0:
            break
        edge = np.minimum(0.5, limit / width)
        at = x1 + np.clip(fraction, edge, 1.0 - edge) * (x2 - x1)
        value = gap(at, index[active])
        same = np.sign(value) == np.sign(f1)
        x3, f3 = np.where(same, x1, x2), np.where(same, f1, f2)
        x2, f2 = np.where(same, x2, x1), np.where(same, f2, f1)
        x1, f1 = at, value
        fraction = _next_fraction(x1, f1, x2, f2, x3, f3)
    return found


def _next_fraction(
    x1: FloatArray,
    f1: FloatArray,
    x2: FloatArray,
    f2: FloatArray,
    x3: FloatArray,
    f3: FloatArray,
) -> FloatArray:
    """Return the inverse quadratic step where it may be trusted, else one half."""
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        xi = (x1 - x2) / (x3 - x2)
        phi = (f1 - f2) / (f3 - f2)
        trusted = (phi**2 < xi) & ((1.0 - phi) ** 2 < 1.0 - xi)
        quadratic = f1 / (f2 - f1) * (f3 / (f2 - f3)) + (x3 - x1) / (x2 - x1) * (
            f1 / (f3 - f1) * (f2 / (f3 - f2))
        )
    return np.where(trusted & np.isfinite(quadratic), quadratic, 0.5)
