"""Runs test and ranking, against enumeration and the published formulas."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from rheo.fitting.ranking import aicc, akaike_weights, order, winner
from rheo.fitting.runs import run_probabilities, runs_test


@pytest.mark.parametrize(("above", "below"), [(1, 1), (1, 5), (3, 4), (5, 5), (2, 7)])
def test_run_probabilities_against_every_order(above, below):
    """Wald & Wolfowitz's distribution is that of all orders of the signs."""
    total = above + below
    counts = np.zeros(total + 1)
    for places in itertools.combinations(range(total), above):
        signs = np.isin(np.arange(total), places)
        counts[1 + np.count_nonzero(np.diff(signs))] += 1
    np.testing.assert_allclose(run_probabilities(above, below), counts / counts.sum(), atol=1e-14)


@given(st.integers(1, 200), st.integers(1, 200))
@settings(deadline=None, max_examples=40, derandomize=True)
def test_run_probabilities_add_up_and_have_their_published_mean(above, below):
    """Mean 1 + 2ab/(a + b): A. Wald & J. Wolfowitz (1940)."""
    chances = run_probabilities(above, below)
    assert chances.sum() == pytest.approx(1.0, rel=1e-10)
    mean = chances @ np.arange(chances.size)
    assert mean == pytest.approx(1.0 + 2.0 * above * below / (above + below), rel=1e-9)


def test_an_arc_of_residuals_is_systematic_and_alternation_is_not():
    assert runs_test([-1, -2, -1, -1, 1, 2, 3, 2, 1, -1, -2, -1, -3]) == (
        3,
        pytest.approx(13 / 1287),
    )
    assert runs_test([1, -1] * 6)[1] == 1.0


def test_signs_that_say_nothing():
    assert runs_test([0.0, 0.0]) == (0, 1.0)
    assert runs_test([1.0, 2.0, 0.0]) == (1, 1.0)


def test_aicc_by_hand():
    """n = 10, S = 2, p = 2: 10 ln 0.2 + 6 + 24/6."""
    assert aicc(2.0, 10, 2) == pytest.approx(10 * math.log(0.2) + 6 + 4)
    assert aicc([2.0, 2.0], 5, [1, 3]).tolist() == [
        pytest.approx(5 * math.log(0.4) + 4 + 6),
        np.inf,
    ]


def test_akaike_weights_by_hand():
    """exp(-Δ/2): models 0, 2 and 10 units above the lowest."""
    weights = akaike_weights([-50.0, -48.0, -40.0])
    raw = np.array([1.0, math.exp(-1.0), math.exp(-5.0)])
    np.testing.assert_allclose(weights, raw / raw.sum())
    np.testing.assert_allclose(akaike_weights([np.inf, np.inf]), [0.5, 0.5])


@pytest.mark.parametrize(
    ("criteria", "sizes", "expected"),
    [
        ([-10.0, -11.9], [2, 3], 0),
        ([-10.0, -12.1], [2, 3], 1),
        ([-10.0, -11.0], [3, 3], 1),
        ([-10.0, -11.0, -11.5], [1, 2, 5], 0),
    ],
)
def test_within_two_units_the_simpler_model_wins(criteria, sizes, expected):
    assert winner(criteria, sizes) == expected
    assert order(criteria, sizes)[0] == expected
    rest = order(criteria, sizes)[1:]
    assert [criteria[i] for i in rest] == sorted(criteria[i] for i in rest)
