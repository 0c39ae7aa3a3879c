"""No local minimum: the search against a general optimiser, and exact curves given back."""

from __future__ import annotations

import numpy as np
import pytest
from flow_curves import KEYS, example
from hypothesis import given, settings
from hypothesis import strategies as st
from random_starts import lowest_of_random_starts

import rheo
from rheo.fitting.search import QUICK, line_minima, search

SAUCE = example("herschel-bulkley")
GUM = example("cross")


def noisy(model, low, high, seed, count=24, noise=0.02):
    rate = np.geomspace(low, high, count)
    random = np.random.default_rng(seed)
    return rheo.FlowCurve(rate, model.stress(rate) * (1.0 + noise * random.standard_normal(count)))


@pytest.mark.parametrize("key", KEYS)
@pytest.mark.parametrize("weighting", ["relative", "absolute"])
def test_an_exact_curve_gives_its_parameters_back(key, weighting):
    truth = example(key)
    rate = np.geomspace(1e-3, 1e4, 30)
    fits = rheo.fit(rheo.FlowCurve(rate, truth.stress(rate)), weighting=weighting)
    assert fits.best.key == key
    for name, value in truth.parameters.items():
        assert fits[key].parameters[name].value == pytest.approx(float(value), rel=1e-6)


# The model of the product, and models that do not suit it: these have the local minima.
@pytest.mark.parametrize(
    ("product", "low", "high", "key", "weighting"),
    [
        (SAUCE, 0.1, 500.0, "herschel-bulkley", "relative"),
        (SAUCE, 0.1, 500.0, "carreau-yasuda", "relative"),
        (SAUCE, 0.1, 500.0, "robertson-stiff", "absolute"),
        (SAUCE, 5.0, 1000.0, "sisko", "relative"),
        (GUM, 0.01, 1000.0, "casson", "relative"),
        (GUM, 0.01, 1000.0, "carreau", "absolute"),
    ],
)
def test_no_random_start_does_better(product, low, high, key, weighting):
    curve = noisy(product, low, high, seed=3)
    found = rheo.fit(curve, key, weighting=weighting).best
    sigma = curve.stress if weighting == "relative" else np.ones(len(curve))
    lowest = lowest_of_random_starts(found.record, curve.rate, curve.stress, sigma, count=200)
    assert found.weighted_ss <= lowest * (1.0 + 1e-9)


@given(seed=st.integers(0, 10_000), key=st.sampled_from(KEYS))
@settings(deadline=None, max_examples=15, derandomize=True)
def test_a_wider_model_never_fits_worse_than_one_that_it_contains(seed, key):
    curve = noisy(example(key), 0.05, 500.0, seed)
    fits = rheo.fit(curve)
    for narrow, wide in [
        ("newtonian", "bingham"),
        ("bingham", "herschel-bulkley"),
        ("power-law", "herschel-bulkley"),
        ("power-law", "sisko"),
        ("power-law", "robertson-stiff"),
        ("carreau", "carreau-yasuda"),
    ]:
        assert fits[wide].weighted_ss <= fits[narrow].weighted_ss * (1.0 + 1e-9)


@given(scale=st.floats(-3.0, 3.0), shift=st.floats(-2.0, 2.0))
@settings(deadline=None, max_examples=10, derandomize=True)
def test_units_of_stress_and_time_do_not_matter(scale, shift):
    """A change of units scales parameters and leaves the relative misfit."""
    curve = noisy(SAUCE, 0.1, 300.0, seed=11)
    stress, time = 10.0**scale, 10.0**shift
    keys = ["herschel-bulkley", "casson", "carreau"]
    plain = rheo.fit(curve, keys)
    scaled = rheo.fit(rheo.FlowCurve(curve.rate / time, curve.stress * stress), keys)
    for key in ("herschel-bulkley", "casson"):
        assert scaled[key].weighted_ss == pytest.approx(plain[key].weighted_ss, rel=1e-9)
    moved = scaled["casson"].parameters["yield_stress"].value
    assert moved == pytest.approx(plain["casson"].parameters["yield_stress"].value * stress)


def test_the_order_of_the_points_does_not_matter():
    curve = noisy(GUM, 0.01, 1000.0, seed=5)
    mixed = np.random.default_rng(1).permutation(len(curve))
    one, two = rheo.fit(curve, "cross").best, rheo.fit(curve.select(mixed), "cross").best
    assert two.weighted_ss == pytest.approx(one.weighted_ss, rel=1e-12)
    assert two.runs == one.runs


def test_hundreds_of_points_are_all_fitted():
    """The grid is worked out for some of many points; the minimum is that of all."""
    curve = noisy(SAUCE, 0.1, 500.0, seed=9, count=900)
    found = rheo.fit(curve, "herschel-bulkley").best
    halves = [rheo.fit(curve.select(np.arange(k, 900, 2)), "herschel-bulkley").best for k in (0, 1)]
    at_halves = sum(one.weighted_ss for one in halves)
    assert at_halves < found.weighted_ss < 1.02 * at_halves


def test_a_quick_search_ends_near_the_minimum():
    curve = noisy(SAUCE, 0.1, 500.0, seed=2)
    record = rheo.model_record("herschel-bulkley")
    start = search([record], curve.rate, curve.stress, curve.stress, QUICK)[0][0]
    best = rheo.fit(curve, "herschel-bulkley").best.final.parameters
    np.testing.assert_allclose(start, best, rtol=0.02)


def test_the_lowest_cell_of_every_line_is_a_start():
    cells = np.array([[3.0, 1.0, 5.0], [2.0, 4.0, 0.5]])
    assert line_minima(cells).tolist() == [5, 1, 3]
