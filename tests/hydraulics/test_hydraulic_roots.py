"""The bracketing root finder against relations with known roots."""

import numpy as np
import pytest

from rheo.hydraulics.roots import solve_rising


def test_roots_of_different_elements():
    target = np.array([1e-30, 0.3, 1.0, 7.0, 1e30])
    found = solve_rising(
        lambda x, index: x**3 - target[index], np.full(5, 0.7), low=-1e12, high=1e12
    )
    np.testing.assert_allclose(found[1:], np.cbrt(target[1:]), rtol=1e-14)
    # A triple root at 0 is flat: the gap itself is 1e-30.
    assert abs(found[0]) <= 1.1e-10


@pytest.mark.parametrize("start", [-200.0, -3.0, 0.0, 41.0, 200.0])
def test_any_start_leads_to_the_root(start):
    gap = lambda x, index: np.arctan(x - 5.0) + 0.01 * (x - 5.0)  # noqa: E731, ARG005
    assert solve_rising(gap, np.array([start]))[0] == pytest.approx(5.0, rel=1e-14)


def test_a_start_on_the_root_is_kept():
    assert solve_rising(lambda x, index: x - 2.0, np.array([2.0]))[0] == 2.0  # noqa: ARG005


def test_a_step_is_found_where_it_is():
    found = solve_rising(lambda x, index: np.where(x < 1.25, -1.0, 2.0), np.zeros(1))  # noqa: ARG005
    assert found[0] == pytest.approx(1.25, abs=1e-13)


def test_no_root_is_said_by_infinity():
    found = solve_rising(lambda x, index: np.where(index == 0, 1.0, -1.0) + 0 * x, np.zeros(2))
    assert found[0] == -np.inf
    assert found[1] == np.inf


def test_the_search_steps_back_from_what_cannot_be_worked_out():
    def gap(x, index):  # noqa: ARG001
        return np.where(x > 8.0, np.nan, x - 7.9)

    assert solve_rising(gap, np.array([0.0]))[0] == pytest.approx(7.9, rel=1e-14)
    assert np.isnan(solve_rising(lambda x, index: np.nan * x, np.zeros(1))[0])  # noqa: ARG005


def test_few_calls_are_needed():
    calls = []

    def gap(x, index):
        calls.append(index.size)
        return np.exp(0.4 * x) - 1.7

    solve_rising(gap, np.linspace(-3.0, 3.0, 50))
    assert len(calls) <= 22
    assert sum(calls) <= 50 * 14
