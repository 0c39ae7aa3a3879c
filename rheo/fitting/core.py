"""Bounded least squares by Levenberg and Marquardt's method, many starts or data sets at once.

K. Levenberg, Q. Appl. Math. 2 (1944) 164; D. W. Marquardt, J. SIAM 11 (1963) 431; damping after
H. B. Nielsen, IMM report 1999-05, Technical University of Denmark. Bounds by an active set: a
parameter that is at its bound and pushed outwards is held for the step.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.fitting.coordinates import Coordinates

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
Evaluate = Callable[[FloatArray, IntArray], tuple[FloatArray, FloatArray]]

_LEAST_DAMPING = 1e-12
_GIVEN_UP = 1e9
_NOTHING_LEFT = 1e-15
# Damping this weak leaves a step along the flattest valley that double precision can tell.
_WEAK = 1e-10


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


def minimise(
    evaluate: Evaluate,
    start: FloatArray,
    coordinates: Coordinates,
    allowed: Callable[[FloatArray], NDArray[np.bool_]] | None = None,
    steps: int = 300,
    damping: float = 1e-3,
    tolerance: float = _NOTHING_LEFT,
) -> Minimum:
    """Minimise sums of squares from many starts at once.

    Parameters
    ----------
    evaluate : callable
        ``evaluate(parameters, rows) -> (residuals, sensitivities)`` of shapes (b, n) and
        (b, p, n) for parameters of shape (b, p); `rows` says which searches they belong to.
    start : array, shape (b, p)
        Starting parameters; those outside the bounds are moved to them.
    coordinates : Coordinates
        Bounds, and the scales in which to search.
    allowed : callable, optional
        Says for parameters of shape (b, p) which rows may be visited.
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
    low, high = coordinates.inner_bounds
    inner = coordinates.inner(np.atleast_2d(start))
    active = np.arange(inner.shape[0])
    taken = 0
    with np.errstate(all="ignore"):
        total, gradient, curvature = _normal(evaluate, coordinates, allowed, inner, active)
        best, left = inner.copy(), total.copy()
        strength = np.full(active.size, damping)
        growth = np.full(active.size, 2.0)
        for taken in range(1, steps + 1):
            step = _step(inner, gradient, curvature, strength, low, high)
            trial = np.minimum(np.maximum(inner + step, low), high)
            moved = trial - inner
            bent = (curvature @ moved[..., np.newaxis])[..., 0]
            promised = -np.sum(moved * (2.0 * gradient + bent), axis=-1)
            new = _normal(evaluate, coordinates, allowed, trial, active)
            fall = total - new[0]
            better = fall > 0
            gain = np.where(better, fall / promised, 0.0)
            settled = (promised >= 0.0) & (promised <= tolerance * total)
            settled &= (strength <= _WEAK) | ~better
            strength = np.where(
                better,
                strength * np.clip(1.0 - (2.0 * gain - 1.0) ** 3, 0.05, 2.0),
                strength * growth,
            )
            strength = np.maximum(strength, _LEAST_DAMPING)
            growth = np.where(better, 2.0, growth * 2.0)
            inner = np.where(better[:, np.newaxis], trial, inner)
            gradient = np.where(better[:, np.newaxis], new[1], gradient)
            curvature = np.where(better[:, np.newaxis, np.newaxis], new[2], curvature)
            total = np.where(better, new[0], total)
            going = ~(settled | (strength > _GIVEN_UP) | (total == 0.0)) & np.isfinite(total)
            if not going.all():
                best[active], left[active] = inner, total
                active, inner, total = active[going], inner[going], total[going]
                gradient, curvature = gradient[going], curvature[going]
                strength, growth = strength[going], growth[going]
                if active.size == 0:
                    break
        best[active], left[active] = inner, total
        converged = np.ones(left.shape, dtype=bool)
        converged[active] = False
        found = coordinates.settled(coordinates.outer(best))
    return Minimum(found, left, converged, taken)


