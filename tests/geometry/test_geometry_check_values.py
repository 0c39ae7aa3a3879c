"""Every geometry against values computed independently with 30 digits (check_values.json)."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest

import rheo
from rheo.geometry import make_geometry, parallel_plate, slot, tube_flow

CASES = json.loads((Path(__file__).parents[1] / "data" / "check_values.json").read_text("utf-8"))[
    "cases"
]


def _rows(section: str, start: str = "") -> list[Any]:
    rows = [row for row in CASES if row["section"] == section and row["id"].startswith(start)]
    assert rows
    return [pytest.param(row, id=row["id"]) for row in rows]


def _close(found: Any, row: dict[str, Any], key: str) -> None:
    np.testing.assert_allclose(found, row["expected"][key], rtol=row["rel_tol"], err_msg=key)


def _model(row: dict[str, Any]) -> rheo.Model:
    return rheo.model(row["model"], **row["parameters"])


@pytest.mark.parametrize("row", _rows("concentric cylinders"))
def test_concentric_cylinders(row: dict[str, Any]) -> None:
    dimensions = dict(row["inputs"])
    speed = dimensions.pop("angular_speed")
    geometry = make_geometry("concentric-cylinders", **dimensions)
    model = _model(row)
    rate, stress = geometry.sheared(model, speed)
    _close(geometry.predict(model, speed), row, "torque")
    _close(rate, row, "bob_rate")
    _close(stress, row, "bob_stress")
    ratio = dimensions["inner_radius"] / dimensions["outer_radius"]
    _close(stress * ratio**2, row, "cup_stress")
    newtonian, _ = geometry.nominal(speed, 0.0, "bob")
    _close(rate / newtonian, row, "gamma_i_over_newtonian")
    if "fully_sheared" in row["expected"]:
        assert (float(stress * ratio**2) > float(model.yield_stress)) == row["expected"][
            "fully_sheared"
        ]
    assert float(geometry.setting_for_rate(model, rate)) == pytest.approx(speed, rel=1e-12)


@pytest.mark.parametrize("row", _rows("plates"))
def test_parallel_plates(row: dict[str, Any]) -> None:
    dimensions = dict(row["inputs"])
    speed = dimensions.pop("angular_speed")
    geometry = make_geometry("parallel-plate", **dimensions)
    model = _model(row)
    torque = geometry.predict(model, speed)
    rate, stress = geometry.sheared(model, speed)
    _close(torque, row, "torque")
    _close(rate, row, "rim_rate")
    _close(stress, row, "rim_stress")
    _close(geometry.nominal(speed, torque)[1], row, "tau_apparent_newtonian")
    _close(parallel_plate.torque_slope(model, rate), row, "dlnM_dlng")


@pytest.mark.parametrize("row", _rows("laminar slot"))
def test_slot(row: dict[str, Any]) -> None:
    half_gap, velocity = row["inputs"]["half_gap"], row["inputs"]["velocity"]
    length, width = 0.7, 0.5
    geometry = make_geometry("slot", half_gap=half_gap, width=width, length=length)
    model = _model(row)
    flow = velocity * 2.0 * half_gap * width
    rate, stress = geometry.sheared(model, flow)
    pressure_drop = geometry.predict(model, flow)
    _close(pressure_drop / length, row, "pressure_gradient")
    _close(rate, row, "wall_rate")
    _close(stress, row, "wall_stress")
    _close(slot.velocity_ratio(model, rate), row, "velocity_ratio")
    nominal_rate, nominal_stress = geometry.nominal(flow, pressure_drop)
    _close(nominal_rate, row, "nominal_rate")
    _close(nominal_stress, row, "wall_stress")
    if "plug_fraction" in row["expected"]:
        _close(model.yield_stress / stress, row, "plug_fraction")


@pytest.mark.parametrize("row", _rows("laminar pipe"))
def test_tube_without_corrections(row: dict[str, Any]) -> None:
    diameter, velocity = row["inputs"]["diameter"], row["inputs"]["velocity"]
    geometry = make_geometry("tube", diameter=diameter, length=3.0)
    model = _model(row)
    flow = velocity * np.pi * diameter**2 / 4.0
    rate, stress = geometry.sheared(model, flow)
    pressure_drop = geometry.predict(model, flow)
    _close(pressure_drop / 3.0, row, "pressure_gradient")
    _close(rate, row, "wall_rate")
    _close(stress, row, "wall_stress")
    _close(geometry.nominal(flow, pressure_drop)[0], row, "nominal_rate")
    _close(tube_flow.velocity_ratio(model, rate), row, "velocity_ratio")
    _close(tube_flow.kinetic_energy_factor(model, rate), row, "kinetic_energy_factor")
    _close(tube_flow.local_flow_index(8.0 * velocity / diameter, rate), row, "local_flow_index")


def _capillary(row: dict[str, Any], **corrections: float) -> rheo.Geometry:
    diameter, length = (np.asarray(row["inputs"][key])[:, None] for key in ("diameter", "length"))
    return make_geometry("tube", diameter=diameter, length=length, **corrections)


@pytest.mark.parametrize("row", _rows("tube viscometer", "E-1"))
def test_tube_with_entrance_loss_and_slip(row: dict[str, Any]) -> None:
    model = rheo.model("power-law", consistency=8.0, flow_index=0.45)
    geometry = _capillary(row, entrance_diameters=1.8, slip_coefficient=5e-5)
    flow, pressure_drop = np.asarray(row["inputs"]["Q"]), np.asarray(row["inputs"]["dP"])
    np.testing.assert_allclose(geometry.predict(model, flow), pressure_drop, rtol=1e-8)
    if "wall_rate" not in row["expected"]:
        return
    rate, stress = geometry.sheared(model, flow)
    _close(rate, row, "wall_rate")
    _close(stress, row, "wall_stress")
    _close(5e-5 * stress, row, "slip_velocity")
    nominal_rate, nominal_stress = geometry.nominal(flow, pressure_drop)
    _close(nominal_rate, row, "apparent_rate_noslip")
    _close(nominal_stress, row, "wall_stress")
    points = geometry.flow_points(flow, pressure_drop)
    _close(points.rate, row, "wall_rate")
    _close(points.local_index, row, "local_flow_index")


@pytest.mark.parametrize("row", _rows("tube viscometer", "E-3"))
def test_tubes_of_four_lengths(row: dict[str, Any]) -> None:
    model = rheo.model("power-law", consistency=2500.0, flow_index=0.5)
    length = np.asarray(row["inputs"]["length"])[:, None]
    geometry = make_geometry(
        "tube", diameter=row["inputs"]["diameter"], length=length, entrance_diameters=3.4
    )
    flow = np.asarray(row["inputs"]["Q"])
    np.testing.assert_allclose(geometry.predict(model, flow), row["inputs"]["dP"], rtol=1e-8)
    rate, stress = geometry.sheared(model, flow)
    np.testing.assert_allclose(rate, row["expected"]["wall_rate"] * np.ones((4, 1)), rtol=1e-8)
    np.testing.assert_allclose(stress, row["expected"]["wall_stress"] * np.ones((4, 1)), rtol=1e-8)
