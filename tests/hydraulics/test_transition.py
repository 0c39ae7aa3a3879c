"""Transition criteria."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pipe_curves import CURVES, DENSITY, DIAMETER

import rheo
from rheo.geometry.tube_flow import velocity
from rheo.hydraulics.conditions import lay_out
from rheo.hydraulics.laminar import critical_wall_rate, rate_at_stress
from rheo.hydraulics.registry import criteria
from rheo.hydraulics.transition.stability import stability_number, surely_stable


def test_every_record_is_complete():
    assert set(criteria()) == {"stability", "hanks", "metzner-reed", "slatter"}
    for key, record in criteria().items():
        assert record.key == key
        assert len(record.source) > 20
        assert len(record.validity) > 20


@pytest.mark.parametrize("key", list(CURVES))
@settings(deadline=None, max_examples=15, derandomize=True)
@given(data=st.data(), diameter=DIAMETER, speed=st.floats(0.05, 3.0), density=DENSITY)
def test_the_stability_number_is_the_largest_on_the_profile(key, data, diameter, speed, density):
    """Against Z(r) from the velocity profile and the flow curve, searched on a fine grid."""
    model = data.draw(CURVES[key])
    flow = rheo.pipe_flow(model, diameter, speed, density, regime="laminar")
    rate = np.atleast_1d(flow.wall_rate)
    largest, depth = stability_number(flow.pipe, rate)
    # Places spread evenly over ln(rate) below the wall.
    local = flow.wall_rate * np.exp(-np.linspace(0.0, 3.0 * depth[0], 2001))
    radius = model.stress(local) / flow.wall_stress
    ratio = velocity(model, np.asarray(flow.wall_rate), radius)
    z = 0.5 * diameter * density * speed * ratio * local / flow.wall_stress
    assert largest[0] == pytest.approx(z.max(), rel=3e-6)
    assert largest[0] >= z.max() * (1 - 1e-9)
    if surely_stable(flow.pipe, np.array([speed]), rate)[0]:
        assert largest[0] < 808.0


@pytest.mark.parametrize("key", list(CURVES))
@pytest.mark.parametrize("method", list(criteria()))
@settings(deadline=None, max_examples=8, derandomize=True)
@given(data=st.data(), diameter=DIAMETER, density=DENSITY)
def test_the_regime_changes_at_the_critical_velocity(key, method, data, diameter, density):
    model = data.draw(CURVES[key])
    if not criteria()[method].applies(model):
        with pytest.raises(rheo.InputError, match=f"'{method}' is made for bingham, not for {key}"):
            rheo.critical_velocity(model, diameter, density, method=method)
        return
    critical = rheo.critical_velocity(model, diameter, density, method=method)
    if not 0 < critical < 1e12:
        return
    below, above = (
        rheo.pipe_flow(model, diameter, critical * factor, density, transition=method)
        for factor in (1 - 1e-9, 1 + 1e-9)
    )
    assert below.regime == "laminar"
    assert above.regime == "transition"
    assert above.critical_velocities[method] == pytest.approx(critical, rel=1e-9)


def test_metzner_reed_ends_at_2100():
    model = rheo.model(
        "carreau",
        **{
            "zero_shear_viscosity": 0.1,
            "infinite_shear_viscosity": 0.001,
            "time_constant": 0.5,
            "flow_index": 0.5,
        },
    )
    speed = rheo.critical_velocity(model, 0.05, 1000.0, method="metzner-reed")
    assert rheo.pipe_flow(model, 0.05, speed, 1000.0).reynolds == pytest.approx(2100.0, rel=1e-12)


def test_slatter_by_his_own_definition():
    """Re₃ of a Herschel-Bulkley slurry, written out in the thesis's own steps."""
    yield_stress, consistency, index = 8.0, 0.5, 0.6
    diameter, density = 0.1, 1300.0
    model = rheo.model(
        "herschel-bulkley", yield_stress=yield_stress, consistency=consistency, flow_index=index
    )
    speed = rheo.critical_velocity(model, diameter, density, method="slatter")
    flow = rheo.pipe_flow(model, diameter, speed, density, regime="laminar")
    plug_diameter = diameter * yield_stress / flow.wall_stress
    plug_velocity = flow.velocity_ratio * speed
    plug_flow = plug_velocity * np.pi * plug_diameter**2 / 4
    ring_area = np.pi * (diameter**2 - plug_diameter**2) / 4
    ring_velocity = (speed * np.pi * diameter**2 / 4 - plug_flow) / ring_area
    sheared_diameter = diameter - plug_diameter
    shear = yield_stress + consistency * (8 * ring_velocity / sheared_diameter) ** index
    assert 8 * density * ring_velocity**2 / shear == pytest.approx(2100.0, rel=1e-10)


