"""Velocity and diameter from a gradient, where it gets awkward."""

import numpy as np
import pytest

import rheo
from rheo.hydraulics.regimes import REGIMES, Law, velocity_at_wall
from rheo.hydraulics.registry import criterion, turbulent_method

SLURRY = rheo.model("herschel-bulkley", yield_stress=10.0, consistency=0.3, flow_index=0.6)


def test_nothing_flows_up_to_the_yield_stress():
    at_yield = 4 * 10.0 / 0.1
    gradient = at_yield * np.array([0.0, 0.5, 1.0, 1.0001, 1.5])
    velocity = rheo.velocity_for_gradient(SLURRY, 0.1, gradient, 1200.0)
    np.testing.assert_array_equal(velocity[:3], 0.0)
    assert np.all(np.diff(velocity[2:]) > 0)


def test_all_regimes_come_back_in_one_call():
    velocity = np.geomspace(0.01, 12.0, 300)
    flow = rheo.pipe_flow(SLURRY, 0.1, velocity, 1200.0, 1e-4)
    assert set(flow.regime) == {"laminar", "transition", "turbulent"}
    found = rheo.velocity_for_gradient(SLURRY, 0.1, flow.pressure_gradient, 1200.0, 1e-4)
    np.testing.assert_allclose(found, velocity, rtol=1e-12)


@pytest.mark.parametrize("transition", ["metzner-reed", "slatter"])
@pytest.mark.parametrize("method", ["dodge-metzner", "wilson-thomas", "torrance"])
def test_with_every_criterion_and_method(transition, method):
    velocity = np.geomspace(0.01, 12.0, 60)
    choice = {"transition": transition, "method": method}
    flow = rheo.pipe_flow(SLURRY, 0.1, velocity, 1200.0, **choice)
    found = rheo.velocity_for_gradient(SLURRY, 0.1, flow.pressure_gradient, 1200.0, **choice)
    np.testing.assert_allclose(found, velocity, rtol=1e-10)


def test_darby_melson_comes_back_smooth_and_rough():
    model = rheo.model("bingham", yield_stress=10.0, plastic_viscosity=0.01)
    velocity = np.geomspace(0.01, 12.0, 60)
    for roughness in (0.0, 1e-4):
        flow = rheo.pipe_flow(model, 0.1, velocity, 1200.0, roughness, method="darby-melson")
        found = rheo.velocity_for_gradient(
            model, 0.1, flow.pressure_gradient, 1200.0, roughness, method="darby-melson"
        )
        np.testing.assert_allclose(found, velocity, rtol=1e-10)


def test_diameters_broadcast_over_draws_and_flows():
    rng = np.random.default_rng(5)
    draws = rheo.model(
        "herschel-bulkley",
        yield_stress=rng.uniform(2.0, 20.0, 40),
        consistency=rng.uniform(0.1, 2.0, 40),
        flow_index=rng.uniform(0.4, 1.0, 40),
    )
    flow = np.array([[1e-4], [1e-2]])
    bore = rheo.diameter_for_gradient(draws, flow, 1500.0, 1200.0, 5e-5)
    assert bore.shape == (2, 40)
    velocity = 4 * flow / (np.pi * bore**2)
    gradient = rheo.pipe_flow(draws, bore, velocity, 1200.0, 5e-5).pressure_gradient
    np.testing.assert_allclose(gradient, 1500.0, rtol=1e-11)
    assert np.all(bore[1] > bore[0])


@pytest.mark.parametrize("gradient", [1e-3, 1.0, 1e3, 1e7])
@pytest.mark.parametrize("flow", [1e-8, 1e-3, 10.0])
@pytest.mark.parametrize("roughness", [0.0, 1e-3])
def test_a_diameter_is_always_found(gradient, flow, roughness):
    bore = rheo.diameter_for_gradient(SLURRY, flow, gradient, 1200.0, roughness)
    if bore == 2 * roughness:
        # Even the narrowest pipe that such a wall leaves takes less.
        bore = 2.0001 * roughness
        velocity = 4 * flow / (np.pi * bore**2)
        assert rheo.pipe_flow(SLURRY, bore, velocity, 1200.0).pressure_gradient < gradient
        return
    velocity = 4 * flow / (np.pi * bore**2)
    found = rheo.pipe_flow(SLURRY, bore, velocity, 1200.0, roughness).pressure_gradient
    assert found == pytest.approx(gradient, rel=1e-9)


