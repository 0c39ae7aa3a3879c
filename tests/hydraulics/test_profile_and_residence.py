"""Velocity and stress profiles, residence times, developing length."""

import numpy as np
import pytest
from flow_curves import EXAMPLES
from scipy import integrate

import rheo
from rheo.hydraulics import (
    developing_length,
    fastest_time_ratio,
    fraction_faster_than_mean,
    residence_curve,
    stress_profile,
    velocity_profile,
)

PLACES = np.linspace(0.0, 1.0, 2001)


def laminar(key, velocity=0.2):
    return rheo.pipe_flow(
        rheo.model(key, **EXAMPLES[key]), 0.05, velocity, 1100.0, regime="laminar"
    )


@pytest.mark.parametrize("key", list(EXAMPLES))
def test_the_laminar_profile_holds_its_mean_and_energy(key):
    flow = laminar(key)
    speed = velocity_profile(flow, PLACES)
    assert speed[0] == pytest.approx(flow.velocity_ratio * 0.2, rel=1e-12)
    assert speed[-1] == pytest.approx(0.0, abs=1e-12)
    assert np.all(np.diff(speed) <= 1e-12)
    mean = integrate.simpson(speed * 2 * PLACES, x=PLACES)
    assert mean == pytest.approx(0.2, rel=1e-6)
    energy = integrate.simpson(speed**3 * 2 * PLACES, x=PLACES) / 0.2**3
    assert energy == pytest.approx(flow.kinetic_energy_factor, rel=1e-5)
    # The slope at the wall is the wall shear rate.
    step = 1e-6
    near = velocity_profile(flow, [1 - step])[0] / (step * 0.025)
    assert near == pytest.approx(flow.wall_rate, rel=1e-4)


def test_the_plug_moves_as_one():
    flow = laminar("herschel-bulkley")
    plug = flow.plug_radius / 0.025
    assert plug == pytest.approx(12.0 / flow.wall_stress)
    speed = velocity_profile(flow, [0.0, 0.5 * plug, 0.999 * plug, 1.05 * plug])
    np.testing.assert_allclose(speed[:3], speed[0], rtol=1e-12)
    assert speed[3] < speed[0]


def test_stress_is_a_straight_line_in_every_regime():
    model = rheo.model("newtonian", viscosity=0.001)
    flow = rheo.pipe_flow(model, 0.05, np.array([0.01, 0.06, 2.0]), 1000.0)
    assert flow.regime.tolist() == ["laminar", "transition", "turbulent"]
    stress = stress_profile(flow, [0.0, 0.25, 1.0])
    np.testing.assert_allclose(stress[:, 2], flow.wall_stress)
    np.testing.assert_allclose(stress[:, 1], 0.25 * flow.wall_stress)
    assert np.all(stress[:, 0] == 0)


def test_the_logarithmic_profile_has_the_moments_it_claims():
    model = rheo.model("newtonian", viscosity=0.001)
    flow = rheo.pipe_flow(model, 0.1, 2.0, 1000.0)
    slope = 2.5 * np.sqrt(flow.friction_factor / 2)

    def u(distance):
        return flow.velocity_ratio + slope * np.log(distance)

    mean, _ = integrate.quad(lambda y: u(y) * 2 * (1 - y), 0, 1)
    energy, _ = integrate.quad(lambda y: u(y) ** 3 * 2 * (1 - y), 0, 1)
    assert mean == pytest.approx(1.0, rel=1e-10)
    assert energy == pytest.approx(flow.kinetic_energy_factor, rel=1e-10)
    # Common practice: α is 1.04 to 1.1 and u_max/V about 1.2 in turbulent flow.
    assert 1.03 < flow.kinetic_energy_factor < 1.1
    assert 1.15 < flow.velocity_ratio < 1.25


def test_the_turbulent_profile_is_a_fair_picture():
    model = rheo.model("newtonian", viscosity=0.001)
    flow = rheo.pipe_flow(model, 0.1, 2.0, 1000.0)
    speed = velocity_profile(flow, PLACES)
    assert np.all(np.diff(speed) <= 0)
    assert speed[-1] == 0
    assert integrate.simpson(speed * 2 * PLACES, x=PLACES) == pytest.approx(2.0, rel=0.02)


