"""Bagley's and Mooney's plots on exact readings."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest

import rheo
from rheo import InputError
from rheo.geometry import make_geometry
from rheo.geometry.classic_plots import bagley_lines, gap_lines, mooney_lines

ROWS = {
    row["id"]: row
    for row in json.loads(
        (Path(__file__).parents[1] / "data" / "check_values.json").read_text("utf-8")
    )["cases"]
}


def test_bagley_row() -> None:
    row = ROWS["E-3"]
    aspect = np.asarray(row["inputs"]["length"]) / row["inputs"]["diameter"]
    lines = bagley_lines(aspect, np.asarray(row["inputs"]["dP"]).T)
    np.testing.assert_allclose(lines.entrance_diameters, row["expected"]["e_diameters"], rtol=1e-8)
    np.testing.assert_allclose(lines.wall_stress, row["expected"]["wall_stress"], rtol=1e-8)


def test_mooney_row() -> None:
    row = ROWS["E-1"]
    diameter = np.asarray(row["inputs"]["diameter"])
    nominal = 32.0 * np.asarray(row["inputs"]["Q"]).T / (np.pi * diameter**3)
    lines = mooney_lines(diameter, nominal)
    np.testing.assert_allclose(lines.slip_velocity, row["expected"]["slip_velocity"][0], rtol=1e-8)
    np.testing.assert_allclose(lines.rate, row["expected"]["apparent_rate_noslip"][0], rtol=1e-8)


def test_plates_of_three_gaps() -> None:
    gap = np.array([0.0005, 0.001, 0.002])
    rate, slip = np.array([[3.0], [40.0]]), np.array([[1e-4], [2e-3]])
    lines = gap_lines(gap, rate + 2.0 * slip / gap)
    np.testing.assert_allclose(lines.rate, rate[:, 0], rtol=1e-12)
    np.testing.assert_allclose(lines.slip_velocity, slip[:, 0], rtol=1e-12)


def test_the_lines_agree_with_the_tube_relation() -> None:
    model = rheo.model("casson", yield_stress=8.0, casson_viscosity=1.0)
    diameter = np.array([0.002, 0.004, 0.008])
    tubes = make_geometry("tube", diameter=diameter, length=0.2, slip_coefficient=3e-5)
    flow = tubes.setting_for_rate(model, 100.0)
    lines = mooney_lines(diameter, 32.0 * flow / (np.pi * diameter**3))
    assert float(lines.slip_velocity) == pytest.approx(3e-5 * float(model.stress(100.0)), rel=1e-9)


def test_one_size_is_refused() -> None:
    with pytest.raises(InputError, match="there is only one diameter; a line needs two"):
        mooney_lines([0.002, 0.002], [30.0, 30.0])
    with pytest.raises(InputError, match="there is only one length over diameter"):
        bagley_lines([10.0], [1e5])
    # Two diameters that differ in the fifth digit are one diameter measured twice; a tenth of a
    # per cent makes them two, whatever the unit they are written in.
    for size in (2e-3, 2.0, 2e3):
        with pytest.raises(InputError, match="there is only one diameter"):
            mooney_lines([size, 1.00001 * size], [30.0, 30.0])
        assert np.isfinite(mooney_lines([size, 1.001 * size], [30.0, 30.0]).rate)
    with pytest.raises(InputError, match="there is only one gap"):
        gap_lines([[0.001, 0.002], [0.001, 0.001]], [[30.0, 20.0], [30.0, 30.0]])
