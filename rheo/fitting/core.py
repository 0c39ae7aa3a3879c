"""Bounded least squares by Levenberg and Marquardt's method, many searches at once.

K. Levenberg, Q. Appl. Math. 2 (1944) 164; D. W. Marquardt, J. SIAM 11 (1963) 431; damping after
H. B. Nielsen, IMM report 1999-05, Technical University of Denmark. Bounds by an active set: a
parameter that is at its bound and pushed outwards is held for the step.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.coordinates import Coordinates

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
Evaluate = Callable[[FloatArray, IntArray], tuple[FloatArray, FloatArray]]

_LEAST_DAMPING = 1e-12
_GIVEN_UP = 1e9
_NOTHING_LEFT = 1e-15
# Damping this weak leaves a step along the flattest valley that double precision can tell; a
# search that may end earlier may end with stronger damping.
_WEAK = 1e-10
_WEAK_SHARE = 1e-3


@dataclass(frozen=True, eq=False)
class Minimum:
    """Where searches ended.

    Parameters
    ----------
    parameters : array, shape (b, p)
        One row a search.
    sum_of_squares : array, shape (b,)
        Of the weighted residuals [-].
    converged : array of bool, shape (b,)
        False where the number of steps ran out.
    steps : int
        Steps that the longest search took.
    """

    parameters: FloatArray
    sum_of_squares: FloatArray
    converged: NDArray[np.bool_]
    steps: int


@dataclass(eq=False)
class _Searches:
    """The searches that still go on: position, sum of squares, its slopes, damping."""

    rows: IntArray
    inner: FloatArray
    total: FloatArray
    gradient: FloatArray
    curvature: FloatArray
    strength: FloatArray
    growth: FloatArray

    def keep(self, going: NDArray[np.bool_]) -> None:
        for name, value in vars(self).items():
            setattr(self, name, value[going])


def minimise(
    evaluate: Evaluate,
    start: FloatArray,
    coordinates: Coordinates,
    steps: int = 300,
    damping: float = 1e-3,
    tolerance: float = _NOTHING_LEFT,
) -> Minimum:
    """Minimise sums of squares from many starts at once.

    Parameters
    ----------
    evaluate : callable
        ``evaluate(parameters, rows) -> (residuals, sensitivities)`` of shapes (b, n) and
        (b, p, n) for parameters of shape (b, p); `rows`, in rising order, says which searches they
        belong to. A residual that is infinite or NaN marks a place that may not be visited.
    start : array, shape (b, p)
        Starting parameters; those outside the bounds are moved to them.
    coordinates : Coordinates
        Bounds, and the scales in which to search.
    steps : int
        Largest number of steps.
    damping : float
        First damping; small where the starts are near.
    tolerance : float
        A search ends when a step promises a smaller relative fall of the sum of squares.

    Returns
    -------
    Minimum
    """
    taken = 0
    with np.errstate(all="ignore"):
        inner = coordinates.inner(np.atleast_2d(start))
        rows = np.arange(inner.shape[0])
        here = coordinates
        state = _Searches(
            rows,
            inner,
            *_normal(evaluate, here, inner, rows),
            np.full(rows.size, damping),
            np.full(rows.size, 2.0),
        )
        best, left = inner.copy(), state.total.copy()
        while state.rows.size and taken < steps:
            taken += 1
            going = _advance(state, evaluate, here, tolerance)
            if not going.all():
                best[state.rows], left[state.rows] = state.inner, state.total
                state.keep(going)
                here = coordinates.at(state.rows)
        best[state.rows], left[state.rows] = state.inner, state.total
        converged = np.ones(left.shape, dtype=bool)
        converged[state.rows] = False
        found = coordinates.settled(coordinates.outer(best))
    return Minimum(found, left, converged, taken)


def _advance(
    state: _Searches, evaluate: Evaluate, here: Coordinates, tolerance: float
) -> NDArray[np.bool_]:
    """Take one step in place; return which searches go on."""
    low, high = here.inner_bounds
    step = _step(state, low, high)
    trial = np.minimum(np.maximum(state.inner + step, low), high)
    moved = trial - state.inner
    bent = (state.curvature @ moved[..., np.newaxis])[..., 0]
    promised = -np.sum(moved * (2.0 * state.gradient + bent), axis=-1)
    total, gradient, curvature = _normal(evaluate, here, trial, state.rows)
    fall = state.total - total
    better = fall > 0
    gain = np.where(better, fall / promised, 0.0)
    settled = (promised >= 0.0) & (promised <= tolerance * state.total)
    settled &= (state.strength <= max(_WEAK, _WEAK_SHARE * tolerance**0.5)) | ~better
    weaker = np.clip(1.0 - (2.0 * gain - 1.0) ** 3, 0.05, 2.0)
    strength = state.strength * np.where(better, weaker, state.growth)
    state.strength = np.maximum(strength, _LEAST_DAMPING)
    state.growth = np.where(better, 2.0, state.growth * 2.0)
    state.inner = np.where(better[:, np.newaxis], trial, state.inner)
    state.gradient = np.where(better[:, np.newaxis], gradient, state.gradient)
    state.curvature = np.where(better[:, np.newaxis, np.newaxis], curvature, state.curvature)
    state.total = np.where(better, total, state.total)
    ended = settled | (state.strength > _GIVEN_UP) | (state.total == 0.0)
    return ~ended & np.isfinite(state.total)


def _normal(
    evaluate: Evaluate, coordinates: Coordinates, inner: FloatArray, rows: IntArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return sum of squares (b,), half its gradient (b, p) and Gauss-Newton matrix (b, p, p)."""
    outer = coordinates.outer(inner)
    residual, sensitivity = evaluate(outer, rows)
    scaled = sensitivity * coordinates.slope(inner, outer)[..., np.newaxis]
    total = np.einsum("bn,bn->b", residual, residual)
    total = np.where(np.isnan(total), np.inf, total)
    gradient = (scaled @ residual[..., np.newaxis])[..., 0]
    return total, gradient, scaled @ scaled.swapaxes(-1, -2)


