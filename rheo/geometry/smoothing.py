"""A smooth curve through ln(reading) against ln(setting), for its local slope."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError

FloatArray = NDArray[np.float64]

LEAST_POINTS = 3
LARGEST_DEGREE = 9
# Scatter below this in a logarithm is rounding, not doubt: it must not buy a higher degree.
_ROUNDING = 1e-11


@dataclass(frozen=True, eq=False)
class SmoothLog:
    """A rising polynomial y = P(x) of logarithms, continued by its end tangents.

    Parameters
    ----------
    low, high : float
        The range of x in the data.
    coefficients : array
        Chebyshev coefficients over that range.
    covariance : array
        Of the coefficients.
    scatter : float
        Residual standard deviation of y [-].
    """

    low: float
    high: float
    coefficients: FloatArray
    covariance: FloatArray
    scatter: float

    @property
    def degree(self) -> int:
        """Degree of the polynomial."""
        return self.coefficients.size - 1

    def _inside(self, x: ArrayLike) -> FloatArray:
        return np.clip(np.asarray(x, dtype=float), self.low, self.high)

    def _derivative(self, x: ArrayLike, order: int, coefficients: FloatArray) -> FloatArray:
        width = self.high - self.low
        scaled = (2.0 * self._inside(x) - self.low - self.high) / width
        inner = chebyshev.chebder(coefficients, order) * (2.0 / width) ** order
        return np.asarray(chebyshev.chebval(scaled, inner), dtype=float)

    def value(self, x: ArrayLike) -> FloatArray:
        """Return y at x."""
        inside = self._inside(x)
        return self._derivative(x, 0, self.coefficients) + self.slope(x) * (
            np.asarray(x, dtype=float) - inside
        )

    def slope(self, x: ArrayLike) -> FloatArray:
        """Return dy/dx at x [-]."""
        return self._derivative(x, 1, self.coefficients)

    def curvature(self, x: ArrayLike) -> FloatArray:
        """Return d²y/dx² at x [-], 0 outside the data."""
        outside = self._inside(x) != np.asarray(x, dtype=float)
        return np.where(outside, 0.0, self._derivative(x, 2, self.coefficients))

    def slope_error(self, x: ArrayLike) -> FloatArray:
        """Return the standard error of dy/dx at x [-]."""
        basis = self._derivative(x, 1, np.eye(self.coefficients.size))
        variance = np.einsum("i...,ij,j...->...", basis, self.covariance, basis)
        return np.sqrt(np.maximum(variance, 0.0))

    def inverse(self, y: ArrayLike) -> FloatArray:
        """Return x at y, outside the data along the end tangents."""
        wanted = np.asarray(y, dtype=float)
        grid = np.linspace(self.low, self.high, 513)
        at = np.interp(wanted, self.value(grid), grid)
        for _ in range(4):
            at = at + (wanted - self.value(at)) / self.slope(at)
        return at


def smooth_log(x: ArrayLike, y: ArrayLike, largest_degree: int = LARGEST_DEGREE) -> SmoothLog:
    """Fit the polynomial that the data can bear, by the corrected Akaike criterion.

    Parameters
    ----------
    x, y : array_like, shape (n,)
        Logarithms of the setting and of the reading, at 3 different settings or more.
    largest_degree : int
        The highest degree that is tried.

    Returns
    -------
    SmoothLog
        The best polynomial that rises throughout the data; a straight line at least.

    Raises
    ------
    InputError
        With too few different settings, or when even the straight line does not rise.
    """
    x, y = np.asarray(x, dtype=float).ravel(), np.asarray(y, dtype=float).ravel()
    different = np.unique(np.round(x, 9)).size
    if different < LEAST_POINTS:
        raise InputError(
            f"there are {different} different settings; a local slope needs {LEAST_POINTS} or more"
        )
    best: SmoothLog | None = None
    best_score = np.inf
    # The criterion needs two points more than it counts parameters, degree + 2.
    for degree in range(1, max(1, min(largest_degree, different - 4)) + 1):
        curve = _fit(x, y, degree)
        grid = np.linspace(curve.low, curve.high, 257)
        # A rise that is rounding is none: the rate found from its slope would be without bound.
        if not np.all(curve.slope(grid) * (curve.high - curve.low) > _ROUNDING):
            continue
        count, free = x.size, degree + 2
        variance = max(float(np.mean((y - curve.value(x)) ** 2)), _ROUNDING**2)
        score = count * np.log(variance) + 2.0 * free
        if count > free + 1:
            score += 2.0 * free * (free + 1) / (count - free - 1)
        # A higher degree must do better by 2, as in the ranking of models.
        if score < best_score - 2.0:
            best, best_score = curve, score
    if best is None:
        raise InputError("the readings do not rise with the setting; a local slope needs that")
    return best


def polynomial_residual(x: FloatArray, y: FloatArray, degree: int) -> FloatArray:
    """Return y less the least-squares polynomial in x of a degree, shape (n,)."""
    _, basis = _basis(x, degree)
    orthogonal, _ = np.linalg.qr(basis)
    return y - orthogonal @ (orthogonal.T @ y)


def _basis(x: FloatArray, degree: int) -> tuple[tuple[float, float], FloatArray]:
    low, high = float(x.min()), float(x.max())
    scaled = (2.0 * x - low - high) / (high - low)
    return (low, high), np.asarray(chebyshev.chebvander(scaled, degree), dtype=float)


def _fit(x: FloatArray, y: FloatArray, degree: int) -> SmoothLog:
    (low, high), basis = _basis(x, degree)
    orthogonal, triangle = np.linalg.qr(basis)
    coefficients = np.linalg.solve(triangle, orthogonal.T @ y)
    residual = y - basis @ coefficients
    freedom = max(x.size - degree - 1, 1)
    variance = float(residual @ residual) / freedom
    inverse = np.linalg.inv(triangle)
    return SmoothLog(low, high, coefficients, variance * (inverse @ inverse.T), variance**0.5)