def test_a_stress_that_no_rate_reaches_flows_without_bound():
    # A Carreau curve of index 0 without a second plateau has a largest stress, η_0/λ.
    model = rheo.model(
        "carreau",
        zero_shear_viscosity=10.0,
        infinite_shear_viscosity=0.0,
        time_constant=1.0,
        flow_index=0.0,
    )
    velocity = rheo.velocity_for_gradient(model, 0.1, np.array([100.0, 4 * 11.0 / 0.1]), 1000.0)
    assert 0 < velocity[0] < np.inf
    assert velocity[1] == np.inf


@pytest.mark.parametrize(
    ("call", "sentence"),
    [
        (
            lambda: rheo.velocity_for_gradient(SLURRY, 0.1, -1.0, 1200.0),
            r"gradient: it is -1 Pa/m; it must be a finite number, 0 or more",
        ),
        (
            lambda: rheo.diameter_for_gradient(SLURRY, 0.0, 100.0, 1200.0),
            r"flow: it is 0 m3/s; it must be a finite number above 0",
        ),
        (
            lambda: rheo.diameter_for_gradient(SLURRY, 1e-3, 0.0, 1200.0),
            r"gradient: it is 0 Pa/m; it must be a finite number above 0",
        ),
    ],
)
def test_impossible_values_are_refused(call, sentence):
    with pytest.raises(rheo.InputError, match=sentence):
        call()


@pytest.mark.parametrize("method", ["dodge-metzner", "wilson-thomas", "torrance"])
def test_the_regime_comes_back_with_the_velocity(method):
    velocity = np.geomspace(0.01, 12.0, 200)
    flow = rheo.pipe_flow(SLURRY, 0.1, velocity, 1200.0, method=method)
    law = Law(criterion("stability", SLURRY), turbulent_method(method, SLURRY))
    found, regime = velocity_at_wall(flow.pipe, flow.wall_stress, law)
    np.testing.assert_allclose(found, velocity, rtol=1e-11)
    assert REGIMES[regime].tolist() == flow.regime.tolist()
    assert set(flow.regime) == {"laminar", "transition", "turbulent"}
    assert regime.dtype == np.intp


def test_results_have_the_shape_of_all_arguments():
    diameter, density = np.array([0.1, 0.2, 0.3]), np.array([[1000.0], [1200.0]])
    for found in (
        rheo.velocity_for_gradient(SLURRY, diameter, 2000.0, density),
        rheo.diameter_for_gradient(SLURRY, 1e-3 * np.ones(3), 2000.0, density),
        rheo.friction_factor(SLURRY, diameter, 1.0, density),
        rheo.friction_factor(SLURRY, diameter, 1.0, density, method="torrance"),
        rheo.critical_velocity(SLURRY, diameter, density),
        rheo.slip_flow(SLURRY, diameter, np.array([[0.1], [0.2]]), 1e-5).wall_stress,
    ):
        assert found.shape == (2, 3)
    assert np.shape(rheo.velocity_for_gradient(SLURRY, 0.1, 2000.0, 1000.0)) == ()
    assert np.shape(rheo.velocity_for_gradient(SLURRY, [0.1], 2000.0, 1000.0)) == (1,)
    assert np.shape(rheo.slip_flow(SLURRY, [0.1], 0.1, 1e-5).wall_stress) == (1,)


def test_a_wall_is_smooth_unless_it_is_said_to_be_rough():
    for flow in (1e-4, 1e-2):
        smooth = rheo.diameter_for_gradient(SLURRY, flow, 2000.0, 1200.0, 0.0)
        assert rheo.diameter_for_gradient(SLURRY, flow, 2000.0, 1200.0) == smooth
    gradient = rheo.velocity_for_gradient(SLURRY, 0.1, 9000.0, 1200.0, 0.0)
    assert rheo.velocity_for_gradient(SLURRY, 0.1, 9000.0, 1200.0) == gradient
