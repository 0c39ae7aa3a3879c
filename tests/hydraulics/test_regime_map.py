"""Regime map: data for the plot of gradient against velocity."""

import numpy as np
import pytest

import rheo

BEST = rheo.model("herschel-bulkley", yield_stress=12.0, consistency=0.2, flow_index=0.6)


def draws(count=300):
    rng = np.random.default_rng(7)
    return rheo.model(
        "herschel-bulkley",
        yield_stress=12.0 * np.exp(0.1 * rng.standard_normal(count)),
        consistency=0.2 * np.exp(0.1 * rng.standard_normal(count)),
        flow_index=0.6 + 0.02 * rng.standard_normal(count),
    )


def test_the_curve_is_that_of_pipe_flow():
    plot = rheo.regime_map(BEST, 0.08, 1200.0, 5e-5)
    flow = rheo.pipe_flow(BEST, 0.08, plot.velocity, 1200.0, 5e-5)
    np.testing.assert_array_equal(plot.gradient, flow.pressure_gradient)
    np.testing.assert_array_equal(plot.regime, flow.regime)
    assert set(plot.regime) == {"laminar", "transition", "turbulent"}
    assert plot.low is plot.high is plot.critical_band is plot.measured_velocity is None
    assert set(plot.gradient_by_method) == {"dodge-metzner", "wilson-thomas", "torrance"}
    laminar = plot.velocity[plot.regime == "laminar"]
    turbulent = plot.velocity[plot.regime == "turbulent"]
    assert laminar.max() <= plot.critical_velocity < plot.turbulent_velocity <= turbulent.min()
    assert "transition-flow" in [one.code for one in plot.cautions]


def test_the_band_holds_the_draws():
    family = draws()
    velocity = np.array([0.1, 1.0, 4.0])
    plot = rheo.regime_map(BEST, 0.08, 1200.0, velocity=velocity, draws=[family], level=0.9)
    flow = rheo.pipe_flow(family.with_new_axis(), 0.08, velocity, 1200.0)
    low, high = np.quantile(flow.pressure_gradient, [0.05, 0.95], axis=0)
    np.testing.assert_allclose(plot.low, low)
    np.testing.assert_allclose(plot.high, high)
    assert np.all((plot.low < plot.gradient) & (plot.gradient < plot.high))
    assert plot.critical_band[0] < plot.critical_velocity < plot.critical_band[1]


def test_draws_of_several_models_are_mixed():
    other = rheo.model(
        "bingham", yield_stress=np.full(30, 40.0), plastic_viscosity=np.full(30, 0.05)
    )
    velocity = np.array([0.1, 1.0])
    alone = rheo.regime_map(BEST, 0.08, 1200.0, velocity=velocity, draws=[draws()])
    mixed = rheo.regime_map(BEST, 0.08, 1200.0, velocity=velocity, draws=[draws(), other])
    assert np.all(mixed.high > 1.5 * alone.high)


def test_the_measured_range_is_marked_where_the_wall_works():
    plot = rheo.regime_map(BEST, 0.08, 1200.0, measured_rate=(2.0, 3000.0))
    low, high = plot.measured_velocity
    flow = rheo.pipe_flow(BEST, 0.08, np.array([low, high]), 1200.0)
    np.testing.assert_allclose(flow.wall_rate, [2.0, 3000.0], rtol=1e-9)
    assert flow.regime[1] == "turbulent"


def test_the_end_of_the_transition():
    plot = rheo.regime_map(rheo.model("newtonian", viscosity=0.01), 0.05, 1000.0)
    # 808/808·4000/2100 of the Newtonian critical velocity.
    assert plot.turbulent_velocity == pytest.approx(plot.critical_velocity * 4000 / 2100, rel=1e-9)
    thick = rheo.model("power-law", consistency=10.0, flow_index=2.0)
    plot = rheo.regime_map(thick, 0.05, 1000.0)
    assert plot.critical_velocity == plot.turbulent_velocity == np.inf


def test_what_it_refuses():
    with pytest.raises(rheo.InputError, match="model: its parameters must be single numbers"):
        rheo.regime_map(draws(), 0.08, 1200.0)
    with pytest.raises(rheo.InputError, match="level: it is 1; it must lie between 0 and 1"):
        rheo.regime_map(BEST, 0.08, 1200.0, level=1.0)
    with pytest.raises(rheo.InputError, match="velocity: it is 0 m/s; it must be a finite number"):
        rheo.regime_map(BEST, 0.08, 1200.0, velocity=[0.0, 1.0])
