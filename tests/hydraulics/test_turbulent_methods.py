"""Turbulent methods beyond the check values: definitions, registry, spread, fold."""

import numpy as np
import pytest
from scipy import integrate

import rheo
from rheo.geometry import tube_flow
from rheo.hydraulics.fold import find_bridge
from rheo.hydraulics.registry import turbulent_method, turbulent_methods
from rheo.hydraulics.turbulent.wilson_thomas import area_ratio, plug_term

CARREAU = {
    "zero_shear_viscosity": 0.5,
    "infinite_shear_viscosity": 0.002,
    "time_constant": 0.2,
    "flow_index": 0.5,
}


def test_every_record_is_complete():
    names = {"colebrook-white", "dodge-metzner", "darby-melson", "wilson-thomas", "torrance"}
    assert set(turbulent_methods()) == names
    for key, record in turbulent_methods().items():
        assert record.key == key
        assert len(record.source) > 20
        assert len(record.validity) > 20
        for name in record.models or ():
            assert name in rheo.model_records()


@pytest.mark.parametrize(
    ("key", "default"),
    [
        ("newtonian", "colebrook-white"),
        *[(k, "dodge-metzner") for k in ("power-law", "carreau", "carreau-yasuda", "cross")],
        *[(k, "dodge-metzner") for k in ("sisko", "ellis")],
        *[(k, "wilson-thomas") for k in ("bingham", "herschel-bulkley", "casson")],
        ("robertson-stiff", "wilson-thomas"),
    ],
)
def test_the_default_follows_the_model(key, default):
    record = rheo.model_record(key)
    values = {p.key: 1.0 for p in record.parameters}
    assert turbulent_method(None, rheo.model(key, **values)).key == default


def test_a_method_for_other_models_is_refused():
    model = rheo.model("carreau", **CARREAU)
    with pytest.raises(
        rheo.InputError, match="'darby-melson' is made for bingham, not for carreau"
    ):
        rheo.friction_factor(model, 0.1, 1.0, 1000.0, method="darby-melson")
    with pytest.raises(rheo.InputError, match="for carreau there are dodge-metzner, wilson-thomas"):
        rheo.pipe_flow(model, 0.1, 1.0, 1000.0, method="blasius")


@pytest.mark.parametrize("velocity", [3.0, 12.0])
def test_dodge_metzner_takes_index_and_consistency_at_the_wall_stress(velocity):
    """Written out: n' and K' of laminar flow at the turbulent wall stress."""
    model = rheo.model("carreau", **CARREAU)
    flow = rheo.pipe_flow(model, 0.08, velocity, 1000.0, regime="turbulent")
    nominal = tube_flow.nominal_rate(model, np.asarray(flow.wall_rate))
    index = tube_flow.local_flow_index(nominal, flow.wall_rate)
    consistency = flow.wall_stress / nominal**index
    reynolds = 1000.0 * velocity ** (2 - index) * 0.08**index / (consistency * 8 ** (index - 1))
    f = flow.friction_factor
    right = 4 / index**0.75 * np.log10(reynolds * f ** (1 - index / 2)) - 0.4 / index**1.2
    assert f**-0.5 == pytest.approx(right, rel=1e-12)


@pytest.mark.parametrize("key", ["carreau", "casson", "cross", "ellis", "robertson-stiff"])
def test_the_area_ratio_is_that_of_the_flow_curve(key):
    from flow_curves import EXAMPLES

    model = rheo.model(key, **EXAMPLES[key])
    rate = 300.0
    area, _ = integrate.quad(
        lambda one: float(model.stress(one)), 0.0, rate, epsrel=1e-11, limit=200
    )
    triangle = 0.5 * rate * model.stress(rate)
    assert area_ratio(model, np.asarray(rate)) == pytest.approx(area / triangle, rel=1e-9)


def test_the_area_ratio_of_herschel_bulkley_is_the_published_one():
    model = rheo.model("herschel-bulkley", yield_stress=4.0, consistency=0.7, flow_index=0.6)
    rate = np.geomspace(1e-3, 1e5, 9)
    x = 4.0 / model.stress(rate)
    np.testing.assert_allclose(area_ratio(model, rate), 2 * (1 + x * 0.6) / 1.6, rtol=1e-13)


