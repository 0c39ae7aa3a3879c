"""The bounded least-squares core."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import lsq_linear

from rheo.fitting.coordinates import Coordinates
from rheo.fitting.core import minimise
from rheo.fitting.general import central_differences, least_squares


def linear(matrix, target):
    """Return the function that `minimise` asks for, for residuals A x - b."""

    def evaluate(parameters, rows):
        residual = parameters @ matrix.T - target
        return residual, np.broadcast_to(matrix.T, (rows.size, *matrix.T.shape))

    return evaluate


@given(seed=st.integers(0, 100_000))
@settings(deadline=None, max_examples=60, derandomize=True)
def test_bounded_linear_problems_agree_with_scipy(seed):
    random = np.random.default_rng(seed)
    matrix, target = random.standard_normal((9, 4)), random.standard_normal(9)
    lower, upper = np.sort(random.uniform(-0.5, 0.5, (2, 4)), axis=0)
    start = random.uniform(lower, upper, (5, 4))
    found = minimise(linear(matrix, target), start, Coordinates.plain(lower, upper))
    exact = lsq_linear(matrix, target, (lower, upper), tol=1e-14)
    np.testing.assert_allclose(found.sum_of_squares, 2.0 * exact.cost, rtol=1e-10)
    assert np.all((found.parameters >= lower) & (found.parameters <= upper))


def test_rosenbrock_s_valley_from_many_starts():
    """H. H. Rosenbrock, Computer J. 3 (1960) 175: the minimum is 0 at (1, 1)."""
    starts = np.random.default_rng(1).uniform(-5.0, 5.0, (40, 2))

    def evaluate(parameters, rows):
        x, y = parameters.T
        residual = np.stack([10.0 * (y - x**2), 1.0 - x], axis=-1)
        nothing = np.zeros(rows.size)
        slopes = [[-20.0 * x, nothing - 1.0], [nothing + 10.0, nothing]]
        return residual, np.moveaxis(np.array(slopes), -1, 0)

    free = np.full(2, np.inf)
    found = minimise(evaluate, starts, Coordinates.plain(-free, free))
    assert found.converged.all()
    np.testing.assert_allclose(found.parameters, 1.0, rtol=1e-8)


def test_searches_of_different_size_share_a_stack():
    """A search with fewer parameters is filled up with ones that cannot move."""
    one = Coordinates.plain(np.array([-9.0]), np.array([9.0]))
    two = Coordinates.plain(np.full(2, -9.0), np.full(2, 9.0))
    scales = Coordinates.stacked([one, two], [1, 2])

    def evaluate(parameters, rows):
        residual = parameters - np.array([2.0, 3.0])
        residual[rows < 1, 1] = 0.0
        slopes = np.broadcast_to(np.eye(2), (rows.size, 2, 2)).copy()
        slopes[rows < 1, 1] = 0.0
        return residual, slopes

    found = minimise(evaluate, np.array([[0.0, 0.0], [1.0, 1.0], [5.0, -5.0]]), scales)
    np.testing.assert_allclose(found.parameters, [[2.0, 0.0], [2.0, 3.0], [2.0, 3.0]])


def test_a_place_that_is_forbidden_is_not_visited():
    """The minimum at -1 lies where residuals are infinite; the search stays outside."""

    def evaluate(parameters, rows):
        residual = np.where(parameters < 0.5, np.inf, parameters + 1.0)
        return residual, np.ones((rows.size, 1, 1))

    wide = Coordinates.plain(np.array([-9.0]), np.array([9.0]))
    found = minimise(evaluate, np.array([[4.0]]), wide)
    assert 0.5 <= found.parameters[0, 0] < 0.51


def test_running_out_of_steps_is_said():
    matrix, target = np.eye(2), np.array([1.0, 2.0])
    free = np.full(2, np.inf)
    found = minimise(linear(matrix, target), np.zeros((1, 2)), Coordinates.plain(-free, free), 1)
    assert not found.converged[0]


def test_logarithms_and_roots_lead_back():
    lower, upper = np.array([1e-9, 0.0, 0.0]), np.array([1e9, 1e6, 5.0])
    scales = Coordinates(lower, upper, np.array([True, False, False]), np.array([0, 1, 0], bool))
    values = np.array([[3.0, 4.0, 2.5], [1e-9, 0.0, 0.0], [1e9, 1e6, 5.0]])
    inner = scales.inner(values)
    np.testing.assert_allclose(scales.settled(scales.outer(inner)), values, rtol=1e-14)
    step = 1e-7
    slope = (scales.outer(inner[:1] + step) - scales.outer(inner[:1])) / step
    np.testing.assert_allclose(scales.slope(inner[:1], values[:1]), slope, rtol=1e-6)


# The step is a share of the parameter, so that it must be 0 or of the size of the problem.
_SIZED = st.floats(-2.0, 2.0).map(lambda value: 0.0 if abs(value) < 1e-2 else value)


@given(st.lists(_SIZED, min_size=3, max_size=3))
@settings(deadline=None, max_examples=30, derandomize=True)
def test_central_differences_of_a_smooth_function(values):
    """Against the derivative by hand of exp(a x) + b x^2 + c."""
    x = np.linspace(-1.0, 1.0, 5)
    a = values[0]
    found = central_differences(
        lambda p: np.exp(p[0] * x) + p[1] * x**2 + p[2], np.array([values])
    )[0]
    expected = np.stack([x * np.exp(a * x), x**2, np.ones(5)])
    np.testing.assert_allclose(found, expected, rtol=1e-8, atol=1e-9)


def test_bounds_of_the_general_core_are_kept():
    found = least_squares(lambda p: p[0] - np.array([3.0, 5.0]), [1.0], lower=[0.0], upper=[2.0])
    assert found.parameters[0] == pytest.approx(2.0)
