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


def test_the_ends_of_the_search_are_kept():
    """Nothing is asked beyond the ends; a root on an end is one; beyond it there is none."""
    asked = []
    wanted = np.array([-2.0, 3.0, -2.0001, 3.0001])

    def gap(x, index):
        asked.append(x.copy())
        return x - wanted[index]

    for start in (-90.0, -2.0, 0.3, 3.0, 90.0):
        found = solve_rising(gap, np.full(4, start), low=-2.0, high=3.0)
        np.testing.assert_allclose(found, [-2.0, 3.0, -np.inf, np.inf], rtol=1e-14)
    assert min(x.min() for x in asked) >= -2.0
    assert max(x.max() for x in asked) <= 3.0


@pytest.mark.parametrize("step", [1e-3, 0.5, 20.0])
@pytest.mark.parametrize("scale", [1e-200, 1.0, 1e200])
def test_any_step_and_any_scale_lead_to_the_root(step, scale):
    wanted = np.array([-220.0, -1e-3, 0.0, 0.7, 57.0, 229.0])

    def gap(x, index):
        return scale * np.tanh(0.1 * (x - wanted[index]))

    for start in (-150.0, 0.0, 0.7, 200.0):
        found = solve_rising(gap, np.full(6, start), step=step)
        np.testing.assert_allclose(found, wanted, rtol=1e-13, atol=1e-14)


@pytest.mark.parametrize("side", [-1.0, 1.0])
def test_what_cannot_be_worked_out_on_either_side(side):
    """Beyond 8 on one side nothing is known; the root lies just before, or beyond."""

    def gap(x, index):
        edge = np.where(side * x > 8.0, np.nan, x - side * np.array([7.99, 7.0, 9.0])[index])
        return np.where(np.isnan(edge), np.nan, edge)

    found = solve_rising(gap, np.zeros(3))
    np.testing.assert_allclose(found[:2], side * np.array([7.99, 7.0]), rtol=1e-13)
    assert np.isnan(found[2])
    # Where the start itself is unknown nothing can be said, but the others are found.
    found = solve_rising(gap, np.array([0.0, side * 9.0, 0.0]))
    assert found[0] == pytest.approx(side * 7.99, rel=1e-13)
    assert np.isnan(found[1])


def test_elements_do_not_see_each_other():
    """Each root is the one of its own search, whatever the others need."""
    power = np.array([1.0, 3.0, 7.0, 0.2, 1.0, 1.0])
    wanted = np.array([0.5, 2.0, -1.5, 30.0, 500.0, -500.0])

    def relation(power, wanted):
        return lambda x, index: (
            np.sign(x - wanted[index]) * np.abs(x - wanted[index]) ** power[index]
        )

    together = solve_rising(relation(power, wanted), np.linspace(-3.0, 3.0, 6))
    for index in range(6):
        pick = slice(index, index + 1)
        alone = solve_rising(relation(power[pick], wanted[pick]), np.linspace(-3.0, 3.0, 6)[pick])
        assert together[index] == alone[0] or abs(together[index] - alone[0]) < 1e-13
    np.testing.assert_allclose(together[[0, 3]], wanted[[0, 3]], rtol=1e-13)
    assert together[4] == np.inf
    assert together[5] == -np.inf


def test_smooth_relations_take_far_fewer_calls_than_bisection():
    """Halving from a width of 1 to 4e-15 takes 48 calls; these take a quarter of it or less."""
    relations = {
        "straight": lambda x: x - 0.3,
        "exponential": lambda x: np.exp(3.0 * x) - 2.0,
        "logarithmic": lambda x: np.log1p(np.maximum(x, -0.999)) - 0.2,
        "cubic": lambda x: x**3 + x - 1.0,
    }
    for name, relation in relations.items():
        calls = []

        def gap(x, index, relation=relation, calls=calls):  # noqa: ARG001
            calls.append(x.size)
            return relation(x)

        root = solve_rising(gap, np.array([0.0]), step=0.5)
        assert abs(relation(root)[0]) < 1e-14
        assert len(calls) <= 12, name


def test_calls_are_made_only_for_what_is_not_found():
    """An element at its root is not asked again while others search."""
    asked = np.zeros(3)
    wanted = np.array([0.0, 5.3, 190.1])

    def gap(x, index):
        np.add.at(asked, index, 1)
        return np.expm1(0.02 * (x - wanted[index]))

    found = solve_rising(gap, np.zeros(3))
    np.testing.assert_allclose(found, wanted, atol=1e-11)
    assert asked[0] == 1
    assert asked[1] < asked[2] <= 25
