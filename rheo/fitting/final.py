"""The last word of a fit: lmfit from the global minimum, for parameters and covariance."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.coordinates import Coordinates
from rheo.fitting.core import Minimum, minimise
from rheo.fitting.problem import Problem, bounds, coordinates, is_allowed
from rheo.fitting.residuals import weighted
from rheo.fitting.stack import lowest, padded

FloatArray = NDArray[np.float64]

# A parameter whose whole effect is below this share of every reading is at its bound of 0.
_NO_EFFECT = 1e-9
_SAME = 1e-12
# Steps from every start, and then from the lowest of those that have not ended.
_STEPS, _FEW_STEPS = (40, 300), (15, 15)
_FOLLOWED = 6
_FAR, _NEAR = 1e-3, 1e-6
_ROUNDING = 1e-14
# lmfit starts at the minimum; where it wanders on, along a valley that the readings do not close,
# nothing is to be gained.
_LAST_EVALUATIONS = 50


@dataclass(frozen=True, eq=False)
class Final:
    """Parameters at the minimum.

    Parameters
    ----------
    parameters : array, shape (p,)
        Values, those at a bound exactly there.
    sum_of_squares : float
        Of the weighted residuals [-].
    free : array of bool, shape (p,)
        False for a parameter at its bound, which has no standard error.
    covariance : array, shape (f, f)
        Of the free parameters; NaN where the data cannot tell them apart.
    """

    parameters: FloatArray
    sum_of_squares: float
    free: NDArray[np.bool_]
    covariance: FloatArray


def global_minima(
    problems: Sequence[Problem], starts: Sequence[FloatArray], tolerance: float = 1e-15
) -> list[tuple[FloatArray, float]]:
    """Return parameters (p,) and sum of squares of the best of several searches of each problem.

    Parameters
    ----------
    problems : sequence of Problem
        Of the same readings with the same weights.
    starts : sequence of array, shape (c, p)
        Starting parameters of each.
    tolerance : float
        Relative fall of the sum of squares below which a search ends. Above rounding it says
        that the starts are near the minimum.
    """
    first, last = _FEW_STEPS if tolerance > _ROUNDING else _STEPS
    found = _searched(problems, starts, first, _FAR, tolerance)
    unfinished = [i for i, one in enumerate(found) if not one.converged[_best(one)]]
    if unfinished:
        kept = [found[i].parameters[lowest(found[i].sum_of_squares, _FOLLOWED)] for i in unfinished]
        some = [problems[i] for i in unfinished]
        for i, one in zip(unfinished, _searched(some, kept, last, _NEAR, tolerance), strict=True):
            found[i] = one
    minima = []
    for problem, one in zip(problems, found, strict=True):
        best = _best(one)
        minima.append(_snapped(problem, one.parameters[best], float(one.sum_of_squares[best])))
    return minima


def _best(found: Minimum) -> int:
    return int(np.argmin(found.sum_of_squares))


def _searched(
    problems: Sequence[Problem],
    starts: Sequence[FloatArray],
    steps: int,
    damping: float,
    tolerance: float,
) -> list[Minimum]:
    """Search from all starts of all problems at once; return the minima of each."""
    counts = [len(start) for start in starts]
    scales = Coordinates.stacked([coordinates(problem) for problem in problems], counts)
    evaluate = weighted(problems, counts, rough=tolerance > _ROUNDING)
    found = minimise(evaluate, padded(starts), scales, steps, damping, tolerance)
    edges = np.cumsum([0, *counts])
    return [
        Minimum(
            found.parameters[first:last, : start.shape[-1]],
            found.sum_of_squares[first:last],
            found.converged[first:last],
            found.steps,
        )
        for start, first, last in zip(starts, edges[:-1], edges[1:], strict=True)
    ]


def _snapped(problem: Problem, parameters: FloatArray, total: float) -> tuple[FloatArray, float]:
    """Move parameters without effect to their bound of 0, if the fit is as good there."""
    lower, _ = bounds(problem)
    small = (lower == 0.0) & (parameters != 0.0)
    small[len(problem.record.parameters) :] = False
    if not small.any():
        return parameters, total
    with np.errstate(all="ignore"):
        rate = problem.rough_rates
        values = [np.asarray(value) for value in parameters[: len(problem.record.parameters)]]
        stress = problem.record.stress(rate, *values)
        for index, slope in enumerate(problem.record.jacobian(rate, *values)):
            effect = np.max(np.abs(parameters[index] * slope / stress))
            small[index] &= bool(effect < _NO_EFFECT)
        if not small.any():
            return parameters, total
        moved = np.where(small, 0.0, parameters)
        new = sum_of_squares(problem, moved)
    return (moved, new) if new <= total * (1.0 + _SAME) else (parameters, total)


def sum_of_squares(problem: Problem, parameters: FloatArray) -> float:
    """Return the weighted sum of squares [-] at parameters (p,)."""
    sigma = problem.weighting.sigma(problem.observed)
    residual = (problem.predict(parameters) - problem.observed) / sigma
    return float(residual @ residual)


def finish(problem: Problem, parameters: FloatArray, total: float) -> Final:
    """Fit with lmfit from a minimum, with the analytic Jacobian.

    lmfit's own bounds are not used: they would bend its coordinates and cost digits. A parameter
    that is at a bound is held there, and a result that leaves the bounds is not taken.

    Parameters
    ----------
    problem : Problem
        What is fitted.
    parameters : array, shape (p,)
        The global minimum.
    total : float
        Sum of squares there.

    Returns
    -------
    Final
    """
    import lmfit

    lower, upper = bounds(problem)
    free = (parameters > lower) & (parameters < upper)
    count = int(free.sum())
    if count == 0 or problem.observed.size <= count:
        return Final(parameters, total, free, np.full((count, count), np.nan))
    evaluate = weighted([problem], [1])
    row = np.zeros(1, dtype=np.intp)
    whole = parameters.copy()

    def at(values: lmfit.Parameters) -> FloatArray:
        moved = whole.copy()
        moved[free] = [value.value for value in values.values()]
        return moved[np.newaxis]

    # lmfit asks for the slopes where it has just asked for the residuals.
    @lru_cache(maxsize=1)
    def both(moved: bytes) -> tuple[FloatArray, FloatArray]:
        with np.errstate(all="ignore"):
            residual, slope = evaluate(np.frombuffer(moved)[np.newaxis], row)
        return np.nan_to_num(residual[0], nan=1e150, posinf=1e150), np.nan_to_num(slope[0, free])

    def residuals(values: lmfit.Parameters) -> FloatArray:
        return both(at(values).tobytes())[0]

    def slopes(values: lmfit.Parameters) -> FloatArray:
        return both(at(values).tobytes())[1]

    start = lmfit.Parameters()
    for index, value in enumerate(whole[free]):
        start.add(f"p{index}", value=float(value))
    try:
        result = lmfit.minimize(
            residuals,
            start,
            Dfun=slopes,
            col_deriv=1,
            ftol=1e-15,
            xtol=1e-15,
            gtol=0.0,
            max_nfev=_LAST_EVALUATIONS,
        )
    except ValueError:
        # Readings over tens of decades: lmfit refuses what overflows on its way.
        return Final(parameters, total, free, covariance(problem, parameters, total, free))
    ended = at(result.params)[0]
    inside = bool(np.all((ended >= lower) & (ended <= upper)))
    if (
        inside
        and bool(is_allowed(problem, ended[np.newaxis])[0])
        and result.chisqr <= total
        and result.errorbars
    ):
        return Final(ended, float(result.chisqr), free, np.asarray(result.covar))
    return Final(parameters, total, free, covariance(problem, parameters, total, free))


def covariance(
    problem: Problem, parameters: FloatArray, total: float, free: NDArray[np.bool_]
) -> FloatArray:
    """Return s²(JᵀJ)⁻¹ of the free parameters; NaN where the data cannot tell them apart."""
    with np.errstate(all="ignore"):
        slopes = weighted([problem], [1])(parameters[np.newaxis], np.zeros(1, dtype=np.intp))[1][
            0, free
        ]
    count, readings = slopes.shape
    scale = np.linalg.norm(slopes, axis=-1)
    if readings <= count or not np.all(np.isfinite(scale) & (scale > 0)):
        return np.full((count, count), np.nan)
    _, singular, directions = np.linalg.svd((slopes / scale[:, np.newaxis]).T, full_matrices=False)
    if singular[-1] < readings * np.finfo(float).eps * singular[0]:
        return np.full((count, count), np.nan)
    inverse = (directions.T / singular**2) @ directions
    return total / (readings - count) * inverse / np.outer(scale, scale)
