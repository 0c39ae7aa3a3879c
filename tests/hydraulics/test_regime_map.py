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


@pytest.mark.parametrize("method", ["dodge-metzner", "torrance", "wilson-thomas"])
@pytest.mark.parametrize("transition", ["metzner-reed", "slatter"])
def test_method_criterion_and_roughness_reach_the_draws(method, transition):
    """Draws of the best model's kind take its method; those of another kind their own."""
    choice = {"method": method, "transition": transition}
    velocity = np.array([0.1, 1.0, 4.0])
    family = draws(40)
    other = rheo.model(
        "carreau",
        zero_shear_viscosity=np.full(20, 3.0),
        infinite_shear_viscosity=0.005,
        time_constant=0.5,
        flow_index=0.4,
    )
    plot = rheo.regime_map(
        BEST, 0.08, 1200.0, 4e-4, velocity=velocity, draws=[family, other], level=0.8, **choice
    )
    best = rheo.pipe_flow(BEST, 0.08, velocity, 1200.0, 4e-4, **choice)
    np.testing.assert_array_equal(plot.gradient, best.pressure_gradient)
    gradients = [
        rheo.pipe_flow(
            one.with_new_axis(), 0.08, velocity, 1200.0, 4e-4, method=key, transition=transition
        ).pressure_gradient
        for one, key in ((family, method), (other, None))
    ]
    low, high = np.quantile(np.concatenate(gradients), [0.1, 0.9], axis=0)
    np.testing.assert_allclose(plot.low, low, rtol=1e-12)
    np.testing.assert_allclose(plot.high, high, rtol=1e-12)
    assert plot.level == 0.8
    expected = rheo.critical_velocity(BEST, 0.08, 1200.0, method=transition)
    assert plot.critical_velocity == pytest.approx(expected, rel=1e-12)
    criticals = np.concatenate(
        [rheo.critical_velocity(one, 0.08, 1200.0, method=transition) for one in (family, other)]
    )
    np.testing.assert_allclose(plot.critical_band, np.quantile(criticals, [0.1, 0.9]), rtol=1e-12)


@pytest.mark.parametrize("method", ["torrance", "wilson-thomas"])
def test_the_measured_range_by_the_method_that_is_asked_for(method):
    plot = rheo.regime_map(BEST, 0.08, 1200.0, 4e-4, measured_rate=(2.0, 3000.0), method=method)
    flow = rheo.pipe_flow(BEST, 0.08, np.array(plot.measured_velocity), 1200.0, 4e-4, method=method)
    np.testing.assert_allclose(flow.wall_rate, [2.0, 3000.0], rtol=1e-9)


@pytest.mark.parametrize(
    ("viscosity", "end", "highest"),
    [
        (1e-4, 0.004, 10.0),
        (0.12, 4.8, 10.0),
        (0.14, 5.6, 11.2),
        (0.37, 14.8, 29.6),
        (0.38, 15.2, 10.0),
    ],
)
def test_the_velocities_of_a_plot(viscosity, end, highest):
    """1 cm/s to 10 m/s, or to twice the end of the transition where that lies below 30 m/s."""
    plot = rheo.regime_map(
        rheo.model("newtonian", viscosity=viscosity), 0.1, 1000.0, transition="metzner-reed"
    )
    # Re = 4000 in 0.1 m.
    assert plot.turbulent_velocity == pytest.approx(end, rel=1e-9)
    assert plot.velocity[0] == pytest.approx(0.01, rel=1e-12)
    assert plot.velocity[-1] == pytest.approx(highest, rel=1e-9)
    assert plot.velocity.size > 100
    np.testing.assert_allclose(np.diff(np.log(plot.velocity)), np.log(100 * highest) / 120)


def test_the_end_of_the_transition_of_slow_and_of_strange_fluids():
    wide = rheo.regime_map(
        rheo.model("newtonian", viscosity=0.001), 100.0, 1000.0, transition="metzner-reed"
    )
    assert wide.turbulent_velocity == pytest.approx(4e-5, rel=1e-9)
    thick = rheo.model("power-law", consistency=1e-4, flow_index=2.0)
    plot = rheo.regime_map(thick, 0.1, 1000.0)
    assert plot.critical_velocity == plot.turbulent_velocity == 0.0
