"""What must hold of every product in every pipe."""

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from pipe_curves import CURVES, DENSITY, DIAMETER, RELATIVE_ROUGHNESS, VELOCITY

import rheo
from rheo.hydraulics.registry import turbulent_methods

every_model = pytest.mark.parametrize("key", list(CURVES))
moderate = settings(deadline=None, max_examples=25, derandomize=True)
METHODS = st.sampled_from([None, *turbulent_methods()])


def draw_curve(data, key):
    return data.draw(CURVES[key], label="model")


def allowed(method, model):
    assume(method is None or turbulent_methods()[method].applies(model))


def test_the_random_curves_are_all_models():
    assert set(CURVES) == set(rheo.model_records())


@every_model
@moderate
@given(data=st.data(), diameter=DIAMETER, density=DENSITY, rough=RELATIVE_ROUGHNESS, method=METHODS)
def test_the_gradient_rises_with_the_velocity(key, data, diameter, density, rough, method):
    model = draw_curve(data, key)
    allowed(method, model)
    velocity = np.geomspace(1e-4, 15.0, 60)
    flow = rheo.pipe_flow(model, diameter, velocity, density, rough * diameter, method=method)
    gradient = flow.pressure_gradient
    assert np.all(np.isfinite(gradient) & (gradient > 0))
    assert np.all(np.diff(gradient) > 0)
    assert np.all(np.isfinite(flow.wall_rate) & (flow.wall_rate > 0))
    order = np.array([["laminar", "transition", "turbulent"].index(one) for one in flow.regime])
    assert np.all(np.diff(order) >= 0)


@every_model
@moderate
@given(data=st.data(), velocity=VELOCITY, density=DENSITY, method=METHODS)
def test_the_gradient_falls_with_the_diameter(key, data, velocity, density, method):
    model = draw_curve(data, key)
    allowed(method, model)
    diameter = np.geomspace(0.005, 1.0, 60)
    gradient = rheo.pipe_flow(model, diameter, velocity, density, method=method).pressure_gradient
    assert np.all(np.diff(gradient) < 0)


@every_model
@moderate
@given(data=st.data(), diameter=DIAMETER, density=DENSITY, rough=RELATIVE_ROUGHNESS, method=METHODS)
def test_the_curve_has_no_steps(key, data, diameter, density, rough, method):
    """Halving the distance between velocities halves the steps wherever the largest one is."""
    model = draw_curve(data, key)
    allowed(method, model)

    def curve(velocity):
        flow = rheo.pipe_flow(model, diameter, velocity, density, rough * diameter, method=method)
        return np.log(flow.pressure_gradient)

    velocity = np.geomspace(1e-2, 15.0, 50)
    steps = np.diff(curve(velocity))
    place = int(np.argmax(steps))
    fine = np.diff(curve(np.geomspace(velocity[place], velocity[place + 1], 31)))
    assert fine.max() < 0.2 * steps[place]


@every_model
@moderate
@given(
    data=st.data(),
    diameter=DIAMETER,
    velocity=VELOCITY,
    density=DENSITY,
    rough=RELATIVE_ROUGHNESS,
    method=METHODS,
)
def test_velocity_and_diameter_come_back(key, data, diameter, velocity, density, rough, method):
    model = draw_curve(data, key)
    allowed(method, model)
    roughness = rough * diameter
    flow = rheo.pipe_flow(model, diameter, velocity, density, roughness, method=method)
    gradient = flow.pressure_gradient
    found = rheo.velocity_for_gradient(model, diameter, gradient, density, roughness, method=method)
    assert found == pytest.approx(velocity, rel=1e-8)
    volume = velocity * np.pi * diameter**2 / 4
    bore = rheo.diameter_for_gradient(model, volume, gradient, density, roughness, method=method)
    assert bore == pytest.approx(diameter, rel=1e-8)


# How each parameter scales when lengths go as `length`, times as `time` and stresses as `stress`.
STRESSES = {"yield_stress", "half_stress"}
VISCOSITIES = {
    "viscosity",
    "plastic_viscosity",
    "casson_viscosity",
    "zero_shear_viscosity",
    "infinite_shear_viscosity",
}


