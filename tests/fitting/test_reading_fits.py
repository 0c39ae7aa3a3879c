"""Fits in what was measured: torque at a speed, pressure drop at a flow."""

from __future__ import annotations

import json
import time
from pathlib import Path

import lmfit
import numpy as np
import pytest
from flow_curves import KEYS, example

import rheo
from rheo.errors import FitError, InputError
from rheo.fitting.gap_readings import GapRates, bob_stress
from rheo.fitting.reading_problem import ReadingProblem
from rheo.fitting.reading_slopes import RELATIONS
from rheo.fitting.reading_task import ENTRANCE, SLIP
from rheo.fitting.several import SeveralCurves
from rheo.fitting.tube_readings import tube_wall
from rheo.fitting.weighting import WEIGHTINGS
from rheo.geometry import geometry_records, make_geometry

DATA = Path(__file__).parent.parent / "data" / "check_values.json"
ROWS = {row["id"]: row for row in json.loads(DATA.read_text("utf-8"))["cases"]}
WIDE_GAP = {"inner_radius": 0.01, "outer_radius": 0.02, "length": 0.06}
SPEEDS = np.geomspace(0.05, 60.0, 30)
DIMENSIONS = {
    "concentric-cylinders": WIDE_GAP,
    "six-speed": {},
    "vane": {"diameter": 0.02, "height": 0.04},
    "cone-plate": {"radius": 0.02, "angle": 0.04},
    "parallel-plate": {"radius": 0.02, "gap": 0.001},
    "slot": {"half_gap": 0.001, "width": 0.1, "length": 1.0},
    "tube": {"diameter": 0.01, "length": 1.0},
    "spindle": {"rate_factor": 2.0, "stress_factor": 100.0},
}


def readings_of(geometry, setting, reading):
    name = geometry.record.setting, geometry.record.reading
    return rheo.Readings(geometry=geometry, **dict(zip(name, (setting, reading), strict=True)))


def wide_gap(key, noise=0.0, seed=1):
    geometry = make_geometry("concentric-cylinders", **WIDE_GAP)
    random = np.random.default_rng(seed)
    torque = geometry.predict(example(key), SPEEDS)
    return readings_of(geometry, SPEEDS, torque * (1.0 + noise * random.standard_normal(30)))


def test_a_wide_gap_is_fitted_where_nominal_conversion_misses():
    """Herschel-Bulkley fluid, R_i/R_o = 0.5, exact torques: both errors are stated."""
    readings = wide_gap("herschel-bulkley")
    truth = example("herschel-bulkley").parameters
    in_torque = rheo.fit(readings, "herschel-bulkley").best.parameters
    nominal = rheo.fit(readings.flow_curve(), "herschel-bulkley").best.parameters
    error = {
        name: (in_torque[name].value / float(value) - 1.0, nominal[name].value / float(value) - 1.0)
        for name, value in truth.items()
    }
    for name in truth:
        assert abs(error[name][0]) < 1e-9, f"in torque: {error}"
    # Regression: what the conversion as of a Newtonian fluid makes of the same torques.
    assert error["yield_stress"][1] == pytest.approx(-0.315, abs=0.005)
    assert error["consistency"][1] == pytest.approx(0.354, abs=0.005)


@pytest.mark.parametrize("key", sorted(DIMENSIONS))
def test_every_geometry_gives_the_curve_back(key):
    assert set(DIMENSIONS) == set(geometry_records())
    geometry = make_geometry(key, **DIMENSIONS[key])
    truth = example("herschel-bulkley")
    setting = geometry.setting_for_rate(truth, np.geomspace(0.05, 300.0, 14))
    readings = readings_of(geometry, setting, geometry.predict(truth, setting))
    found = rheo.fit(readings, ["herschel-bulkley", "power-law", "casson"]).best
    assert found.key == "herschel-bulkley"
    for name, value in truth.parameters.items():
        assert found.parameters[name].value == pytest.approx(float(value), rel=1e-5)
    np.testing.assert_allclose(found.rates, np.geomspace(0.05, 300.0, 14), rtol=1e-5)


