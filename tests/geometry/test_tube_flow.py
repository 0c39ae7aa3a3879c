"""Laminar tube flow: profile, kinetic energy and the integrals below them."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest
from flow_curves import KEYS, any_model, example, powers_of_ten, precise_stress
from hypothesis import given, settings
from hypothesis import strategies as st

import rheo
from rheo import Model
from rheo.geometry import tube_flow
from rheo.geometry.curve_integrals import (
    cumulative_from_top,
    integrate_below,
    moment_ratio,
    moment_ratio_by_quadrature,
)


@settings(deadline=None, max_examples=80, derandomize=True)
@given(index=st.floats(0.05, 2.0), rate=powers_of_ten(-3, 4))
def test_power_law_closed_forms(index: float, rate: float) -> None:
    model = rheo.model("power-law", consistency=2.0, flow_index=index)
    n, wall = index, np.asarray(rate)
    assert float(tube_flow.nominal_rate(model, wall)) == pytest.approx(
        rate * 4 * n / (3 * n + 1), rel=1e-13
    )
    assert float(tube_flow.velocity_ratio(model, wall)) == pytest.approx(
        (3 * n + 1) / (n + 1), rel=1e-13
    )
    # Kinetic-energy factor of a power law: 3(3n + 1)²/((2n + 1)(5n + 3)).
    assert float(tube_flow.kinetic_energy_factor(model, wall)) == pytest.approx(
        3 * (3 * n + 1) ** 2 / ((2 * n + 1) * (5 * n + 3)), rel=1e-10
    )


@pytest.mark.parametrize("key", KEYS)
@pytest.mark.parametrize("rate", [0.03, 40.0, 5000.0])
def test_profile_carries_the_flow(key: str, rate: float) -> None:
    """2∫(u/V)(r/R)d(r/R) = 1, and 2∫(u/V)³(r/R)d(r/R) is the kinetic-energy factor."""
    model, wall = example(key), np.asarray(rate)
    plug = float(model.yield_stress / model.stress(wall))
    nodes, weights = np.polynomial.legendre.leggauss(400)
    # Panels on both sides of the plug's edge, where the profile has a kink in its curvature.
    radius = np.concatenate([plug * 0.5 * (nodes + 1), plug + (1 - plug) * 0.5 * (nodes + 1)])
    weight = np.concatenate([plug * 0.5 * weights, (1 - plug) * 0.5 * weights])
    velocity = tube_flow.velocity(model, wall, radius)
    assert 2.0 * np.sum(weight * velocity * radius) == pytest.approx(1.0, rel=1e-8)
    assert 2.0 * np.sum(weight * velocity**3 * radius) == pytest.approx(
        float(tube_flow.kinetic_energy_factor(model, wall)), rel=1e-8
    )
    assert float(tube_flow.velocity(model, wall, np.asarray(0.0))) == pytest.approx(
        float(tube_flow.velocity_ratio(model, wall)), rel=1e-12
    )
    assert float(tube_flow.velocity(model, wall, np.asarray(1.0))) == pytest.approx(0.0, abs=1e-12)
    assert np.all(np.diff(velocity[400:]) <= 1e-13)


@settings(deadline=None, max_examples=100, derandomize=True)
@given(model=any_model(), nominal=powers_of_ten(-4, 4))
def test_wall_rate_inverts_nominal_rate(model: Model, nominal: float) -> None:
    wall = tube_flow.wall_rate(model, np.asarray(nominal))
    assert float(tube_flow.nominal_rate(model, wall)) == pytest.approx(nominal, rel=1e-12)
    local = tube_flow.local_flow_index(np.asarray(nominal), wall)
    assert 0 < float(local) < 2.5


@settings(deadline=None, max_examples=60, derandomize=True)
@given(model=any_model(), rate=powers_of_ten(-3, 4))
def test_local_flow_index_is_the_slope(model: Model, rate: float) -> None:
    step = 1e-4
    walls = rate * np.exp(np.array([-step, 0.0, step]))
    nominal = tube_flow.nominal_rate(model, walls)
    slope = np.log(model.stress(walls[2]) / model.stress(walls[0])) / np.log(
        nominal[2] / nominal[0]
    )
    local = tube_flow.local_flow_index(nominal[1], walls[1])
    assert float(local) == pytest.approx(float(slope), rel=1e-6, abs=1e-12)


def test_cumulative_integrals() -> None:
    """∫e^(3y)dy from a node up to 0 is (1 - e^(3y))/3, and ∫(that) e^y dy below 0 is 1/4."""
    weighted_errors = {}

    def integrand(_: Model, node_rate: np.ndarray, level: int) -> np.ndarray:
        above = cumulative_from_top(node_rate**3, level)
        weighted_errors[level] = np.max(np.abs(above - (1 - node_rate**3) / 3) * node_rate)
        return above * node_rate

    total = integrate_below(example("newtonian"), np.asarray(1.0), integrand)
    assert float(total) == pytest.approx(0.25, rel=1e-13)
    assert set(weighted_errors) == {0, 1}
    # The first level is there to be compared with; the second is the one whose values count.
    assert weighted_errors[0] < 1e-9
    assert weighted_errors[1] < 1e-13


SHARP = rheo.model(
    "carreau-yasuda",
    zero_shear_viscosity=10.0,
    infinite_shear_viscosity=0.0,
    time_constant=10.0,
    flow_index=0.1,
    yasuda_exponent=10.0,
)


@pytest.mark.parametrize("rate", [0.05, 0.1, 0.2, 1.0, 30.0])
@pytest.mark.parametrize("k", [0, 1, 2])
def test_a_bend_so_sharp_that_the_finest_panels_are_used(rate: float, k: int) -> None:
    stress = precise_stress(SHARP)
    with mpmath.workdps(25):
        split = sorted({0, rate, *(0.1 * factor for factor in _AROUND if 0.1 * factor < rate)})
        rest = mpmath.quad(lambda at: stress(mpmath.mpf(at)) ** (k + 1), split)
        top = stress(mpmath.mpf(rate)) ** (k + 1) * rate
        expected = float((top - rest) / (top * (k + 1)))
    assert float(moment_ratio(SHARP, np.asarray(rate), k)) == pytest.approx(expected, rel=1e-11)


def test_quadrature_alone_is_as_good_as_the_closed_forms() -> None:
    """Also with a yield stress, and where the slope changes within a decade."""
    for key in ("bingham", "herschel-bulkley", "casson"):
        rates = np.geomspace(1e-4, 1e4, 17)
        for k in (0, 1, 2):
            found = moment_ratio_by_quadrature(example(key), rates, k)
            np.testing.assert_allclose(found, moment_ratio(example(key), rates, k), rtol=1e-12)
    at = np.asarray(0.1)
    exact = float(moment_ratio(SHARP, at, 2))
    assert float(moment_ratio_by_quadrature(SHARP, at, 2)) == exact
    assert abs(float(moment_ratio_by_quadrature(SHARP, at, 2, rough=True)) / exact - 1) > 1e-13


@pytest.mark.parametrize("shape", [(), (2,), (2, 3)])
def test_cumulative_integrals_of_any_shape(shape: tuple[int, ...]) -> None:
    """∫e^(2y)dy from each node up to 0 is (1 - e^(2y))/2, along the last axis."""
    nodes = []

    def integrand(_: Model, node_rate: np.ndarray, level: int) -> np.ndarray:
        nodes.append((level, node_rate[0]))
        return node_rate

    integrate_below(example("newtonian"), np.asarray(1.0), integrand)
    level, rate = nodes[1]
    factor = np.arange(1.0, 1.0 + np.prod(shape, dtype=int)).reshape(shape)[..., np.newaxis]
    above = cumulative_from_top(factor * rate**2, level)
    assert above.shape == (*shape, rate.size)
    np.testing.assert_allclose(above, factor * (1 - rate**2) / 2, atol=1e-12)


# Around the bend at 1/λ, and out to the largest rate.
_AROUND = (0.5, 0.7, 0.8, 0.9, 1.0, 1.1, 1.2, 1.4, 1.8, 2.5, 5.0, 15.0, 50.0, 150.0)