def in_other_units(model, time, stress):
    values = {name: float(value) for name, value in model.parameters.items()}
    for name in values:
        if name in STRESSES:
            values[name] *= stress
        elif name in VISCOSITIES:
            values[name] *= stress * time
        elif name == "consistency":
            values[name] *= stress * time ** values["flow_index"]
        elif name == "time_constant":
            values[name] *= time
        elif name == "rate_offset":
            values[name] /= time
    return rheo.model(model.key, **values)


@every_model
@moderate
@given(
    data=st.data(),
    diameter=DIAMETER,
    velocity=VELOCITY,
    density=DENSITY,
    rough=RELATIVE_ROUGHNESS,
    scales=st.tuples(*[st.floats(0.2, 5.0)] * 3),
)
def test_the_friction_factor_knows_no_units(key, data, diameter, velocity, density, rough, scales):
    model = draw_curve(data, key)
    length, time, stress = scales
    here = rheo.pipe_flow(model, diameter, velocity, density, rough * diameter)
    there = rheo.pipe_flow(
        in_other_units(model, time, stress),
        diameter * length,
        velocity * length / time,
        density * stress * time**2 / length**2,
        rough * diameter * length,
    )
    for name in ("friction_factor", "reynolds", "local_flow_index", "turbulence"):
        assert getattr(there, name) == pytest.approx(getattr(here, name), rel=1e-9, abs=1e-9), name
    assert there.wall_stress == pytest.approx(here.wall_stress * stress, rel=1e-9)


@every_model
@moderate
@given(data=st.data(), diameter=DIAMETER, velocity=VELOCITY, density=DENSITY)
def test_momentum_and_the_profile(key, data, diameter, velocity, density):
    flow = rheo.pipe_flow(draw_curve(data, key), diameter, velocity, density)
    assert flow.pressure_gradient == pytest.approx(4 * flow.wall_stress / diameter)
    assert flow.friction_factor == pytest.approx(2 * flow.wall_stress / (density * velocity**2))
    assert 1.0 <= flow.velocity_ratio <= 3.0
    # α lies between 1 and the square of u_max/V for any profile.
    assert flow.kinetic_energy_factor * (1 + 1e-12) >= 1.0
    assert flow.kinetic_energy_factor <= flow.velocity_ratio**2
    assert 0.0 <= flow.plug_fraction < 1.0
    if flow.regime == "laminar":
        assert flow.velocity <= flow.critical_velocity
        assert flow.friction_factor == pytest.approx(16.0 / flow.reynolds, rel=1e-12)
    else:
        assert flow.velocity > flow.critical_velocity
    for name in ("wall_stress", "kinetic_energy_factor", "critical_reynolds", "method_spread"):
        assert np.ndim(getattr(flow, name)) == 0


