"""Readings as the case says: files, text in the case, branch, points left out, sets joined."""

import io

import numpy as np
import pytest
import xlsxwriter

import rheo
from rheo.case import case_from_text, case_text, load_case, save_case
from rheo.case.join import joined
from rheo.case.load_readings import all_readings, branch_of, readings_of, weighting_of
from rheo.errors import CaseError, InputError
from rheo.fitting import Instrument

TABLE = """\
Temperature [°C],Branch,Speed [rpm],Torque [mN.m]
20,up,2,1.5
20,up,20,2.4
20,up,200,4.8
20,down,100,3.8
20,down,10,2.0
20,down,5,1.7
"""
CUP = 'geometry = { kind = "concentric-cylinders", inner_radius = "14 mm", outer_radius = "18 mm" }'
CUP = CUP.replace(" }", ', length = "42 mm" }')


def case_text_with(readings):
    return f"""
schema = 1
[product]
density = "1100 kg/m3"
{readings}
[duty]
flow = "5 m3/h"
[[line.discharge]]
part = "pipe"
length = "30 m"
size = "ISO 2037 51"
"""


def case_with(readings, folder=None):
    return case_from_text(case_text_with(readings), folder=folder)


def embedded_block(table=TABLE, more=""):
    return f"[[readings]]\n{CUP}\n{more}\ntext = '''\n{table}'''\n"


def test_text_in_the_case_is_read_as_a_file_would_be(tmp_path):
    (tmp_path / "table.csv").write_text(TABLE, "utf-8")
    inside = readings_of(case_with(embedded_block()))
    beside = readings_of(case_with(f'[[readings]]\nfile = "table.csv"\n{CUP}', tmp_path))
    np.testing.assert_array_equal(inside.torque, beside.torque)
    assert inside.geometry.key == beside.geometry.key == "concentric-cylinders"
    assert (inside.source, beside.source) == ("readings text", "table.csv")
    assert float(inside.density) == 1100


def test_what_the_case_says_wins():
    more = (
        'temperature = "30 °C"\nfull_scale_torque = "10 mN.m"\nexclude = [1, 6]\n'
        'particle_diameter = "0.2 mm"'
    )
    readings = readings_of(case_with(embedded_block(more=more)))
    np.testing.assert_allclose(readings.temperature, 303.15)
    assert readings.full_scale_torque == pytest.approx(0.010)
    assert readings.particle_diameter == pytest.approx(2e-4)
    assert np.flatnonzero(readings.excluded).tolist() == [0, 5]


def test_dimensions_may_come_from_columns():
    table = "Diameter [mm],Length [m],Flow [L/min],Pressure drop [kPa]\n" + "".join(
        f"{size},1.2,{flow},{10 * flow}\n" for size in (8, 12) for flow in (1, 2, 4)
    )
    case = case_with(f"[readings]\ngeometry = {{ kind = 'tube' }}\ntext = '''\n{table}'''\n")
    geometry = readings_of(case).geometry
    np.testing.assert_allclose(geometry.dimensions["diameter"], [0.008] * 3 + [0.012] * 3)


@pytest.mark.parametrize(
    ("more", "sentence"),
    [
        ("exclude = [9]", "readings exclude: there is no reading 9 in readings text; they are"),
        ('columns = { torque = "Drag" }', "'Drag'"),
        ('sheet = "One"', "it is a text file, which has no sheet 'One'"),
        ('units = { torque = "parsec" }', "parsec"),
    ],
)
def test_complaints(more, sentence):
    with pytest.raises(InputError) as caught:
        readings_of(case_with(embedded_block(more=more)))
    assert sentence in str(caught.value)


def test_a_missing_file_is_named(tmp_path):
    case = case_with("[readings]\nfile = 'none.csv'", tmp_path)
    with pytest.raises(InputError, match=r"none\.csv"):
        readings_of(case)
    with pytest.raises(CaseError, match="this case has no folder to find it in"):
        readings_of(case_with("[readings]\nfile = 'none.csv'"))