@pytest.mark.parametrize("model_key", KEYS)
@pytest.mark.parametrize("key", sorted(RELATIONS))
def test_exact_derivatives_against_differences(key, model_key):
    geometry = make_geometry(key, **DIMENSIONS[key])
    extra, more = (), []
    if key == "tube":
        geometry = geometry.replaced(entrance_diameters=1.5, slip_coefficient=1e-5)
        extra, more = (ENTRANCE, SLIP), [1.5, 1e-5]
    truth = example(model_key)
    rate = np.geomspace(0.05, 300.0, 9)
    setting = geometry.setting_for_rate(truth, rate)
    reading = geometry.predict(truth, setting)
    problem = ReadingProblem(
        truth.record, geometry, setting, reading, WEIGHTINGS["relative"], 1.1 * rate, extra
    )
    values = np.array([[*(float(value) for value in truth), *more]])
    predicted, slopes = problem.sensitivity(values)
    np.testing.assert_allclose(predicted[0], reading, rtol=1e-9)
    _, differences = problem._by_differences(values)
    # Forward differences of a part in a million: worst where a fluid is about to slide as a block.
    largest = np.abs(differences).max(axis=-1, keepdims=True)
    np.testing.assert_allclose(slopes / largest, differences / largest, atol=1e-3)


@pytest.mark.parametrize("rough", [False, True])
@pytest.mark.parametrize("model_key", KEYS)
def test_the_quick_tube_is_the_exact_one(model_key, rough):
    """With slip, from rates half as high again; beside two rows one of which has no answer."""
    truth = example(model_key)
    geometry = make_geometry("tube", diameter=0.01, length=2.0, slip_coefficient=1e-5)
    rate = np.geomspace(0.5, 3000.0, 12)
    flow = geometry.setting_for_rate(truth, rate)
    apparent = 32.0 * flow / (np.pi * 0.01**3)
    model = truth.map(lambda value: np.broadcast_to(value, (2, 1)))
    wall = tube_wall(model, apparent, np.asarray(8e-3), 1.5 * rate, rough)
    _, stress = geometry.sheared(truth, flow)
    np.testing.assert_allclose(wall.stress[1], stress, rtol=2e-6 if rough else 1e-8)
    np.testing.assert_allclose(wall.rate[1], rate, rtol=2e-3)
    lost = np.stack([apparent, np.full(12, np.nan)])
    again = tube_wall(model, lost, np.asarray(8e-3), 1.5 * rate, rough)
    np.testing.assert_allclose(again.stress[0], wall.stress[0], rtol=1e-12)
    assert np.isnan(again.stress[1]).all()


@pytest.mark.parametrize("ratio", [1.01, 1.0847, 1.1, 1.32, 2.0, 30.0, np.inf])
@pytest.mark.parametrize("key", ["herschel-bulkley", "carreau", "ellis", "casson"])
def test_the_quick_gap_is_the_exact_one(key, ratio):
    truth = example(key)
    vane = make_geometry("vane", diameter=0.02, height=0.04)
    cup = make_geometry("concentric-cylinders", inner_radius=0.01, outer_radius=1.0, length=0.06)
    geometry = vane if np.isinf(ratio) else cup.replaced(outer_radius=0.01 * ratio)
    rate, stress = geometry.sheared(truth, SPEEDS)
    columns = [np.full((1, 1), float(value)) for value in truth]
    curves = SeveralCurves([(truth.record, columns, slice(0, 1))], 1)
    start = GapRates(1.5 * rate[np.newaxis])
    found, _, near = bob_stress(curves, SPEEDS, np.full(30, np.log(ratio)), start)
    np.testing.assert_allclose(found[0], stress, rtol=1e-8)
    np.testing.assert_allclose(near.bob[0], rate, rtol=1e-2)


def test_noisy_torques_end_at_the_minimum():
    """lmfit on the exact relation, started at the truth, finds nothing lower."""
    readings = wide_gap("herschel-bulkley", noise=0.02)
    found = rheo.fit(readings, "herschel-bulkley").best
    start = lmfit.Parameters()
    for name, value in example("herschel-bulkley").parameters.items():
        start.add(name, value=float(value), min=1e-6)

    def residual(values):
        model = rheo.model("herschel-bulkley", **values.valuesdict())
        return readings.geometry.predict(model, SPEEDS) / readings.torque - 1.0

    plain = lmfit.minimize(residual, start)
    assert found.weighted_ss <= plain.chisqr * (1.0 + 1e-9)
    for name, one in found.parameters.items():
        assert one.stderr == pytest.approx(plain.params[name].stderr, rel=1e-3)


