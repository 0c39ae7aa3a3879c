"""Readings: raw columns beside what follows from them."""

from __future__ import annotations

import re

import numpy as np
import pytest

from rheo import InputError, Readings, model
from rheo.geometry import geometry_records, make_geometry

CUP = make_geometry(
    "concentric-cylinders", inner_radius=0.0125, outer_radius=0.01356, length=0.0375, end_factor=1.1
)
PRODUCT = model("herschel-bulkley", yield_stress=12.0, consistency=4.2, flow_index=0.45)
SPEED = np.geomspace(0.1, 50.0, 6)
GEOMETRIES = {
    "concentric-cylinders": CUP.dimensions,
    "cone-plate": {"radius": 0.025, "angle": 0.03},
    "parallel-plate": {"radius": 0.02, "gap": 0.001},
    "six-speed": {},
    "slot": {"half_gap": 0.001, "width": 0.05, "length": 0.3},
    "spindle": {"rate_factor": 2.0, "stress_factor": 1e5},
    "tube": {"diameter": 0.005, "length": 0.6},
    "vane": {"diameter": 0.02, "height": 0.04},
}


def test_every_geometry_is_tried() -> None:
    assert set(GEOMETRIES) == set(geometry_records())


@pytest.mark.parametrize("key", GEOMETRIES)
def test_flow_curve_is_the_nominal_conversion(key: str) -> None:
    geometry = make_geometry(key, **GEOMETRIES[key])
    setting = geometry.setting_for_rate(PRODUCT, np.geomspace(1.0, 100.0, 5))
    reading = geometry.predict(PRODUCT, setting)
    readings = Readings(
        geometry=geometry, **{geometry.record.setting: setting, geometry.record.reading: reading}
    )
    rate, stress = geometry.nominal(setting, reading)
    curve = readings.flow_curve()
    assert curve.rate.tolist() == np.broadcast_to(rate, 5).tolist()
    assert curve.stress.tolist() == np.broadcast_to(stress, 5).tolist()
    assert readings.setting.tolist() == setting.tolist()
    assert readings.reading.tolist() == reading.tolist()


@pytest.mark.parametrize("key", GEOMETRIES)
@pytest.mark.parametrize("given", [("rate", "stress"), ("rate", "viscosity")])
def test_converted_values_lead_back_to_what_was_measured(key: str, given: tuple[str, str]) -> None:
    geometry = make_geometry(key, **GEOMETRIES[key])
    setting = geometry.setting_for_rate(PRODUCT, np.geomspace(1.0, 100.0, 5))
    reading = geometry.predict(PRODUCT, setting)
    rate, stress = geometry.nominal(setting, reading)
    columns = {"rate": rate, "stress": stress, "viscosity": stress / rate}
    readings = Readings(geometry=geometry, **{name: columns[name] for name in given})
    # The conversion and its undoing round differently.
    np.testing.assert_allclose(readings.setting, setting, rtol=1e-13)
    np.testing.assert_allclose(readings.reading, reading, rtol=1e-13)


def test_slip_and_entrance_loss_are_undone_too() -> None:
    tube = make_geometry(
        "tube", diameter=0.005, length=0.6, entrance_diameters=2.0, slip_coefficient=1e-5
    )
    flow = np.geomspace(1e-7, 1e-5, 5)
    pressure = tube.predict(PRODUCT, flow)
    rate, stress = tube.nominal(flow, pressure)
    readings = Readings(geometry=tube, rate=rate, stress=stress)
    np.testing.assert_allclose(readings.setting, flow, rtol=1e-12)
    np.testing.assert_allclose(readings.reading, pressure, rtol=1e-12)


def test_torque_in_percent_of_full_scale() -> None:
    readings = Readings(
        geometry=CUP, angular_speed=[1, 2, 3], torque_fraction=[0.1, 0.2, 0.5],
        full_scale_torque=0.05,
    )  # fmt: skip
    np.testing.assert_allclose(readings.reading, [0.005, 0.01, 0.025], rtol=1e-15)
    without = Readings(geometry=CUP, angular_speed=[1, 2], torque_fraction=[0.1, 0.2])
    with pytest.raises(InputError, match=r"torque is given in % of full scale; state full_scale_t"):
        _ = without.reading
    stated = without.with_geometry(CUP, full_scale_torque=0.02)
    np.testing.assert_allclose(stated.reading, [0.002, 0.004], rtol=1e-15)


def test_percent_without_full_scale_gives_way_to_the_instruments_own_stress() -> None:
    rate, stress = CUP.nominal(1.0, 0.01)
    readings = Readings(
        geometry=CUP, angular_speed=[1.0], torque_fraction=[0.2], rate=[rate], stress=[stress]
    )
    assert readings.reading[0] == pytest.approx(0.01, rel=1e-14)


def test_dial_degrees_of_the_six_speed_rotor_and_bob() -> None:
    # API RP 13B-1: 1.7023 1/s per rpm and 0.511 Pa per degree. The rate is printed with five
    # digits; the stress is so by definition.
    six_speed = make_geometry("six-speed")
    rpm, degrees = np.array([3.0, 300.0, 600.0]), np.array([8.0, 62.0, 95.0])
    readings = Readings(geometry=six_speed, angular_speed=rpm * np.pi / 30.0, dial=degrees)
    curve = readings.flow_curve()
    np.testing.assert_allclose(curve.rate, 1.7023 * rpm, rtol=3e-5)
    np.testing.assert_allclose(curve.stress, 0.511 * degrees, rtol=1e-14)
    softer = Readings(geometry=six_speed, angular_speed=rpm, dial=degrees, stress_per_degree=0.1022)
    np.testing.assert_allclose(softer.flow_curve().stress, 0.1022 * degrees, rtol=1e-14)