def test_branches():
    readings = readings_of(case_with(embedded_block()))
    assert branch_of(readings, "both") is readings
    assert len(branch_of(readings, "up")) == 3
    assert set(branch_of(readings, "down").branch) == {"down"}
    with pytest.raises(CaseError, match="found 'sideways'; it must be up, down, both"):
        branch_of(readings, "sideways")
    rising = rheo.Readings(rate=[1, 2, 3], stress=[1, 2, 3], branch=["up"] * 3, source="one.csv")
    with pytest.raises(CaseError, match="sweep is 'down', and only up was found"):
        branch_of(rising, "down")
    plain = rheo.Readings(rate=[1, 2, 3], stress=[1, 2, 3])
    with pytest.raises(CaseError, match="sweep is 'up', and no branch at all was found"):
        branch_of(plain, "up")


def test_weightings():
    readings = readings_of(case_with(embedded_block(more='full_scale_torque = "10 mN.m"')))
    assert weighting_of("absolute", 0, 0, readings) == "absolute"
    assert weighting_of("instrument", 1, 0.5, readings) == Instrument(1, 0.5, 0.010)
    plain = rheo.Readings(rate=[1, 2, 3], stress=[1, 2, 3])
    with pytest.raises(CaseError, match="needs a geometry and the torque at full scale"):
        weighting_of("instrument", 1, 0.5, plain)


def test_sets_of_one_kind_are_joined():
    case = case_with(embedded_block() + embedded_block().replace("14 mm", "13 mm"))
    sets = all_readings(case)
    both = joined(sets)
    assert len(both) == 12
    np.testing.assert_array_equal(both.torque, np.tile(sets[0].torque, 2))
    np.testing.assert_allclose(both.geometry.dimensions["inner_radius"], [0.014] * 6 + [0.013] * 6)
    assert both.geometry.dimensions["length"].shape == ()
    np.testing.assert_allclose(both.flow_curve().rate[6:], sets[1].flow_curve().rate, rtol=1e-14)
    assert joined(sets[:1]) is sets[0]


def test_sets_of_different_kinds_are_refused():
    plain = rheo.Readings(rate=[1, 2, 3], stress=[1, 2, 3])
    sets = all_readings(case_with(embedded_block()))
    with pytest.raises(CaseError, match="different geometries \\(concentric-cylinders, none\\)"):
        joined([*sets, plain])
    scaled = embedded_block(more='full_scale_torque = "10 mN.m"')
    with pytest.raises(CaseError, match="full_scale_torque differs between the sets"):
        joined(all_readings(case_with(embedded_block() + scaled)))


def workbook():
    made = io.BytesIO()
    with xlsxwriter.Workbook(made, {"in_memory": True}) as book:
        sheet = book.add_worksheet("Run, one")
        sheet.write_row(0, 0, ["geometry: cone-plate, radius 25 mm, angle 2 deg"])
        sheet.write_row(1, 0, ["full_scale_torque: 5 mN.m"])
        sheet.write_row(3, 0, ["Speed [rpm]", 'Torque "raw" [mN.m]'])
        for row in range(4):
            sheet.write_row(4 + row, 0, [2.0**row / 3, 0.1 * 1.6**row])
    return made.getvalue()


@pytest.mark.parametrize("name", ["table.csv", "book.xlsx"])
def test_a_case_with_its_readings_embedded_travels_alone(tmp_path, name):
    (tmp_path / "table.csv").write_bytes(TABLE.replace("\n", "\r\n").encode("utf-16"))
    (tmp_path / "book.xlsx").write_bytes(workbook())
    geometry = CUP if name == "table.csv" else 'sheet = "Run, one"'
    text = case_text_with(f'[[readings]]\nfile = "{name}"\n{geometry}\nexclude = [2]\n')
    (tmp_path / "case.toml").write_text(text, "utf-8")
    case = load_case(tmp_path / "case.toml")
    (tmp_path / "alone").mkdir()
    save_case(case, tmp_path / "alone" / "case.toml", embed=True)
    alone = load_case(tmp_path / "alone" / "case.toml")
    assert alone.readings[0].file is None
    first, second = readings_of(case), readings_of(alone)
    assert first.present == second.present
    for key in first.present:
        if key not in ("branch", "block"):
            np.testing.assert_array_equal(getattr(first, key), getattr(second, key), key)
    assert repr(first.geometry) == repr(second.geometry)
    assert first.full_scale_torque == second.full_scale_torque
    np.testing.assert_array_equal(first.excluded, second.excluded)
    assert case_from_text(case_text(alone)) == alone