def test_profile_numbers_pass_through_the_transition_without_steps():
    model = rheo.model("herschel-bulkley", yield_stress=5.0, consistency=0.1, flow_index=0.8)
    velocity = np.linspace(1.2, 3.2, 2001)
    flow = rheo.pipe_flow(model, 0.15, velocity, 1200.0)
    assert set(flow.regime) == {"laminar", "transition", "turbulent"}
    for values in (
        flow.velocity_ratio,
        flow.kinetic_energy_factor,
        fraction_faster_than_mean(flow),
    ):
        assert np.abs(np.diff(values)).max() < 0.01


def test_three_quarters_of_newtonian_laminar_flow_outrun_the_mean():
    # u = 2V(1 - s²) exceeds V inside s² = 1/2, which carries 1 - (1/2)² of the flow.
    flow = rheo.pipe_flow(rheo.model("newtonian", viscosity=1.0), 0.05, 0.1, 1000.0)
    assert fraction_faster_than_mean(flow) == pytest.approx(0.75, rel=1e-12)
    assert fastest_time_ratio(flow) == pytest.approx(0.5, rel=1e-12)


@pytest.mark.parametrize("key", list(EXAMPLES))
def test_the_fast_share_is_that_of_the_profile(key):
    flow = laminar(key)
    speed = velocity_profile(flow, PLACES)
    inside = integrate.cumulative_simpson(speed * 2 * PLACES, x=PLACES, initial=0) / 0.2
    place = np.interp(-0.2, -speed, PLACES)
    assert fraction_faster_than_mean(flow) == pytest.approx(
        np.interp(place, PLACES, inside), abs=2e-4
    )


@pytest.mark.parametrize("key", ["newtonian", "herschel-bulkley", "carreau"])
def test_the_residence_curve(key):
    flow = laminar(key)
    curve = residence_curve(flow, 400)
    time, left = curve.time_ratio, curve.fraction_left
    assert time[0] == pytest.approx(fastest_time_ratio(flow))
    assert left[0] == 0
    assert left[-1] == pytest.approx(1.0, abs=1e-4)
    assert np.all(np.diff(left) > 0)
    # The mean of the distribution is the mean time: V times area is the flow.
    assert np.interp(1.0, time, left) == pytest.approx(fraction_faster_than_mean(flow), abs=1e-3)
    if key == "newtonian":
        # F = 1 - 1/(4θ²), a result found in every reactor textbook (common practice).
        finite = np.isfinite(time)
        np.testing.assert_allclose(left[finite], 1 - 0.25 / time[finite] ** 2, atol=1e-12)


def test_residence_curves_of_many_flows_at_once():
    model = rheo.model("newtonian", viscosity=0.01)
    flow = rheo.pipe_flow(model, 0.05, np.array([0.1, 0.6, 5.0]), 1000.0)
    curve = residence_curve(flow)
    assert curve.time_ratio.shape == curve.fraction_left.shape == (3, 121)
    assert np.all(np.diff(curve.fraction_left, axis=1) >= 0)
    assert curve.time_ratio[0, 0] < curve.time_ratio[1, 0] < curve.time_ratio[2, 0]


def test_developing_length_of_newtonian_flow():
    model = rheo.model("newtonian", viscosity=0.01)
    slow, fast = (rheo.pipe_flow(model, 0.05, v, 1000.0) for v in (1e-4, 0.15))
    # Durst et al. 2005 (from memory): 0.62 diameters without inertia, 0.0567 Re with it; Poole and
    # Ridley's polynomial gives 0.60 at index 1.
    assert developing_length(slow).length / 0.05 == pytest.approx(0.60, abs=0.01)
    found = developing_length(fast)
    assert found.length / 0.05 == pytest.approx(0.0567 * fast.reynolds, rel=1e-3)
    assert found.cautions == ()
    turbulent = rheo.pipe_flow(model, 0.05, 5.0, 1000.0)
    assert developing_length(turbulent).length / 0.05 == pytest.approx(4.4 * 25000 ** (1 / 6))


def test_developing_length_outside_its_range_says_so():
    model = rheo.model("power-law", consistency=5.0, flow_index=0.2)
    caution = developing_length(rheo.pipe_flow(model, 0.05, 0.1, 1000.0)).cautions[0]
    assert caution.code == "developing-length-range"


def test_places_outside_the_pipe_are_refused():
    flow = laminar("newtonian")
    with pytest.raises(rheo.InputError, match="radius_ratio: it must be a list of numbers between"):
        velocity_profile(flow, [0.5, 1.2])
