"""Lines above a table in which a file states its geometry and its sample."""

from __future__ import annotations

import re

import numpy as np
import pytest

from rheo import InputError, Readings, read_readings
from rheo.geometry import geometry_records, make_geometry
from rheo.readings.stated import geometry_from_text

SPEEDS = "speed [rpm];torque [%]\n1;10\n2;20\n3;30\n"
FLOWS = "flow [L/h];pressure drop [kPa]\n1;10\n2;20\n3;30\n"
CUP = "concentric-cylinders, inner_radius 12.5 mm, outer_radius 13.56 mm, length 37.5 mm"


def read(text: str, **arguments: object) -> Readings:
    return read_readings(text.encode(), name="made-up.csv", **arguments)


@pytest.mark.parametrize(
    "lines",
    [
        f"# geometry: {CUP}, end_factor 1.1\n# full_scale_torque: 50 mN.m\n",
        f"geometry = {CUP}, end_factor = 1.1\nfull_scale_torque = 50 mN.m\n",
        f'"# Geometry: {CUP}; end factor: 1.1"\n"# Full scale torque: 0.05 N.m"\n',
        f"geometry;{CUP.replace(', ', ';')};end_factor 1.1\nfull-scale-torque;50;mN.m\n",
        f"% geometry: {CUP}, end_factor 1.1;;;\n// full_scale_torque: 50 mN.m;;;\n\n",
    ],
)
def test_geometry_and_full_scale(lines: str) -> None:
    readings = read(lines + SPEEDS)
    geometry = readings.geometry
    assert geometry is not None
    assert geometry.key == "concentric-cylinders"
    values = {name: float(value) for name, value in geometry.dimensions.items()}
    assert values == pytest.approx(
        {"inner_radius": 0.0125, "outer_radius": 0.01356, "length": 0.0375, "end_factor": 1.1},
        rel=1e-15,
    )
    np.testing.assert_allclose(readings.reading, [0.005, 0.01, 0.015], rtol=1e-15)
    assert readings.cautions == ()


def test_decimal_commas_are_those_of_the_file() -> None:
    text = (
        "# geometry: tube, diameter 10,5 mm, length 1,2 m\n# temperature: 20,5 °C\n"
        "# density: 1050,5 kg/m3\n# particle_diameter: 0,3 mm\nflow [L/h];pressure drop [kPa]\n"
        "1,5;10\n2;20\n3;30\n"
    )
    readings = read(text)
    assert readings.geometry is not None
    assert float(readings.geometry.dimensions["diameter"]) == pytest.approx(0.0105, rel=1e-15)
    np.testing.assert_allclose(readings.temperature, 293.65, rtol=1e-15)
    assert readings.density == 1050.5
    assert readings.particle_diameter == pytest.approx(3e-4, rel=1e-15)


def test_columns_complete_the_geometry() -> None:
    tube = read(
        "# geometry: tube, length 1 m, entrance_diameters 2\n"
        "flow [L/h];pressure drop [kPa];D [mm]\n1;10;5\n2;20;5\n3;30;8\n"
    )
    assert tube.geometry is not None
    np.testing.assert_allclose(tube.geometry.dimensions["diameter"], [0.005, 0.005, 0.008])
    assert float(tube.geometry.dimensions["entrance_diameters"]) == 2.0
    plates = read(
        "# geometry: parallel-plate, radius 20 mm\nspeed [rpm];torque [mN.m];gap [mm]\n"
        "1;1;0.5\n2;2;0.5\n3;3;1\n"
    )
    assert plates.geometry is not None
    np.testing.assert_allclose(plates.geometry.dimensions["gap"], [5e-4, 5e-4, 1e-3])


def test_each_block_may_have_its_own_tube() -> None:
    text = "".join(
        f"# geometry: tube, diameter {diameter} mm, length 1 m\n# temperature: 20 °C\n{FLOWS}\n"
        for diameter in (5, 8)
    )
    readings = read(text)
    assert readings.geometry is not None
    np.testing.assert_allclose(
        readings.geometry.dimensions["diameter"], np.repeat([0.005, 0.008], 3), rtol=1e-15
    )
    assert readings.geometry.dimensions["length"].ndim == 0
    np.testing.assert_allclose(readings.temperature, 293.15, rtol=1e-15)
    mixed = text.replace("tube, diameter 8 mm", "slot, half_gap 1 mm, width 5 cm")
    with pytest.raises(
        InputError, match=r"line 1: the blocks have different geometries \(slot, tu"
    ):
        read(mixed)
    assert read(mixed, block=2).geometry.key == "slot"