def test_the_plug_term_keeps_its_digits():
    import mpmath

    for x in (1e-9, 1e-4, 9.99e-4, 1.01e-3, 0.3, 0.999):
        with mpmath.workdps(50):
            exact = -2.5 * (mpmath.log(1 - mpmath.mpf(x)) + x * (1 + mpmath.mpf(x) / 2))
        # Above 1e-3 the terms of 1e-3 cancel in double precision, which matters to nobody.
        assert plug_term(np.array(x)) == pytest.approx(float(exact), rel=1e-9, abs=1e-15)
    assert plug_term(np.array(1e-9)) == pytest.approx(2.5e-27 / 3, rel=1e-8, abs=0)
    for x in (1e-6, 2e-5, 5e-4, 9.99e-4):
        with mpmath.workdps(50):
            exact = -2.5 * (mpmath.log(1 - mpmath.mpf(x)) + x * (1 + mpmath.mpf(x) / 2))
        assert plug_term(np.array(x)) == pytest.approx(float(exact), rel=2e-12, abs=0)
    # A wall that only just yields: large, but a number.
    assert 80 < plug_term(np.array(1.0)) < 100


def test_darby_melson_survives_where_its_powers_do_not():
    model = rheo.model("bingham", yield_stress=50.0, plastic_viscosity=0.5)
    velocity = np.geomspace(1e-6, 30.0, 400)
    found = rheo.friction_factor(model, 0.2, velocity, 1200.0, method="darby-melson")
    laminar = rheo.pipe_flow(model, 0.2, velocity, 1200.0, regime="laminar").friction_factor
    assert np.all(np.isfinite(found))
    assert np.all(found >= laminar * (1 - 1e-12))
    np.testing.assert_allclose(found[:100], laminar[:100], rtol=1e-12)


def test_torrance_beside_its_neighbours():
    """The offsets from the Newtonian line that its record states: +9 % at 4e3, -6 % at 1e6."""

    def off(reynolds):
        model = rheo.model("newtonian", viscosity=1.0 / reynolds)
        torrance, white = (
            rheo.friction_factor(model, 1.0, 1.0, 1.0, method=key)
            for key in ("torrance", "colebrook-white")
        )
        return torrance / white - 1

    assert off(4e3) == pytest.approx(0.09, abs=0.01)
    assert off(1e6) == pytest.approx(-0.06, abs=0.01)


def test_methods_are_computed_together_and_their_spread_reported():
    model = rheo.model("bingham", yield_stress=5.0, plastic_viscosity=0.01)
    flow = rheo.pipe_flow(model, 0.2, np.array([0.1, 3.0]), 1200.0)
    gradients = flow.gradient_by_method
    assert set(gradients) == {"dodge-metzner", "darby-melson", "wilson-thomas", "torrance"}
    for key, gradient in gradients.items():
        alone = rheo.pipe_flow(model, 0.2, np.array([0.1, 3.0]), 1200.0, method=key)
        np.testing.assert_allclose(gradient, alone.pressure_gradient, rtol=1e-11)
        assert gradient[0] == pytest.approx(flow.pressure_gradient[0], rel=1e-14)
    counted = [gradients[key][1] for key in gradients if flow.method_counts[key][1]]
    assert not flow.method_counts["dodge-metzner"][1]
    assert flow.method_spread[0] == 0.0
    expected = (max(counted) - min(counted)) / flow.pressure_gradient[1]
    assert flow.method_spread[1] == pytest.approx(expected)
    assert 0.05 < flow.method_spread[1] < 0.5


def test_torrance_does_not_count_for_newtonian_fluids():
    model = rheo.model("newtonian", viscosity=0.001)
    flow = rheo.pipe_flow(model, 0.05, 0.5, 1000.0)
    assert not flow.method_counts["torrance"]
    assert flow.method_counts["wilson-thomas"]
    assert flow.method_spread < 0.02


