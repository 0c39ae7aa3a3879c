"""Residence times and the forming of the profile, against the profiles written out and summed."""

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
    velocity_profile,
)

WATER = rheo.model("newtonian", viscosity=0.001)


def _log_profile(friction_factor):
    """Return u/V of the logarithmic profile against the distance from the wall over R."""
    slope = 2.5 * np.sqrt(friction_factor / 2)
    return lambda y: 1.0 + slope * (1.5 + np.log(y))


def _inside(speed, y):
    """Return the share of the flow farther from the wall than y, ∫2(1-y)u dy."""
    return integrate.quad(lambda at: 2 * (1 - at) * speed(at), y, 1, epsabs=1e-13)[0]


@pytest.mark.parametrize("velocity", [0.1, 2.0, 20.0])
def test_the_fast_share_of_turbulent_flow(velocity):
    flow = rheo.pipe_flow(WATER, 0.1, velocity, 1000.0)
    assert flow.regime == "turbulent"
    # The logarithmic profile is at its mean where ln y = -3/2.
    share = _inside(_log_profile(flow.friction_factor), np.exp(-1.5))
    assert fraction_faster_than_mean(flow) == pytest.approx(share, rel=1e-9)
    assert fastest_time_ratio(flow) == pytest.approx(1.0 / flow.velocity_ratio, rel=1e-14)


def test_the_turbulent_residence_curve():
    flow = rheo.pipe_flow(WATER, 0.1, 2.0, 1000.0)
    curve = residence_curve(flow, 60)
    distance = np.linspace(1.0, 0.0, 61)[:-1] ** 2
    speed = _log_profile(flow.friction_factor)
    moving = speed(distance) > 0.3
    assert np.count_nonzero(moving) > 50
    np.testing.assert_allclose(curve.time_ratio[moving], 1.0 / speed(distance[moving]), rtol=1e-12)
    left = [_inside(speed, y) for y in distance[moving]]
    np.testing.assert_allclose(curve.fraction_left[moving], left, atol=1e-9)
    # Next to the wall, where the logarithm turns negative, the liquid stands and all has left.
    slow = residence_curve(rheo.pipe_flow(WATER, 0.1, 0.05, 1000.0), 4000)
    assert np.isposinf(slow.time_ratio[-1])
    assert slow.fraction_left.max() == 1.0
    assert np.all(np.diff(slow.fraction_left) >= 0)


@pytest.mark.parametrize("key", list(EXAMPLES))
def test_the_laminar_residence_curve_is_that_of_the_profile(key):
    model = rheo.model(key, **EXAMPLES[key])
    flow = rheo.pipe_flow(model, 0.05, 0.2, 1100.0, regime="laminar")
    curve = residence_curve(flow, 25)
    radius = 1.0 - np.linspace(1.0, 0.0, 26)[:-1] ** 2
    np.testing.assert_allclose(0.2 / curve.time_ratio, velocity_profile(flow, radius), rtol=1e-11)
    plug = float(flow.plug_fraction)
    for place, left in list(zip(radius, curve.fraction_left, strict=True))[1::6]:
        share, _ = integrate.quad(
            lambda at: 2 * at * float(velocity_profile(flow, [at])[0]) / 0.2,
            0.0,
            place,
            points=[plug] if 0 < plug < place else None,
            epsabs=1e-11,
        )
        assert left == pytest.approx(share, abs=1e-9)


def test_in_transition_the_two_are_weighted():
    """As the wall stress is: with the weight of the turbulent value."""
    flow = rheo.pipe_flow(WATER, 0.05, 0.06, 1000.0)
    assert flow.regime == "transition"
    weight = float(flow.turbulence)
    assert 0.2 < weight < 0.9
    speed = _log_profile(flow.friction_factor)
    share = (1 - weight) * 0.75 + weight * _inside(speed, np.exp(-1.5))
    assert fraction_faster_than_mean(flow) == pytest.approx(share, rel=1e-9)
    curve = residence_curve(flow, 40)
    distance = np.linspace(1.0, 0.0, 41)[:-1] ** 2
    radius = 1.0 - distance
    moving = distance > 0.03
    mixed = (1 - weight) * 2 * (1 - radius**2) + weight * speed(distance)
    np.testing.assert_allclose(curve.time_ratio[moving], 1.0 / mixed[moving], rtol=1e-11)
    laminar = radius**2 * (2 - radius**2)
    left = [(1 - weight) * laminar[i] + weight * _inside(speed, y) for i, y in enumerate(distance)]
    np.testing.assert_allclose(curve.fraction_left[moving], np.array(left)[moving], atol=1e-9)


def _poole_ridley(n, reynolds):
    """L/D as the paper prints it: [(0.246n² - 0.675n + 1.03)^1.6 + (0.0567Re)^1.6]^(1/1.6)."""
    rest = (0.246 * n * n - 0.675 * n + 1.03) ** 1.6
    return (rest + (0.0567 * reynolds) ** 1.6) ** 0.625