def test_each_block_may_have_its_own_temperature() -> None:
    text = "".join(
        f"# temperature: {temperature} °C\nrate [1/s];stress [Pa]\n1;10\n2;20\n\n"
        for temperature in (20, 40)
    )
    np.testing.assert_allclose(read(text).temperature, [293.15, 293.15, 313.15, 313.15])
    density = text.replace("temperature: 20 °C", "density: 1000 kg/m3")
    assert read(density).density == 1000.0
    with pytest.raises(InputError, match="density is stated differently for different blocks"):
        read(density.replace("temperature: 40 °C", "density: 1100 kg/m3"))


def test_the_users_geometry_wins() -> None:
    by_text = read(
        f"# geometry: {CUP}\n" + SPEEDS, geometry="cone-plate, radius 25 mm, angle 2 deg"
    )
    assert by_text.geometry is not None
    assert by_text.geometry.key == "cone-plate"
    assert float(by_text.geometry.dimensions["angle"]) == pytest.approx(np.pi / 90, rel=1e-14)
    made = make_geometry("vane", diameter=0.02, height=0.04)
    assert read(SPEEDS, geometry=made).geometry is made
    assert (
        read(f"# full_scale_torque: 1 N.m\n{SPEEDS}", full_scale_torque=0.5).full_scale_torque
        == 0.5
    )


def test_conversion_by_name() -> None:
    table = "rate [1/s];stress [Pa]\n1;10\n2;20\n3;30\n"
    mean = read(f"# geometry: {CUP}\n" + table)
    bob = read(f"# geometry: {CUP}\n# nominal_form: bob\n" + table)
    assert bob.nominal_form == "bob"
    narrowing = (0.0125 / 0.01356) ** 2
    ratio = mean.reading / bob.reading
    np.testing.assert_allclose(ratio, 2.0 / (1.0 + narrowing), rtol=1e-13)


def test_other_programs_lines_are_left_alone() -> None:
    readings = read(
        "Geometry: made-up cup 3\nTemperature: ambient\nDensity: n/a\nGeometry type: none\n" + FLOWS
    )
    assert readings.geometry is None
    assert [caution.code for caution in readings.cautions] == ["line-not-understood"] * 3
    assert readings.cautions[0].place == "made-up.csv, line 1"
    assert "unknown geometry 'made-up-cup-3'" in readings.cautions[0].sentence


@pytest.mark.parametrize(
    ("line", "sentence"),
    [
        ("geometry: cup", "made-up.csv, line 1: unknown geometry 'cup'"),
        ("geometry: tube", "made-up.csv, line 1: dimension 'diameter' is missing"),
        (
            "geometry: tube, bore 1 mm",
            "made-up.csv, line 1: unknown dimension 'bore' of tube; it t",
        ),
        (
            "geometry: tube, diameter",
            "made-up.csv, line 1: 'diameter' is no dimension with its val",
        ),
        (
            "geometry: tube, diameter 1 s, length 1 m",
            "made-up.csv, line 1, diameter: unit 's' does",
        ),
        (
            "geometry: tube, diameter 0 mm, length 1 m",
            "made-up.csv, line 1: diameter is 0; it must",
        ),
        ("full_scale_torque: 5 Pa", "made-up.csv, line 1, full_scale_torque: unit 'Pa' does not"),
        (
            "full_scale_torque: much",
            "made-up.csv, line 1, full_scale_torque: 'much' is not a number",
        ),
        ("density: -5 kg/m3", "made-up.csv, line 1, density: it is -5 kg/m3; it must be above 0"),
        (
            "temperature: -300 °C",
            "made-up.csv, line 1, temperature: it is -300 °C; it must be abov",
        ),
        ("temperature: 1.2.3", "made-up.csv, line 1, temperature: '1.2.3' is not a temperature"),
        (
            "temperature: warm",
            "made-up.csv, line 1, temperature: 'warm' is not a temperature; writ",
        ),
    ],
)
def test_slips_in_marked_lines(line: str, sentence: str) -> None:
    with pytest.raises(InputError, match="^" + re.escape(sentence)):
        read(f"# {line}\n" + FLOWS)


def test_every_geometry_can_be_written() -> None:
    for key, record in geometry_records().items():
        parts = [
            f"{one.key} {0.5 * (one.lower + min(one.upper, 1.0)):.6g}"
            f"{'' if one.unit == '-' else ' ' + one.unit}"
            for one in record.dimensions
        ]
        stated = geometry_from_text(", ".join([key, *parts]))
        assert stated.geometry_key == key
        assert list(stated.dimensions) == list(record.dimension_keys)