LIMITS = {
    "power law of index 1 is Newtonian": (
        ("power-law", {"consistency": 0.02, "flow_index": 1.0}),
        ("newtonian", {"viscosity": 0.02}),
        "dodge-metzner",
    ),
    "Bingham without yield stress is Newtonian": (
        ("bingham", {"yield_stress": 0.0, "plastic_viscosity": 0.02}),
        ("newtonian", {"viscosity": 0.02}),
        "wilson-thomas",
    ),
    "Herschel-Bulkley without yield stress is a power law": (
        ("herschel-bulkley", {"yield_stress": 0.0, "consistency": 0.3, "flow_index": 0.6}),
        ("power-law", {"consistency": 0.3, "flow_index": 0.6}),
        "wilson-thomas",
    ),
    "Herschel-Bulkley of index 1 is Bingham": (
        ("herschel-bulkley", {"yield_stress": 4.0, "consistency": 0.02, "flow_index": 1.0}),
        ("bingham", {"yield_stress": 4.0, "plastic_viscosity": 0.02}),
        None,
    ),
    "Casson without yield stress is Newtonian": (
        ("casson", {"yield_stress": 0.0, "casson_viscosity": 0.02}),
        ("newtonian", {"viscosity": 0.02}),
        "wilson-thomas",
    ),
    "Robertson-Stiff without offset is a power law": (
        ("robertson-stiff", {"consistency": 0.3, "rate_offset": 0.0, "flow_index": 0.6}),
        ("power-law", {"consistency": 0.3, "flow_index": 0.6}),
        "wilson-thomas",
    ),
    "Sisko without plateau is a power law": (
        (
            "sisko",
            {"infinite_shear_viscosity": 0.0, "consistency": 0.3, "flow_index": 0.6},
        ),
        ("power-law", {"consistency": 0.3, "flow_index": 0.6}),
        None,
    ),
    "Carreau of index 1 is Newtonian": (
        (
            "carreau",
            {
                "zero_shear_viscosity": 0.02,
                "infinite_shear_viscosity": 0.0,
                "time_constant": 3.0,
                "flow_index": 1.0,
            },
        ),
        ("newtonian", {"viscosity": 0.02}),
        "dodge-metzner",
    ),
    "Carreau-Yasuda of exponent 2 is Carreau": (
        (
            "carreau-yasuda",
            {
                "zero_shear_viscosity": 2.0,
                "infinite_shear_viscosity": 0.002,
                "time_constant": 3.0,
                "flow_index": 0.4,
                "yasuda_exponent": 2.0,
            },
        ),
        (
            "carreau",
            {
                "zero_shear_viscosity": 2.0,
                "infinite_shear_viscosity": 0.002,
                "time_constant": 3.0,
                "flow_index": 0.4,
            },
        ),
        None,
    ),
    "Ellis of index 1 is Newtonian of half the viscosity": (
        ("ellis", {"zero_shear_viscosity": 0.04, "half_stress": 3.0, "stress_index": 1.0}),
        ("newtonian", {"viscosity": 0.02}),
        "dodge-metzner",
    ),
    "Cross of index 0 is Newtonian of the mean viscosity": (
        (
            "cross",
            {
                "zero_shear_viscosity": 0.03,
                "infinite_shear_viscosity": 0.01,
                "time_constant": 2.0,
                "rate_index": 0.0,
            },
        ),
        ("newtonian", {"viscosity": 0.02}),
        "dodge-metzner",
    ),
}


@pytest.mark.parametrize("limit", list(LIMITS))
def test_limits_to_simpler_models(limit):
    (key, parameters), (simple_key, simple_parameters), method = LIMITS[limit]
    velocity = np.geomspace(1e-3, 15.0, 50)
    case = {"diameter": 0.1, "velocity": velocity, "density": 1100.0, "roughness": 5e-5}
    flow = rheo.pipe_flow(rheo.model(key, **parameters), **case, method=method)
    simple = rheo.pipe_flow(rheo.model(simple_key, **simple_parameters), **case, method=method)
    assert set(flow.regime) == {"laminar", "transition", "turbulent"}
    for name in ("pressure_gradient", "reynolds", "velocity_ratio", "kinetic_energy_factor"):
        np.testing.assert_allclose(getattr(flow, name), getattr(simple, name), rtol=1e-10)
    np.testing.assert_allclose(flow.critical_velocity, simple.critical_velocity, rtol=1e-10)


def test_draws_broadcast_like_one_by_one():
    rng = np.random.default_rng(3)
    draws = rheo.model(
        "herschel-bulkley",
        yield_stress=rng.uniform(0.0, 30.0, 7),
        consistency=rng.uniform(0.01, 2.0, 7),
        flow_index=rng.uniform(0.3, 1.2, 7),
    )
    velocity = np.array([[0.1], [1.0], [5.0]])
    together = rheo.pipe_flow(draws, 0.08, velocity, 1100.0, 1e-5)
    assert together.wall_stress.shape == (3, 7)
    assert together.regime.shape == together.kinetic_energy_factor.shape == (3, 7)
    for row in range(3):
        for column in range(7):
            one = rheo.pipe_flow(
                draws.map(lambda value, i=column: value[i]), 0.08, velocity[row, 0], 1100.0, 1e-5
            )
            assert one.regime == together.regime[row, column]
            for name in ("wall_stress", "wall_rate", "reynolds", "critical_velocity", "turbulence"):
                assert getattr(one, name) == pytest.approx(
                    getattr(together, name)[row, column], rel=1e-12
                ), name
