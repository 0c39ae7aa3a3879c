"""The smooth curve through logarithms, against textbook least squares worked out beside it."""

from __future__ import annotations

import numpy as np
import pytest
from plain_words import odd_words

from rheo import InputError
from rheo.geometry.smoothing import polynomial_residual, smooth_log


def _noisy(seed: int, count: int, bend: float, scatter: float) -> tuple[np.ndarray, np.ndarray]:
    rng = np.random.default_rng(seed)
    x = np.sort(rng.uniform(-1.0, 4.0, count))
    return x, 0.3 + 0.6 * x + bend * (x - 1.5) ** 2 + rng.normal(0.0, scatter, count)


def _textbook(x: np.ndarray, y: np.ndarray, degree: int) -> tuple[np.ndarray, np.ndarray, float]:
    """Return monomial coefficients about x = 1.5, their covariance, and the scatter."""
    columns = np.stack([(x - 1.5) ** power for power in range(degree + 1)], axis=-1)
    normal = columns.T @ columns
    coefficients = np.linalg.solve(normal, columns.T @ y)
    residual = y - columns @ coefficients
    variance = residual @ residual / (x.size - degree - 1)
    return coefficients, variance * np.linalg.inv(normal), float(np.sqrt(variance))


@pytest.mark.parametrize(("degree", "bend"), [(1, 0.0), (2, 0.05)])
@pytest.mark.parametrize("count", [6, 9, 25])
def test_slope_its_error_and_the_scatter(degree: int, bend: float, count: int) -> None:
    """The error of a slope g'c is √(g'Cg) with C = s²(X'X)⁻¹ and s² = RSS/(n - p)."""
    x, y = _noisy(3, count, bend, 0.001)
    curve = smooth_log(x, y, largest_degree=degree)
    assert curve.degree == degree
    coefficients, covariance, scatter = _textbook(x, y, degree)
    powers = np.arange(degree + 1)
    at = np.linspace(x[0], x[-1], 7)
    change = powers * (at[:, None] - 1.5) ** np.maximum(powers - 1, 0)
    np.testing.assert_allclose(curve.slope(at), change @ coefficients, rtol=1e-10)
    error = np.sqrt(np.einsum("ai,ij,aj->a", change, covariance, change))
    np.testing.assert_allclose(curve.slope_error(at), error, rtol=1e-9)
    assert curve.scatter == pytest.approx(scatter, rel=1e-9)


def _chosen_by_hand(x: np.ndarray, y: np.ndarray, largest: int) -> int:
    """Return the degree by n ln(RSS/n) + 2k + 2k(k + 1)/(n - k - 1), k with the variance in it.

    Degrees are taken in turn; one replaces the best so far where it is better by 2.
    """
    best, score = 0, np.inf
    dense = np.linspace(x.min(), x.max(), 4001)
    for degree in range(1, largest + 1):
        fitted = np.polynomial.Polynomial.fit(x, y, degree)
        if np.min(fitted.deriv()(dense)) <= 0:
            continue
        k = degree + 2
        mean_square = np.mean((y - fitted(x)) ** 2)
        here = x.size * np.log(mean_square) + 2 * k + 2 * k * (k + 1) / (x.size - k - 1)
        if here < score - 2.0:
            best, score = degree, here
    return best


@pytest.mark.parametrize("count", [5, 6, 7, 8, 10, 14])
def test_the_degree_is_the_one_of_the_corrected_criterion(count: int) -> None:
    largest = min(9, count - 4)
    met = set()
    for seed in range(120):
        x, y = _noisy(seed, count, 0.002 * (seed % 20), 0.02)
        degree = _chosen_by_hand(x, y, largest)
        if degree:
            assert smooth_log(x, y).degree == degree
            met.add(degree)
    assert len(met) >= min(2, largest)


@pytest.mark.parametrize("count", [3, 4])
def test_few_settings_bear_a_straight_line_only(count: int) -> None:
    x = np.arange(float(count))
    curve = smooth_log(x, x + 0.1 * x**2)
    assert curve.degree == 1
    slope = np.polynomial.Polynomial.fit(x, x + 0.1 * x**2, 1).deriv()(0.0)
    assert float(curve.slope(1.0)) == pytest.approx(float(slope), rel=1e-12)


def test_repeats_are_no_new_settings() -> None:
    x = np.repeat(np.arange(4.0), 5)
    assert smooth_log(x, x + 0.1 * x**2).degree == 1
    x = np.repeat(np.arange(2.0), 5)
    with pytest.raises(InputError, match="there are 2 different settings; a local slope needs 3"):
        smooth_log(x, x)


def test_it_rises_throughout_the_data() -> None:
    """A parabola through these points would fall first; what is taken may not."""
    x = np.linspace(0.0, 3.0, 12)
    for turn in (0.3, 0.8, 1.2):
        curve = smooth_log(x, (x - turn) ** 2)
        assert np.all(curve.slope(np.linspace(0.0, 3.0, 1001)) > 0)
    with pytest.raises(InputError, match="the readings do not rise with the setting") as caught:
        smooth_log(x, (x - 2.5) ** 2)
    assert odd_words(str(caught.value)) == []


@pytest.mark.parametrize("level", [4.0, 0.1, -7.3])
def test_level_readings_do_not_rise(level: float) -> None:
    """Also where rounding makes it look as if they did."""
    for count in (3, 4, 8, 12):
        with pytest.raises(InputError, match="the readings do not rise with the setting"):
            smooth_log(np.linspace(0.0, 3.0, count), np.full(count, level))


def test_the_inverse_of_a_winding_curve() -> None:
    x = np.linspace(-3.0, 3.0, 60)
    curve = smooth_log(x, x + 0.8 * np.sin(x))
    assert curve.degree >= 5
    at = np.linspace(-9.0, 9.0, 301)
    np.testing.assert_allclose(curve.inverse(curve.value(at)), at, atol=1e-9)


def test_curvature_is_the_change_of_slope() -> None:
    x = np.linspace(-3.0, 3.0, 60)
    curve = smooth_log(x, x + 0.8 * np.sin(x))
    at, step = np.linspace(-2.9, 2.9, 30), 1e-5
    change = (curve.slope(at + step) - curve.slope(at - step)) / (2 * step)
    np.testing.assert_allclose(curve.curvature(at), change, atol=1e-7)
    np.testing.assert_array_equal(curve.curvature([-4.0, 4.0]), 0.0)


def test_residual_is_what_a_polynomial_leaves() -> None:
    x, y = _noisy(8, 20, 0.1, 0.3)
    for degree in (1, 2, 4):
        fitted = np.polynomial.Polynomial.fit(x, y, degree)
        np.testing.assert_allclose(polynomial_residual(x, y, degree), y - fitted(x), atol=1e-12)