def test_entrance_loss_and_slip_are_fitted_with_the_model():
    """tests/data/check_values.json, E-1-infer."""
    row = ROWS["E-1-infer"]
    tubes = {
        "tube_diameter": np.repeat(row["inputs"]["diameter"], 6),
        "tube_length": np.repeat(row["inputs"]["length"], 6),
    }
    flow, drop = np.ravel(row["inputs"]["Q"]), np.ravel(row["inputs"]["dP"])
    readings = rheo.Readings(**tubes, flow=flow, pressure_drop=drop)
    found = rheo.fit(readings, ["power-law", "herschel-bulkley"], entrance=True, slip=True).best
    names = {"e_diameters": "entrance_diameters", "beta": "slip_coefficient"}
    assert found.key == "power-law"
    for name, value in row["expected"].items():
        one = found.parameters[names.get(name, name)]
        assert one.value == pytest.approx(value, rel=1e-6)
        assert one.low <= value * (1.0 + 1e-9)
        assert one.high >= value * (1.0 - 1e-9)
    assert set(found.parameter_keys) >= set(names.values())
    assert found.jacobian([1.0]).shape == (1, 4)
    # Without them the readings of the three tubes do not agree.
    assert rheo.fit(readings, "power-law").best.rms_relative_error > 0.05


def test_entrance_and_slip_carry_their_doubt_when_readings_scatter():
    row = ROWS["E-1-infer"]
    random = np.random.default_rng(8)
    drop = np.ravel(row["inputs"]["dP"]) * (1.0 + 0.01 * random.standard_normal(18))
    readings = rheo.Readings(
        tube_diameter=np.repeat(row["inputs"]["diameter"], 6),
        tube_length=np.repeat(row["inputs"]["length"], 6),
        flow=np.ravel(row["inputs"]["Q"]),
        pressure_drop=drop,
    )
    found = rheo.fit(readings, "power-law", entrance=True, slip=True).best
    for name, value in {"entrance_diameters": 1.8, "slip_coefficient": 5e-5}.items():
        one = found.parameters[name]
        assert one.low < value < one.high
        assert 0.0 < one.stderr < 0.5 * value


def test_readings_without_a_geometry_are_a_flow_curve():
    truth = example("casson")
    rate = np.geomspace(0.1, 300.0, 12)
    found = rheo.fit(rheo.Readings(rate=rate, stress=truth.stress(rate))).best
    assert found.key == "casson"
    np.testing.assert_array_equal(found.observed, truth.stress(rate))


def test_excluded_readings_are_left_out():
    readings = wide_gap("casson", noise=0.01).with_excluded([0, 5])
    found = rheo.fit(readings, "casson").best
    assert found.observed.size == 28
    assert set(range(30)) - set(found.points.tolist()) == {0, 5}
    with pytest.raises(FitError, match="all readings are excluded"):
        rheo.fit(readings.with_excluded(np.arange(30)))


def test_few_readings_start_from_the_nominal_conversion():
    """Two speeds are too few for a flow curve without a model, not for a Newtonian fluid."""
    geometry = make_geometry("concentric-cylinders", **WIDE_GAP)
    speeds = np.array([1.0, 10.0])
    torque = geometry.predict(example("newtonian"), speeds)
    found = rheo.fit(readings_of(geometry, speeds, torque), "newtonian").best
    assert found.parameters["viscosity"].value == pytest.approx(0.8, rel=1e-10)


def test_slip_belongs_to_tubes():
    with pytest.raises(InputError, match="belong to tubes; the readings are from 'concentric"):
        rheo.fit(wide_gap("casson"), slip=True)


def test_eleven_models_in_a_wide_gap_take_tens_of_plain_fits():
    """Processor time against lmfit in the same run; about 18, and 40 allows for a busy machine.

    tests/benchmarks/bench_fit.py prints the ratio.
    """
    readings = wide_gap("herschel-bulkley", noise=0.02)
    curve = readings.flow_curve()
    curve_model = lmfit.Model(lambda rate, yield_stress, k, n: yield_stress + k * rate**n)

    def plain():
        start = curve_model.make_params(
            yield_stress={"value": 5.0, "min": 0.0},
            k={"value": 1.0, "min": 0.0},
            n={"value": 0.7, "min": 0.01, "max": 2.0},
        )
        curve_model.fit(curve.stress, start, rate=curve.rate, weights=1.0 / curve.stress)

    def seconds(work, count):
        work()
        taken = []
        for _ in range(count):
            begun = time.process_time()
            work()
            taken.append(time.process_time() - begun)
        return float(np.min(taken))

    assert seconds(lambda: rheo.fit(readings), 5) < 40.0 * seconds(plain, 15)
