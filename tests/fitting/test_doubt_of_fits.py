"""Bootstrap, profiles, draws, bands, and how often intervals cover a known truth."""

from __future__ import annotations

import json
from pathlib import Path

import lmfit
import numpy as np
import pytest
from flow_curves import KEYS, example

import rheo
from rheo.errors import InputError
from rheo.fitting.bootstrap import bootstrap_parameters, drawn_readings
from rheo.geometry import make_geometry

DATA = Path(__file__).parent.parent / "data" / "check_values.json"
ROWS = {row["id"]: row for row in json.loads(DATA.read_text("utf-8"))["cases"]}
ROW = ROWS["H-noisy-1"]["inputs"]
TRUTH = example("herschel-bulkley")
RATES = np.geomspace(0.5, 300.0, 20)


def sauce_fits(models="herschel-bulkley"):
    return rheo.fit(rheo.FlowCurve(ROW["shear_rate"], ROW["shear_stress"]), models)


def simulated(seed, truth=TRUTH, rate=RATES, noise=0.02):
    random = np.random.default_rng(seed)
    return rheo.FlowCurve(rate, truth.stress(rate) * (1.0 + noise * random.standard_normal(20)))


def pressure_gradient(model):
    flow = rheo.pipe_flow(model, diameter=0.05, velocity=1.0, density=1100.0, regime="laminar")
    return flow.pressure_gradient


def test_every_replicate_is_the_fit_that_lmfit_finds():
    found = sauce_fits().best
    replicates = bootstrap_parameters(found, 200, seed=4)
    readings = drawn_readings(found, 200, 4, "residual")
    rate = np.asarray(ROW["shear_rate"])
    plain = []
    for stress in readings:
        start = lmfit.Parameters()
        for key, one in found.parameters.items():
            start.add(key, value=one.value, min=1e-6)

        def residual(values, stress=stress):
            v = values.valuesdict()
            return (v["yield_stress"] + v["consistency"] * rate ** v["flow_index"]) / stress - 1.0

        plain.append(list(lmfit.minimize(residual, start).params.valuesdict().values()))
    np.testing.assert_allclose(replicates, plain, rtol=1e-4)
    ends = [2.5, 50.0, 97.5]
    np.testing.assert_allclose(
        np.percentile(replicates, ends, axis=0), np.percentile(plain, ends, axis=0), rtol=1e-6
    )


@pytest.mark.parametrize("kind", ["residual", "parametric"])
def test_percentiles_agree_with_the_covariance(kind):
    """A nearly linear problem: both say the same, to what 4,000 draws tell."""
    found = sauce_fits().best
    draws = found.bootstrap(4000, seed=2, kind=kind)
    for key, one in found.parameters.items():
        low, high = np.percentile(draws.parameters[key], [2.5, 97.5])
        assert low == pytest.approx(one.low, abs=0.25 * one.stderr)
        assert high == pytest.approx(one.high, abs=0.25 * one.stderr)


def test_the_seed_decides_the_draws():
    found = sauce_fits().best
    one, same, other = (found.bootstrap(50, seed=seed) for seed in (1, 1, 2))
    np.testing.assert_array_equal(one.parameters["consistency"], same.parameters["consistency"])
    assert np.all(one.parameters["consistency"] != other.parameters["consistency"])
    assert one.shape == (50,)


def test_draws_asked_for_again_are_kept_and_few_are():
    fits = sauce_fits()
    first = fits.draws(20, seed=1)
    assert fits.draws(20, seed=1) is first
    assert fits.draws(20, seed=2) is not first
    for seed in range(3, 12):
        fits.draws(5, seed=seed)
    again = fits.draws(20, seed=1)
    assert again is not first
    for one, other in zip(again, first, strict=True):
        for key, value in one.parameters.items():
            np.testing.assert_array_equal(value, other.parameters[key])


@pytest.mark.parametrize("key", KEYS)
def test_every_model_is_drawn_within_its_bounds(key):
    """Building the model checks the bounds; the curves must lie about the readings."""
    rate = np.geomspace(0.01, 1000.0, 20)
    curve = simulated(3, example(key), rate)
    found = rheo.fit(curve, key).best
    stresses = found.bootstrap(300, seed=1).with_new_axis().stress(rate)
    assert np.all(np.abs(np.median(stresses, axis=0) / found.predicted - 1.0) < 0.01)
    spread = np.std(np.log(stresses), axis=0)
    assert np.all((spread > 0.0005) & (spread < 0.05))