@pytest.mark.parametrize("index", [0.4, 0.7, 1.0, 1.5])
@pytest.mark.parametrize("velocity", [1e-4, 0.02, 0.2])
def test_the_laminar_developing_length(index, velocity):
    model = rheo.model("power-law", consistency=0.3, flow_index=index)
    flow = rheo.pipe_flow(model, 0.05, velocity, 1000.0)
    assert flow.regime == "laminar"
    expected = 0.05 * _poole_ridley(index, float(flow.reynolds))
    assert developing_length(flow).length == pytest.approx(expected, rel=1e-9)


def test_the_developing_length_without_inertia():
    """Poole and Ridley's polynomial at n = 0.4, 1 and 1.5, worked out by hand."""
    for index, diameters in ((0.4, 0.79936), (1.0, 0.601), (1.5, 0.571)):
        model = rheo.model("power-law", consistency=100.0, flow_index=index)
        flow = rheo.pipe_flow(model, 0.05, 1e-5, 1000.0)
        assert developing_length(flow).length / 0.05 == pytest.approx(diameters, rel=1e-6)


def test_in_transition_the_longer_length_counts():
    thick = rheo.model("power-law", consistency=0.05, flow_index=0.5)
    for model, diameter in ((WATER, 0.05), (thick, 0.05)):
        critical = float(rheo.critical_velocity(model, diameter, 1000.0))
        flow = rheo.pipe_flow(model, diameter, 1.2 * critical, 1000.0)
        assert flow.regime == "transition"
        slow = _poole_ridley(float(flow.local_flow_index), float(flow.reynolds))
        fast = 4.4 * float(flow.reynolds) ** (1 / 6)
        assert slow > fast
        assert developing_length(flow).length == pytest.approx(diameter * slow, rel=1e-12)
    turbulent = rheo.pipe_flow(WATER, 0.05, 2.0, 1000.0)
    expected = 0.05 * 4.4 * 100_000 ** (1 / 6)
    assert developing_length(turbulent).length == pytest.approx(expected, rel=1e-12)
    assert developing_length(turbulent).cautions == ()


@pytest.mark.parametrize("diameter", [0.05, 0.4])
def test_the_turbulent_profile_is_the_logarithm_with_a_straight_line_at_the_wall(diameter):
    flow = rheo.pipe_flow(WATER, diameter, 2.0, 1000.0)
    assert flow.regime == "turbulent"
    core = np.linspace(0.0, 0.95, 20)
    expected = 2.0 * _log_profile(flow.friction_factor)(1.0 - core)
    np.testing.assert_allclose(velocity_profile(flow, core), expected, rtol=1e-12)
    for step in (1e-7, 1e-6):
        near = velocity_profile(flow, [1.0 - step])[0]
        assert near / (step * 0.5 * diameter) == pytest.approx(flow.wall_rate, rel=1e-8)
    # At the wall shear rate the stress of the flow curve is the wall stress.
    assert flow.wall_rate * 0.001 == pytest.approx(flow.wall_stress, rel=1e-12)


def test_profiles_of_all_regimes_in_one_call():
    velocity = np.array([0.01, 0.06, 2.0])
    flows = rheo.pipe_flow(WATER, 0.05, velocity, 1000.0)
    assert flows.regime.tolist() == ["laminar", "transition", "turbulent"]
    places = np.array([0.0, 0.3, 0.9, 1.0])
    table = velocity_profile(flows, places)
    forced = rheo.pipe_flow(WATER, 0.05, velocity, 1000.0, regime="laminar")
    laminar = 2 * velocity[:, None] * (1 - places**2)
    np.testing.assert_allclose(velocity_profile(forced, places), laminar, rtol=1e-12)
    for row, speed in enumerate(velocity):
        alone = velocity_profile(rheo.pipe_flow(WATER, 0.05, speed, 1000.0), places)
        np.testing.assert_allclose(table[row], alone, rtol=1e-12)
    weight = flows.turbulence[1]
    logarithmic = 0.06 * _log_profile(flows.friction_factor[1])(1 - places[:3])
    mixed = (1 - weight) * laminar[1, :3] + weight * logarithmic
    np.testing.assert_allclose(table[1, :2], mixed[:2], rtol=1e-12)


def test_times_of_all_regimes_in_one_call():
    velocity = np.array([0.01, 0.06, 2.0])
    flows = rheo.pipe_flow(WATER, 0.05, velocity, 1000.0)
    shares = fraction_faster_than_mean(flows)
    curves = residence_curve(flows, 30)
    lengths = developing_length(flows).length
    for row, speed in enumerate(velocity):
        alone = rheo.pipe_flow(WATER, 0.05, speed, 1000.0)
        assert shares[row] == pytest.approx(fraction_faster_than_mean(alone), rel=1e-12)
        assert lengths[row] == pytest.approx(developing_length(alone).length, rel=1e-12)
        one = residence_curve(alone, 30)
        np.testing.assert_allclose(curves.time_ratio[row], one.time_ratio, rtol=1e-10)
        np.testing.assert_allclose(curves.fraction_left[row], one.fraction_left, atol=1e-13)