def _normal(
    evaluate: Evaluate,
    coordinates: Coordinates,
    allowed: Callable[[FloatArray], NDArray[np.bool_]] | None,
    inner: FloatArray,
    rows: IntArray,
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return sum of squares (b,), half its gradient (b, p) and Gauss-Newton matrix (b, p, p)."""
    outer = coordinates.outer(inner)
    residual, sensitivity = evaluate(outer, rows)
    scaled = sensitivity * coordinates.slope(inner, outer)[..., np.newaxis]
    total = np.einsum("bn,bn->b", residual, residual)
    if allowed is not None:
        total = np.where(allowed(outer), total, np.inf)
    total = np.where(np.isnan(total), np.inf, total)
    gradient = (scaled @ residual[..., np.newaxis])[..., 0]
    return total, gradient, scaled @ scaled.swapaxes(-1, -2)


def _step(
    inner: FloatArray,
    gradient: FloatArray,
    curvature: FloatArray,
    strength: FloatArray,
    low: FloatArray,
    high: FloatArray,
) -> FloatArray:
    """Return the damped Gauss-Newton step that stays inside the bounds.

    Parameters that are at a bound and pushed outwards are held. One that a step would take beyond
    a bound goes to it, and the others take the step that suits this.
    """
    size = np.einsum("bii->bi", curvature)
    held = ((inner <= low) & (gradient > 0)) | ((inner >= high) & (gradient < 0))
    held |= ~(size > 0) | ~np.isfinite(size)
    scale = 1.0 / np.sqrt(np.where(held, 1.0, size))
    moved = np.zeros_like(inner)
    for _ in range(inner.shape[-1]):
        matrix = curvature * (scale[:, :, np.newaxis] * scale[:, np.newaxis, :])
        free = ~held
        matrix *= free[:, :, np.newaxis] & free[:, np.newaxis, :]
        matrix[~np.isfinite(matrix)] = 0.0
        np.einsum("bii->bi", matrix)[...] = 1.0 + strength[:, np.newaxis]
        wanted = gradient + (curvature @ moved[..., np.newaxis])[..., 0]
        wanted = np.where(free, wanted * scale, 0.0)
        step = np.where(
            free, -np.linalg.solve(matrix, wanted[..., np.newaxis])[..., 0] * scale, moved
        )
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


def least_squares(
    residuals: Callable[[FloatArray], ArrayLike],
    start: ArrayLike,
    lower: ArrayLike | None = None,
    upper: ArrayLike | None = None,
) -> Minimum:
    """Minimise the sum of squares of any residual function from one start.

    Parameters
    ----------
    residuals : callable
        ``residuals(parameters) -> residuals`` of shapes (b, p, 1) and (b, n): the parameters come
        with a trailing axis, so that a formula written for scalars broadcasts.
    start : array_like, shape (p,)
        Starting parameters.
    lower, upper : array_like, shape (p,), optional
        Bounds; none when absent.

    Returns
    -------
    Minimum
        With one row.
    """
    first = np.asarray(start, dtype=float)
    none = np.full(first.size, np.inf)
    coordinates = Coordinates.plain(
        -none if lower is None else np.asarray(lower, float),
        none if upper is None else np.asarray(upper, float),
    )

    def evaluate(parameters: FloatArray, rows: IntArray) -> tuple[FloatArray, FloatArray]:  # noqa: ARG001
        return np.asarray(residuals(parameters[..., np.newaxis])), central_differences(
            residuals, parameters
        )

    return minimise(evaluate, first[np.newaxis], coordinates, steps=2000)


def central_differences(
    function: Callable[[FloatArray], ArrayLike], parameters: FloatArray
) -> FloatArray:
    """Return d function/d parameter by central differences of fourth order.

    Parameters
    ----------
    function : callable
        As `residuals` in `least_squares`; called once, with all shifted parameters.
    parameters : array, shape (b, p)

    Returns
    -------
    array, shape (b, p, n)
    """
    count = parameters.shape[-1]
    step = 1e-3 * np.where(parameters == 0.0, 1.0, np.abs(parameters))
    shifts = np.array([-2.0, -1.0, 1.0, 2.0])
    moved = np.broadcast_to(
        parameters[:, np.newaxis, np.newaxis, :], (parameters.shape[0], count, 4, count)
    ).copy()
    index = np.arange(count)
    moved[:, index, :, index] += (step.T[:, :, np.newaxis]) * shifts
    # What was really added, free of the rounding of the sum.
    real = moved[:, index, :, index] - parameters.T[:, :, np.newaxis]
    values = np.asarray(function(moved.reshape(-1, count)[..., np.newaxis]))
    values = values.reshape(*moved.shape[:3], -1)
    unit = np.moveaxis(real, 0, 1)[..., 2, np.newaxis]
    inner = values[..., 2, :] - values[..., 1, :]
    outer = values[..., 3, :] - values[..., 0, :]
    return (8.0 * inner - outer) / (12.0 * unit)