def test_readings_of_an_instrument_are_drawn_in_torque():
    geometry = make_geometry(
        "concentric-cylinders", inner_radius=0.01, outer_radius=0.02, length=0.06
    )
    speed = np.geomspace(0.05, 60.0, 20)
    random = np.random.default_rng(5)
    torque = geometry.predict(TRUTH, speed) * (1.0 + 0.02 * random.standard_normal(20))
    readings = rheo.Readings(geometry=geometry, angular_speed=speed, torque=torque)
    found = rheo.fit(readings, "herschel-bulkley").best
    draws = found.bootstrap(1000, seed=1)
    for key, one in found.parameters.items():
        assert np.std(draws.parameters[key]) == pytest.approx(one.stderr, rel=0.25)


def test_a_known_accuracy_is_not_undercut():
    """Readings that happen to lie on the curve are no better than the instrument."""
    rate = np.geomspace(0.1, 300.0, 20)
    exact = rheo.FlowCurve(rate, TRUTH.stress(rate))
    accuracy = rheo.Instrument(2.0, 0.0, full_scale=100.0)
    plain = rheo.fit(exact, "herschel-bulkley").best.bootstrap(200)
    known = rheo.fit(exact, "herschel-bulkley", accuracy).best.bootstrap(2000, kind="parametric")
    assert np.ptp(plain.parameters["yield_stress"]) < 1e-6
    drawn = np.std(known.with_new_axis().stress(rate), axis=0) / TRUTH.stress(rate)
    # Three parameters take 3/20 of the variance of the readings, all points together.
    assert np.sqrt(np.mean(drawn**2)) == pytest.approx(0.02 * np.sqrt(3.0 / 20.0), rel=0.05)


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        ({"count": 0}, "the number of replicates is 0; it must be 1 or more"),
        ({"count": 5, "kind": "pairs"}, "unknown kind 'pairs'; there are residual, parametric"),
    ],
)
def test_a_bootstrap_that_cannot_be(arguments, sentence):
    with pytest.raises(InputError, match=sentence):
        sauce_fits().best.bootstrap(**arguments)


@pytest.mark.parametrize("level", [0.6827, 0.95])
def test_profiles_are_lmfit_s(level):
    found = sauce_fits().best
    rate, stress = np.asarray(ROW["shear_rate"]), np.asarray(ROW["shear_stress"])
    start = lmfit.Parameters()
    for key, one in found.parameters.items():
        start.add(key, value=one.value)

    def residual(values):
        v = values.valuesdict()
        return (v["yield_stress"] + v["consistency"] * rate ** v["flow_index"]) / stress - 1.0

    minimizer = lmfit.Minimizer(residual, start)
    plain = lmfit.conf_interval(minimizer, minimizer.minimize(), sigmas=[level])
    for key in found.parameters:
        profile = found.profile(key, level)
        (_, low), (_, middle), (_, high) = plain[key]
        # lmfit stops when the chance is right to 1e-5.
        assert profile.low == pytest.approx(low, abs=1e-4 * (high - low))
        assert profile.high == pytest.approx(high, abs=1e-4 * (high - low))
        assert profile.value == pytest.approx(middle)
        assert (profile.low_open, profile.high_open) == (False, False)


def test_a_trace_is_straight_where_the_standard_error_holds():
    found = sauce_fits().best
    trace = found.profile("flow_index")
    one = found.parameters["flow_index"]
    near = np.abs(trace.trace_root) < 3.0
    assert near.sum() >= 8
    assert np.all(np.diff(trace.trace_value) > 0)
    assert np.all(np.diff(trace.trace_root) > 0)
    straight = (trace.trace_value[near] - one.value) / one.stderr
    np.testing.assert_allclose(trace.trace_root[near], straight, atol=0.25)


def test_a_parameter_that_the_readings_do_not_close_in_is_open():
    """A power law may be a Carreau curve that bends at as low a rate as one likes."""
    found = rheo.fit(simulated(6, example("power-law")), "carreau").best
    profile = found.profile("time_constant")
    assert profile.high_open
    assert profile.high == 1e9
    assert not profile.low_open
    # It must bend near the lowest rate or below.
    assert 0.1 < profile.low * RATES.min() < 100.0
    with pytest.raises(InputError, match="unknown parameter 'viscosity'; there are zero_shear"):
        found.profile("viscosity")
    with pytest.raises(InputError, match="the level is 95"):
        found.profile("flow_index", level=95)


