"""The least-squares core for any residual function, with standard errors."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import FitError
from rheo.fitting.coordinates import Coordinates
from rheo.fitting.core import IntArray, minimise

FloatArray = NDArray[np.float64]
Residuals = Callable[[FloatArray], ArrayLike]

_STEPS = 2000


@dataclass(frozen=True, eq=False)
class Solution:
    """A least-squares solution.

    Parameters
    ----------
    parameters : array, shape (p,)
        Values at the minimum.
    standard_errors : array, shape (p,)
        Roots of the diagonal of the covariance; NaN without readings to spare.
    covariance : array, shape (p, p)
        s²(JᵀJ)⁻¹ with s² the sum of squares over n - p.
    sum_of_squares : float
        Of the residuals.
    """

    parameters: FloatArray
    standard_errors: FloatArray
    covariance: FloatArray
    sum_of_squares: float


def least_squares(
    residuals: Residuals,
    start: ArrayLike,
    lower: ArrayLike | None = None,
    upper: ArrayLike | None = None,
) -> Solution:
    """Minimise the sum of squares of any residual function from one start.

    Parameters
    ----------
    residuals : callable
        ``residuals(parameters)`` for parameters of shape (p, b, 1) returns shape (b, n): each
        parameter has a trailing axis, so that a formula written for scalars broadcasts.
    start : array_like, shape (p,)
        Starting parameters.
    lower, upper : array_like, shape (p,), optional
        Bounds; none when absent.

    Returns
    -------
    Solution

    Raises
    ------
    FitError
        If the residuals at the start are not finite numbers.
    """
    first = np.asarray(start, dtype=float)
    none = np.full(first.size, np.inf)
    coordinates = Coordinates.plain(
        -none if lower is None else np.asarray(lower, float),
        none if upper is None else np.asarray(upper, float),
    )

    def evaluate(parameters: FloatArray, rows: IntArray) -> tuple[FloatArray, FloatArray]:  # noqa: ARG001
        value = np.asarray(residuals(parameters.T[..., np.newaxis]), dtype=float)
        return value, central_differences(residuals, parameters)

    found = minimise(evaluate, first[np.newaxis], coordinates, steps=_STEPS)
    if not np.isfinite(found.sum_of_squares[0]):
        raise FitError("the residuals at the start are not finite numbers", "least_squares")
    values, total = found.parameters[0], float(found.sum_of_squares[0])
    slopes = central_differences(residuals, found.parameters)[0]
    covariance = _covariance(slopes, total)
    return Solution(values, np.sqrt(np.diag(covariance)), covariance, total)


def _covariance(slopes: FloatArray, total: float) -> FloatArray:
    count, readings = slopes.shape
    if readings <= count:
        return np.full((count, count), np.nan)
    scale = np.linalg.norm(slopes, axis=-1)
    _, singular, directions = np.linalg.svd((slopes / scale[:, np.newaxis]).T, full_matrices=False)
    inverse = (directions.T / singular**2) @ directions
    return total / (readings - count) * inverse / np.outer(scale, scale)


def central_differences(function: Residuals, parameters: FloatArray) -> FloatArray:
    """Return d function/d parameter by central differences of fourth order.

    Parameters
    ----------
    function : callable
        As `residuals` in `least_squares`; called once, with all shifted parameters.
    parameters : array, shape (b, p)
        Where the derivatives are taken.

    Returns
    -------
    array, shape (b, p, n)
    """
    rows, count = parameters.shape
    step = 1e-3 * np.where(parameters == 0.0, 1.0, np.abs(parameters))
    shifts = np.array([-2.0, -1.0, 1.0, 2.0])[:, np.newaxis, np.newaxis]
    along = np.eye(count)[:, np.newaxis, np.newaxis, :]
    # Axes: parameter that is shifted, shift, row, parameter.
    moved = parameters + along * (shifts * step)
    flat = moved.reshape(-1, count)
    values = np.asarray(function(flat.T[..., np.newaxis]), dtype=float)
    values = values.reshape(count, 4, rows, -1)
    slopes = (8.0 * (values[:, 2] - values[:, 1]) - (values[:, 3] - values[:, 0])) / 12.0
    found: FloatArray = np.moveaxis(slopes / step.T[..., np.newaxis], 0, 1)
    return found