def test_hanks_without_yield_stress_is_2100():
    model = rheo.model("bingham", yield_stress=0.0, plastic_viscosity=0.01)
    assert rheo.critical_velocity(model, 0.1, 1000.0, method="hanks") == pytest.approx(
        0.21, rel=1e-12
    )


def test_a_fluid_of_index_two_is_stable_or_not_at_every_velocity():
    model = rheo.model("power-law", consistency=np.array([0.5, 1e-4]), flow_index=2.0)
    np.testing.assert_array_equal(rheo.critical_velocity(model, 0.1, 1000.0), [np.inf, 0.0])
    flow = rheo.pipe_flow(model, 0.1, np.array([[0.001], [10.0]]), 1000.0)
    assert flow.regime[:, 0].tolist() == ["laminar", "laminar"]
    assert flow.regime[:, 1].tolist() == ["turbulent", "turbulent"]
    assert np.all(np.isfinite(flow.pressure_gradient))


def test_an_unknown_criterion_names_those_there_are():
    model = rheo.model("casson", yield_stress=1.0, casson_viscosity=0.1)
    with pytest.raises(rheo.InputError, match="unknown transition criterion 'stabillity' "):
        rheo.critical_velocity(model, 0.1, 1000.0, method="stabillity")
    with pytest.raises(rheo.InputError, match="for casson there are metzner-reed, slatter, stab"):
        rheo.critical_velocity(model, 0.1, 1000.0, method="hanks")


@pytest.mark.parametrize("index", [0.1, 0.4, 1.0, 1.7])
@pytest.mark.parametrize("diameter", [0.01, 2.0])
def test_for_a_power_law_the_search_starts_at_the_answer(index, diameter):
    """Z = 808 in closed form: ρR²γ̇_w²/τ_w n/(2 + n)^((2 + n)/(1 + n)); a handful of calls."""
    model = rheo.model("power-law", consistency=0.3, flow_index=index)
    _, pipe, _ = lay_out(model, [diameter], 1100.0)
    calls = []

    def number(part, rate):
        calls.append(rate)
        return criteria()["stability"].number(part, rate)

    rate = critical_wall_rate(pipe, replace(criteria()["stability"], number=number))
    shape = index / (2 + index) ** ((2 + index) / (1 + index))
    # ρR²γ̇^(2-n)/K shape = 808.
    size = 1100.0 * (diameter / 2) ** 2 * shape / 0.3
    assert rate[0] == pytest.approx((808.0 / size) ** (1 / (2 - index)), rel=1e-11)
    assert len(calls) <= 5


@pytest.mark.parametrize("index", [0.3, 0.7, 1.0, 1.2, 1.5])
def test_how_far_the_transition_reaches(index):
    """To S = 4000/2100 times the critical number, to S^(2n - 1) for a fluid that thickens.

    The number of a power law goes with V^(2 - n), so that the velocities are S^(1/(2 - n)) apart.
    """
    model = rheo.model("power-law", consistency=0.05, flow_index=index)
    plot = rheo.regime_map(model, 0.1, 1000.0, transition="metzner-reed")
    widening = max(2 * index - 1, 1.0)
    apart = (4000 / 2100) ** (widening / (2 - index))
    assert plot.turbulent_velocity / plot.critical_velocity == pytest.approx(apart, rel=1e-9)
    edges = plot.turbulent_velocity * np.array([1 - 1e-6, 1 + 1e-6])
    flow = rheo.pipe_flow(model, 0.1, edges, 1000.0, transition="metzner-reed")
    assert flow.regime[0] == "transition"
    assert flow.turbulence[0] < 1.0
    assert flow.turbulence[1] == 1.0


@pytest.mark.parametrize("rate", [1e10, 1e19, 1e25, 1e40])
def test_rates_beyond_what_a_flow_curve_is_searched_to(rate):
    """A curve that hardly rises needs them for the stress of turbulent flow."""
    model = rheo.model(
        "carreau",
        zero_shear_viscosity=[50.0, 80.0],
        infinite_shear_viscosity=0.0,
        time_constant=1.0,
        flow_index=0.05,
    )
    _, pipe, _ = lay_out(model, 0.1, 1000.0)
    wanted = np.array([rate, 10.0 * rate])
    stress = model.record.stress(wanted, *model)
    np.testing.assert_allclose(rate_at_stress(pipe, stress), wanted, rtol=1e-10)
    assert rate_at_stress(pipe, np.array([0.0, stress[1]]))[0] == 0.0