def test_a_profile_of_a_parameter_at_its_bound_has_one_side():
    found = rheo.fit(simulated(1, example("power-law")), "herschel-bulkley").best
    assert found.parameters["yield_stress"].bound == "lower"
    profile = found.profile("yield_stress")
    assert (profile.low, profile.low_open) == (0.0, True)
    assert 0.0 < profile.high < found.observed.min()
    assert not profile.high_open


def test_draws_are_mixed_by_akaike_weight():
    fits = rheo.fit(simulated(2, example("power-law")), ["power-law", "sisko", "carreau"])
    draws = fits.draws(999, seed=3)
    assert sum(one.shape[0] for one in draws) == 999
    for one in draws:
        assert one.shape[0] == pytest.approx(999 * fits[one.key].weight, abs=1.0)
    [only] = fits.draws(100, key="sisko")
    assert (only.key, only.shape) == ("sisko", (100,))
    with pytest.raises(InputError, match="the number of draws is 0"):
        fits.draws(0)


def test_a_band_is_narrow_inside_and_wide_outside_the_readings():
    fits = rheo.fit(simulated(2))
    band = fits.predict([0.01, 10.0, 1e4])
    width = (band.high - band.low) / band.stress
    assert width[1] < 0.03
    assert width[0] > 1.5 * width[1]
    assert width[2] > 3.0 * width[1]
    assert np.all((band.low < band.stress) & (band.stress < band.high))
    narrow = fits.predict(10.0, level=0.5)
    assert narrow.high[0] - narrow.low[0] < 0.5 * (band.high[1] - band.low[1])
    with pytest.raises(InputError, match="the level is 1; it must lie between 0 and 1"):
        fits.predict(10.0, level=1.0)


def test_a_band_at_a_temperature():
    temperature = np.repeat([293.15, 313.15, 333.15], 12)
    rate = np.tile(np.geomspace(0.5, 300.0, 12), 3)
    random = np.random.default_rng(4)
    cooler = np.exp(2000.0 * (1.0 / temperature - 1.0 / 313.15))
    stress = 5.0 * rate**0.4 * cooler * (1.0 + 0.02 * random.standard_normal(36))
    fits = rheo.fit_temperatures(rheo.FlowCurve(rate, stress, temperature), "power-law")
    band = fits.predict(10.0, state=303.15)
    true = 5.0 * 10.0**0.4 * np.exp(2000.0 * (1.0 / 303.15 - 1.0 / 313.15))
    assert band.low[0] < true < band.high[0]
    with pytest.raises(InputError, match="several values of temperature were fitted"):
        fits.predict(10.0)


def test_intervals_cover_the_truth_as_often_as_they_say():
    """500 sets of 20 points with 2 % noise: parameters by Student's t, pressure drop by draws."""
    true = float(pressure_gradient(TRUTH))
    names = tuple(TRUTH.parameters)
    covered = dict.fromkeys((*names, "pressure drop"), 0)
    for seed in range(500):
        found = rheo.fit(simulated(seed), "herschel-bulkley").best
        for name in names:
            one = found.parameters[name]
            covered[name] += one.low <= float(TRUTH.parameters[name]) <= one.high
        drops = pressure_gradient(found.bootstrap(600, seed))
        low, high = np.percentile(drops, [2.5, 97.5])
        covered["pressure drop"] += bool(low <= true <= high)
    for name, count in covered.items():
        assert 0.92 <= count / 500 <= 0.98, f"{name}: {covered}"


@pytest.mark.parametrize("key", ["herschel-bulkley", "casson", "power-law", "cross", "sisko"])
def test_the_right_family_is_chosen(key):
    """A yield stress or none, where the lowest rates show it; bench_coverage.py has more sets."""
    truth = example(key)
    rate = np.geomspace(0.01 if key == "cross" else 0.1, 1000.0, 20)
    right = [
        rheo.fit(simulated(seed, truth, rate)).best.record.has_yield_stress
        == truth.record.has_yield_stress
        for seed in range(20)
    ]
    assert np.mean(right) >= 0.9
