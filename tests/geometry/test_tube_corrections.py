"""Entrance loss and wall slip from tube readings, without a model."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from flow_curves import KEYS, example

import rheo
from rheo import Geometry, InputError
from rheo.geometry import make_geometry
from rheo.geometry.tube_corrections import find_tube_corrections

ROWS = {
    row["id"]: row
    for row in json.loads(
        (Path(__file__).parents[1] / "data" / "check_values.json").read_text("utf-8")
    )["cases"]
    if row["section"] == "tube viscometer"
}


def _tubes(row: dict[str, Any], **corrections: float) -> Geometry:
    diameter = np.atleast_1d(row["inputs"]["diameter"])[:, None]
    length = np.atleast_1d(row["inputs"]["length"])[:, None]
    return make_geometry("tube", diameter=diameter, length=length, **corrections)


def test_bagley_row() -> None:
    row = ROWS["E-3"]
    found = find_tube_corrections(_tubes(row), row["inputs"]["Q"], row["inputs"]["dP"], slip=False)
    assert found.entrance_diameters.value == pytest.approx(
        row["expected"]["e_diameters"], rel=row["rel_tol"]
    )
    assert found.slip_coefficient.value == 0.0
    assert not found.slip_coefficient.found
    points = found.geometry.flow_points(row["inputs"]["Q"], row["inputs"]["dP"])
    for line in range(4):
        np.testing.assert_allclose(points.rate[line], row["expected"]["wall_rate"], rtol=1e-8)
        np.testing.assert_allclose(points.stress[line], row["expected"]["wall_stress"], rtol=1e-8)


def test_mooney_row() -> None:
    row = ROWS["E-1"]
    tubes = _tubes(row, entrance_diameters=row["inputs"]["e_diameters"])
    found = find_tube_corrections(tubes, row["inputs"]["Q"], row["inputs"]["dP"], entrance=False)
    assert found.slip_coefficient.value == pytest.approx(row["expected"]["beta"], rel=1e-8)
    assert found.entrance_diameters.value == 1.8
    points = found.geometry.flow_points(row["inputs"]["Q"], row["inputs"]["dP"])
    np.testing.assert_allclose(points.rate, row["expected"]["wall_rate"], rtol=1e-7)
    np.testing.assert_allclose(points.local_index, 0.45, rtol=1e-7)


def test_both_at_once() -> None:
    row = ROWS["E-1-infer"]
    found = find_tube_corrections(_tubes(row), row["inputs"]["Q"], row["inputs"]["dP"])
    expected = row["expected"]
    assert found.entrance_diameters.value == pytest.approx(expected["e_diameters"], rel=1e-6)
    assert found.slip_coefficient.value == pytest.approx(expected["beta"], rel=1e-6)
    assert found.scatter < 1e-10


def _noisy(seed: int) -> tuple[Geometry, np.ndarray, np.ndarray]:
    model = rheo.model("power-law", consistency=8.0, flow_index=0.45)
    diameter = np.repeat([0.001, 0.002, 0.004, 0.004], 8)
    length = np.repeat([0.05, 0.05, 0.05, 0.20], 8)
    tubes = make_geometry("tube", diameter=diameter, length=length)
    true = tubes.replaced(entrance_diameters=1.8, slip_coefficient=5e-5)
    flow = true.setting_for_rate(model, np.tile(np.geomspace(50.0, 3000.0, 8), 4))
    noise = np.random.default_rng(seed).normal(0.0, 0.01, flow.shape)
    return tubes, flow, true.predict(model, flow) * np.exp(noise)


def test_intervals_hold_the_truth_as_often_as_they_say() -> None:
    held = np.zeros(2)
    for seed in range(60):
        found = find_tube_corrections(*_noisy(seed))
        entrance, slip = found.entrance_diameters, found.slip_coefficient
        held += [entrance.low <= 1.8 <= entrance.high, slip.low <= 5e-5 <= slip.high]
        assert found.scatter == pytest.approx(0.01, rel=0.5)
        assert -1.0 < found.correlation < 0.0
    assert np.all(held >= 52)


@pytest.mark.parametrize("key", KEYS)
def test_round_trip_returns_the_true_curve(key: str) -> None:
    """Curved flow curves too come back within 0.1 % of stress once both losses are found."""
    model = example(key)
    diameter = np.repeat([0.002, 0.004, 0.008, 0.008], 15)
    length = np.repeat([0.1, 0.1, 0.1, 0.5], 15)
    tubes = make_geometry("tube", diameter=diameter, length=length)
    true = tubes.replaced(entrance_diameters=2.5, slip_coefficient=2e-5)
    flow = true.setting_for_rate(model, np.tile(np.geomspace(30.0, 1000.0, 15), 4))
    pressure_drop = true.predict(model, flow)
    found = find_tube_corrections(tubes, flow, pressure_drop)
    points = found.geometry.flow_points(flow, pressure_drop)
    assert np.max(np.abs(model.stress(points.rate) / points.stress - 1.0)) < 1e-3
    assert found.entrance_diameters.value == pytest.approx(2.5, rel=0.01)
    # A fluid that hardly slips beside its own shear says little of its slip.
    slid = 8.0 * 2e-5 * points.stress / diameter
    share = float(np.max(slid / points.rate))
    assert found.slip_coefficient.value == pytest.approx(2e-5, rel=1e-3 + 5e-5 / share)


def test_no_slip_is_found_where_there_is_none() -> None:
    model = example("herschel-bulkley")
    tubes = make_geometry("tube", diameter=np.repeat([0.002, 0.004, 0.008], 10), length=0.3)
    flow = tubes.setting_for_rate(model, np.tile(np.geomspace(3.0, 300.0, 10), 3))
    noise = np.random.default_rng(5).normal(0.0, 0.01, flow.shape)
    found = find_tube_corrections(
        tubes, flow, tubes.predict(model, flow) * np.exp(noise), entrance=False
    )
    assert found.slip_coefficient.low < 0.0 or found.slip_coefficient.value == 0.0


def test_what_is_refused() -> None:
    tubes, flow, pressure_drop = _noisy(1)
    one = make_geometry("tube", diameter=0.002, length=0.1)
    with pytest.raises(InputError, match="all tubes have the same length over diameter"):
        find_tube_corrections(one, flow, pressure_drop, slip=False)
    with pytest.raises(InputError, match="all tubes have the same diameter; slip needs two"):
        find_tube_corrections(one, flow, pressure_drop, entrance=False)
    cone = make_geometry("cone-plate", radius=0.02, angle=0.02)
    with pytest.raises(InputError, match="not from 'cone-plate'"):
        find_tube_corrections(cone, flow, pressure_drop)
    with pytest.raises(InputError, match="a flow or pressure drop is not above 0"):
        find_tube_corrections(tubes, -flow, pressure_drop)
    few = make_geometry("tube", diameter=[0.001, 0.002, 0.004, 0.008], length=0.1)
    with pytest.raises(InputError, match="there are 4 readings; this needs 5 or more"):
        find_tube_corrections(few, flow[:4], pressure_drop[:4])
    mixed = tubes.replaced(entrance_diameters=np.linspace(0.0, 1.0, 32))
    with pytest.raises(InputError, match="must be one number for all tubes"):
        find_tube_corrections(mixed, flow, pressure_drop, entrance=False)