def _folding() -> rheo.Model:
    """A Cross curve of index 0.99 with a low plateau, where n' rises from 0.1 to 1."""
    return rheo.model(
        "cross",
        zero_shear_viscosity=10.0,
        infinite_shear_viscosity=1e-3,
        time_constant=1.0,
        rate_index=0.99,
    )


def test_a_fold_is_bridged():
    model = _folding()
    flow = rheo.pipe_flow(model, 0.005, np.geomspace(0.5, 15.0, 400), 1000.0, regime="turbulent")
    bridge = find_bridge(flow.pipe.take(np.arange(1)), turbulent_methods()["dodge-metzner"])
    assert np.isfinite(bridge.log_rate[0])
    steps = np.diff(np.log(flow.wall_stress))
    assert np.all(steps > 0)
    rate = np.exp(bridge.log_rate)
    record = turbulent_methods()["dodge-metzner"]
    near = flow.pipe.take(np.zeros(2, dtype=int))
    stress, smooth = record.curve(near, rate * np.array([0.8, 1.25]))
    both_sides = np.sqrt(2 * stress / 1000.0) * smooth
    assert np.all(both_sides > np.exp(bridge.log_velocity[0]))


def test_a_forced_turbulent_flow_without_solution_says_so():
    model = rheo.model("power-law", consistency=50.0, flow_index=2.0)
    flow = rheo.pipe_flow(model, 0.01, 0.1, 1000.0, regime="turbulent")
    assert np.isnan(flow.wall_stress)
    assert flow.cautions[0].code == "no-turbulent-solution"
    assert np.isnan(rheo.friction_factor(model, 0.01, 0.1, 1000.0, method="dodge-metzner"))


def test_folds_are_found_for_each_fluid_by_itself():
    """Fluids that fold beside such that do not, in one call as one by one."""
    record = turbulent_methods()["dodge-metzner"]
    indices = np.array([0.99, 0.2, 0.95, 0.99, 0.6])
    lowest = np.array([1e-3, 1e-3, 1e-3, 1.0, 0.0])

    def fluids(pick):
        return rheo.model(
            "cross",
            zero_shear_viscosity=10.0,
            infinite_shear_viscosity=lowest[pick],
            time_constant=1.0,
            rate_index=indices[pick],
        )

    flow = rheo.pipe_flow(fluids(slice(None)), 0.005, 1.0, 1000.0)
    together = find_bridge(flow.pipe, record)
    assert np.count_nonzero(np.isfinite(together.log_rate)) >= 1
    assert np.count_nonzero(np.isneginf(together.log_rate)) >= 2
    for index in range(5):
        one = rheo.pipe_flow(fluids(slice(index, index + 1)), 0.005, 1.0, 1000.0)
        alone = find_bridge(one.pipe, record)
        assert together.log_rate[index] == pytest.approx(alone.log_rate[0], rel=1e-12)
        assert together.log_velocity[index] == pytest.approx(alone.log_velocity[0], rel=1e-12)


def test_the_bridge_ends_at_the_last_local_minimum():
    """Against the velocity of the equation on a fine grid of rates."""
    model = _folding()
    record = turbulent_methods()["dodge-metzner"]
    flow = rheo.pipe_flow(model, np.array([0.005, 0.02, 0.1]), 1.0, 1000.0)
    bridge = find_bridge(flow.pipe, record)
    log_rate = np.linspace(-5.0, 25.0, 6001)
    for index in range(3):
        near = flow.pipe.take(np.full(log_rate.size, index))
        stress, smooth = record.curve(near, np.exp(log_rate))
        velocity = np.sqrt(2 * stress / 1000.0) * smooth
        dips = (velocity[1:-1] < velocity[:-2]) & (velocity[1:-1] <= velocity[2:])
        last = np.flatnonzero(dips & (velocity[1:-1] > 0))[-1] + 1
        assert bridge.log_rate[index] == pytest.approx(log_rate[last], abs=0.006)
        assert np.exp(bridge.log_velocity[index]) == pytest.approx(velocity[last], rel=1e-5)