def test_a_diameter_and_a_length_for_every_reading_make_a_tube() -> None:
    readings = Readings(
        flow=[1e-6, 2e-6, 1e-6],
        pressure_drop=[1e4, 1.5e4, 2e3],
        tube_diameter=[0.01, 0.01, 0.02],
        tube_length=[1.0, 1.0, 2.0],
    )
    assert readings.geometry is not None
    assert readings.geometry.key == "tube"
    stress = readings.flow_curve().stress
    np.testing.assert_allclose(stress, [25.0, 37.5, 5.0], rtol=1e-14)
    part = readings.select([2])
    assert part.flow_curve().stress == pytest.approx([5.0], rel=1e-14)


def test_mean_velocity_in_a_tube() -> None:
    tube = make_geometry("tube", diameter=0.02, length=1.0)
    readings = Readings(geometry=tube, velocity=[0.5], pressure_drop=[1e4])
    assert readings.flow_curve().rate == pytest.approx([8 * 0.5 / 0.02], rel=1e-14)


def test_without_a_geometry_the_instruments_own_values_count() -> None:
    for columns in (
        {"rate": [1, 10], "stress": [3, 8]},
        {"rate": [1, 10], "viscosity": [3, 0.8]},
        {"stress": [3, 8], "viscosity": [3, 0.8]},
    ):
        curve = Readings(**columns).flow_curve()
        np.testing.assert_allclose(curve.rate, [1, 10], rtol=1e-15)
        np.testing.assert_allclose(curve.stress, [3, 8], rtol=1e-15)
    raw = Readings(angular_speed=[1, 2], torque=[1e-3, 2e-3], source="run.csv")
    with pytest.raises(InputError, match=r"run.csv: the columns are speed, torque; without a geom"):
        raw.flow_curve()
    with pytest.raises(InputError, match=r"run.csv: there is no geometry; state one"):
        _ = raw.setting
    flow = Readings(geometry=CUP, flow=[1, 2], pressure_drop=[1, 2])
    with pytest.raises(InputError, match=r"for the geometry concentric-cylinders there must be sp"):
        _ = flow.setting


def test_only_the_users_word_takes_a_reading_out() -> None:
    readings = Readings(geometry=CUP, angular_speed=SPEED, torque=CUP.predict(PRODUCT, SPEED))
    assert not readings.excluded.any()
    out = readings.with_excluded([0, 4])
    assert np.flatnonzero(out.excluded).tolist() == [0, 4]
    assert np.flatnonzero(out.flow_curve().excluded).tolist() == [0, 4]
    assert len(out.used()) == 4
    assert out.torque.tolist() == readings.torque.tolist()
    assert not out.with_excluded([]).excluded.any()
    assert np.flatnonzero(readings.with_excluded(SPEED > 10).excluded).size == (SPEED > 10).sum()
    for wrong, sentence in (
        ([6], "there is no reading 6; they are numbered 0 to 5"),
        ([-1], "give whole numbers from 0 on"),
        ([0.5], "give whole numbers from 0 on"),
        ([True, False], "the mask has 2 entries for 6 readings"),
    ):
        with pytest.raises(InputError, match=sentence):
            readings.with_excluded(wrong)


def test_select_keeps_columns_and_geometry_together() -> None:
    gaps = np.array([0.001, 0.001, 0.002])
    plates = make_geometry("parallel-plate", radius=0.02, gap=gaps)
    readings = Readings(
        geometry=plates, angular_speed=[1, 2, 3], torque=[1e-3, 2e-3, 3e-3], gap=gaps,
        branch=["up", "up", "down"], lines=[5, 6, 7], temperature=[293, 294, 295],
    )  # fmt: skip
    part = readings.select([False, True, True])
    assert part.geometry is not None
    assert part.geometry.dimensions["gap"].tolist() == [0.001, 0.002]
    assert part.geometry.dimensions["radius"].ndim == 0
    assert (part.lines.tolist(), part.branch.tolist()) == ([6, 7], ["up", "down"])
    assert part.present == ("angular_speed", "torque", "gap", "temperature", "branch")
    whole = readings.flow_curve()
    assert part.flow_curve().rate.tolist() == whole.rate[1:].tolist()
    assert "3 of readings" in repr(readings)


@pytest.mark.parametrize(
    ("columns", "sentence"),
    [
        ({}, "readings: there is no reading; there must be at least one"),
        ({"rate": [], "stress": []}, "readings: there is no reading"),
        ({"rate": [1, 2], "stress": [1]}, "the columns differ in length: rate 2, stress 1"),
        ({"rate": [1, -2]}, "shear rate: point 2 is -2 1/s; it must be above 0"),
        ({"torque": [0.0]}, "torque: point 1 is 0 N*m; it must be above 0"),
        ({"rate": [1], "time": [np.nan]}, "time: every time must be a finite number"),
        ({"rate": [1, 2], "geometry": CUP.replaced(length=[1.0, 2.0, 3.0])}, "have shape (3,) for"),
        ({"rate": [1], "full_scale_torque": 0.0}, "full_scale_torque is 0; it must be above 0"),
        ({"rate": [1], "density": -1.0}, "density is -1; it must be above 0"),
        ({"rate": [1], "source": "a.csv", "stress": [-1]}, "a.csv, shear stress: point 1 is -1"),
    ],
)
def test_refuses_in_one_sentence(columns: dict[str, object], sentence: str) -> None:
    with pytest.raises(InputError, match=re.escape(sentence)):
        Readings(**columns)


def test_time_may_start_anywhere() -> None:
    assert Readings(rate=[1, 2], time=[-3.0, 0.0]).time.tolist() == [-3.0, 0.0]