def _step(state: _Searches, low: FloatArray, high: FloatArray) -> FloatArray:
    """Return the damped Gauss-Newton step that stays inside the bounds.

    Parameters that are at a bound and pushed outwards are held. One that a step would take beyond
    a bound goes to it, and the others take the step that suits this.
    """
    inner, gradient, curvature = state.inner, state.gradient, state.curvature
    size = np.einsum("bii->bi", curvature)
    held = ((inner <= low) & (gradient >= 0)) | ((inner >= high) & (gradient <= 0))
    held |= ~((size > 0) & np.isfinite(size))
    scale = 1.0 / np.sqrt(np.where(held, 1.0, size))
    scaled = curvature * (scale[:, :, np.newaxis] * scale[:, np.newaxis, :])
    moved = np.zeros_like(inner)
    inside = moved
    for _ in range(inner.shape[-1]):
        free = ~held
        pair = free[:, :, np.newaxis] & free[:, np.newaxis, :]
        matrix = np.where(pair & np.isfinite(scaled), scaled, 0.0)
        np.einsum("bii->bi", matrix)[...] = 1.0 + state.strength[:, np.newaxis]
        wanted = gradient + (curvature @ moved[..., np.newaxis])[..., 0]
        wanted = np.where(free, wanted * scale, 0.0)
        solved = np.linalg.solve(matrix, wanted[..., np.newaxis])[..., 0]
        step: FloatArray = np.where(free, -solved * scale, moved)
        inside = np.minimum(np.maximum(step, low - inner), high - inner)
        beyond = free & (inside != step)
        if not beyond.any():
            return step
        # Of those that would leave, the one that leaves first is held; the others look again.
        share = np.where(beyond, inside / np.where(beyond, step, 1.0), np.inf)
        first = beyond & (share == share.min(axis=-1, keepdims=True))
        moved = np.where(first, inside, moved)
        held |= first
    return inside
