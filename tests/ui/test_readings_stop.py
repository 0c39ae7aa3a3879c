"""The readings stop: upload, paste, columns and units, geometry, screening, leaving out."""

from __future__ import annotations

import io
import zipfile
from typing import TYPE_CHECKING

import numpy as np
import pytest
import xlsxwriter

from rheo.case import case_from_document
from rheo.case.load_readings import readings_of
from rheo.errors import InputError
from rheo.geometry import geometry_records
from rheo.readings import read_readings
from ui import results
from ui.readings.mapping import FileColumn, file_columns
from ui.readings.points import curve_of
from ui.state import changed

if TYPE_CHECKING:
    from conftest import Page

RATES = np.geomspace(0.5, 500.0, 13)
CURVE = "Shear rate [1/s],Shear stress [Pa]\n" + "".join(
    f"{rate:.6g},{12.0 + 4.0 * rate**0.45:.6g}\n" for rate in RATES
)
# A cup and bob without its geometry: speeds and torques alone.
TORQUES = "Speed [rpm],Torque [mN.m]\n" + "".join(
    f"{speed},{0.4 + 0.1 * speed**0.5:.5g}\n" for speed in (2, 5, 10, 20, 50, 100, 200)
)


def test_an_own_file_takes_the_place_of_the_sample(page: Page) -> None:
    page.upload("my sauce.csv", CURVE.encode())
    case = page.kept("case")
    assert [block.file for block in case.readings] == ["my_sauce.csv"]
    assert case.title == "my sauce"
    assert "13 readings" in page.words
    assert page.errors == []
    assert "still the sample&#x27;s" in page.html
    page.go("flow_curve")
    assert "Herschel-Bulkley" in page.html


def test_a_set_can_be_added_and_removed_again(page: Page) -> None:
    page.upload("one.csv", CURVE.encode())
    page.widget("toggle", "Add to the readings").set_value(True)
    page.upload("two.csv", CURVE.replace(",14.", ",15.").encode())
    assert len(page.kept("case").readings) == 2
    assert set(page.kept("files")) == {"one.csv", "two.csv"}
    page.press("Remove this set")
    assert [block.file for block in page.kept("case").readings] == ["two.csv"]
    assert set(page.kept("files")) == {"two.csv"}


def test_the_same_name_twice_makes_two_files(page: Page) -> None:
    page.upload("one.csv", CURVE.encode())
    page.widget("toggle", "Add to the readings").set_value(True)
    page.upload("one.csv", CURVE.replace(",14.", ",15.").encode())
    files = page.kept("files")
    assert set(files) == {"one.csv", "one_2.csv"}
    assert files["one.csv"].digest != files["one_2.csv"].digest


def test_a_table_can_be_pasted(page: Page) -> None:
    page.widget("text_area", "Table with").set_value(CURVE.replace(",", "\t"))
    page.press("Use this table")
    assert "13 readings" in page.words
    page.widget("text_area", "Table with").set_value("   ")
    page.press("Use this table")
    assert "there is nothing in the field" in page.html.lower()


def _bomb() -> bytes:
    """A workbook of a few kilobytes that unpacks to a gigabyte."""
    packed = io.BytesIO()
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as book:
        book.writestr("[Content_Types].xml", "<Types/>")
        book.writestr("xl/workbook.xml", "<workbook/>")
        with book.open("xl/worksheets/sheet1.xml", "w", force_zip64=True) as sheet:
            for _ in range(64):
                sheet.write(b" " * (1 << 20))
    return packed.getvalue()


@pytest.mark.parametrize(
    ("name", "data"),
    [
        ("empty.csv", b""),
        ("blank.csv", b"\n\n  \n"),
        ("picture.png", b"\x89PNG\r\n\x1a\n" + bytes(range(256)) * 20),
        ("binary.csv", bytes(range(256)) * 40),
        ("letter.txt", b"Dear Sir,\n\nthank you for your letter.\n"),
        ("bomb.xlsx", _bomb()),
        ("broken.xlsx", b"PK\x03\x04" + b"\0" * 200),
        ("../../../etc/passwd", b"root:x:0:0\n"),
        ("<script>alert(1)</script>.csv", b"a,b\n"),
        ("two names\u202egpj.csv", b"\xff\xfe"),
    ],
)
def test_files_without_readings_are_refused_in_one_sentence(
    page: Page, name: str, data: bytes
) -> None:
    before = page.kept("case")
    page.upload(name, data)
    assert page.kept("case") is before
    assert page.html.count('role="alert"') == 1
    assert page.errors == []
    assert "<script>" not in page.html
    assert "Traceback" not in page.words
    # The page goes on: the next file is read.
    page.upload("my sauce.csv", CURVE.encode())
    assert "13 readings" in page.words
    assert 'role="alert"' in page.html or "still the sample" in page.html


def test_columns_that_are_not_understood_can_be_named(page: Page) -> None:
    text = CURVE.replace("Shear rate [1/s]", "Alpha").replace("Shear stress [Pa]", "Beta")
    page.upload("odd.csv", text.encode())
    assert "Say which column is which" in page.words
    assert page.kept("case").readings[0].file == "odd.csv"
    assert len(page.errors) == 1
    page.choose("Alpha, first value 0", "shear rate")
    page.choose("Beta, first value 14", "shear stress")
    assert page.errors == []
    assert "13 readings" in page.words
    assert page.kept("case").readings[0].columns == {"rate": "Alpha", "stress": "Beta"}
    stress = float(_points(page)[0]["y"][0])
    fields = [one for one in page.app.text_input if one.label == "Unit"]
    fields[1].set_value("kPa")
    page.run()
    assert _points(page)[0]["y"][0] == pytest.approx(1000.0 * stress)
    fields = [one for one in page.app.text_input if one.label == "Unit"]
    fields[1].set_value("rpm")
    page.run()
    assert 'role="alert"' in page.html
    assert page.kept("case").readings[0].units == {"stress": "kPa"}
    page.choose("Beta, first value 14", "not used")
    assert 'role="alert"' in page.html
    assert page.kept("case").readings[0].columns == {"rate": "Alpha", "stress": "Beta"}


def test_the_columns_of_a_file_are_shown_as_understood() -> None:
    readings = read_readings(b"Shear rate [1/s],Note,Shear stress [kPa]\n1,x,0.5\n2,y,0.8\n3,z,1\n")
    found = file_columns(readings, ())
    assert found == (
        FileColumn("Shear rate [1/s]", "1", "rate", "1/s", False),
        FileColumn("Note", "x", "", "", False),
        FileColumn("Shear stress [kPa]", "0.5", "stress", "kPa", False),
    )


def test_torque_without_geometry_asks_for_it(page: Page) -> None:
    page.upload("bob.csv", TORQUES.encode())
    assert "geometry" in page.html
    page.choose("Measured in", "concentric-cylinders")
    page.type("Radius of the bob", "14 mm")
    page.type("Radius of the cup", "15")
    page.type("Length of the bob", "0.042 m")
    readings = page.kept("case").readings[0]
    assert readings.geometry.kind == "concentric-cylinders"
    sizes = {key: float(value) for key, value in readings.geometry.dimensions.items()}
    assert sizes == pytest.approx(
        {"inner_radius": 0.014, "outer_radius": 0.015, "length": 0.042, "end_factor": 1.0}
    )
    assert page.errors == []
    assert len(page.strip()) == 5


def test_a_dimension_that_cannot_be_is_refused(page: Page) -> None:
    before = page.kept("case")
    page.type("Radius of the bob", "20 mm")
    assert page.kept("case") is before
    assert "outer_radius" in page.html
    page.type("Radius of the bob", "13.9 mm")
    assert float(
        page.kept("case").readings[0].geometry.dimensions["inner_radius"]
    ) == pytest.approx(0.0139)


def test_every_geometry_can_be_picked(page: Page) -> None:
    box = page.widget("selectbox", "Measured in")
    assert len(box.options) == len(geometry_records()) + 1


def test_full_scale_flags_readings(page: Page) -> None:
    assert "2 of 48 readings have a torque under 10 %" in page.html
    page.type("Torque at full scale", "20")
    assert float(page.kept("case").readings[0].full_scale_torque) == pytest.approx(0.02)
    assert "2 of 48 readings have a torque under 10 %" not in page.html
    assert "of 48 readings have a torque under 10 %" in page.html


def test_flagged_readings_are_ringed_and_left_out_by_one_button(page: Page) -> None:
    names = [trace.get("name") for trace in page.figure()["data"]]
    assert "flagged" in names
    page.press("Leave out the 2 flagged readings")
    assert page.kept("case").readings[0].exclude == (33, 48)
    hollow = [
        trace
        for trace in page.figure()["data"]
        if str(trace.get("marker", {}).get("symbol", "")).endswith("-open")
        and "not fitted" in str(trace.get("name"))
    ]
    assert hollow
    assert "2 left out" in page.html
    assert "still the sample" not in page.html
    page.press("Take all in again")
    assert page.kept("case").readings[0].exclude == ()


def test_leaving_readings_out_changes_the_answer(page: Page) -> None:
    page.upload("my.csv", CURVE.replace("\n500,", "\n500,9").encode())
    before = page.strip()
    page.app.session_state["rheo.case"] = _without(page, 13)
    page.run()
    assert page.strip() != before


def _without(page: Page, number: int) -> object:
    return changed(page.kept("case"), ("readings", 0, "exclude"), [number])


def test_the_sweep_and_the_product_can_be_changed(page: Page) -> None:
    page.choose("Sweep to fit", "up")
    assert page.kept("case").readings[0].sweep == "up"
    page.type("Product", "red sauce")
    assert page.kept("case").product.name == "red sauce"
    page.upload("my.csv", CURVE.encode())
    page.choose("Sweep to fit", "down")
    assert len(page.errors) == 1
    assert "sweep is 'down'" in page.errors[0]


def _two_sheets() -> bytes:
    packed = io.BytesIO()
    with xlsxwriter.Workbook(packed, {"in_memory": True}) as book:
        for name, first in (("Monday", 10.0), ("Friday", 20.0)):
            sheet = book.add_worksheet(name)
            sheet.write_row(0, 0, ["Shear rate [1/s]", "Shear stress [Pa]"])
            for row, rate in enumerate(RATES, 1):
                sheet.write_row(row, 0, [rate, first + rate**0.5])
    return packed.getvalue()


def test_a_sheet_can_be_chosen(page: Page) -> None:
    page.upload("week.xlsx", _two_sheets())
    box = page.widget("selectbox", "Sheet")
    assert box.options == ["Monday", "Friday"]
    assert box.value == "Monday"
    lowest = min(min(trace["y"]) for trace in _points(page))
    page.choose("Sheet", "Friday")
    assert page.kept("case").readings[0].sheet == "Friday"
    assert min(min(trace["y"]) for trace in _points(page)) == pytest.approx(lowest + 10.0)


def test_tables_of_a_file_can_be_chosen(page: Page) -> None:
    text = "Monday\n" + CURVE + "\nFriday\n" + CURVE.replace(",14.", ",15.")
    page.upload("week.csv", text.encode())
    assert "26 readings" in page.words
    page.widget("multiselect", "Tables of the file").set_value(["Friday"])
    page.run()
    assert page.kept("case").readings[0].block == ("Friday",)
    assert "13 readings" in page.words


def test_the_dial_of_a_six_speed_instrument(page: Page) -> None:
    dial = "Speed [rpm],Dial [deg]\n3,8\n6,9\n100,24\n200,33\n300,41\n600,60\n"
    page.upload("mud.csv", dial.encode())
    page.choose("Measured in", "six-speed")
    assert page.errors == []
    before = _points(page)[0]["y"][0]
    page.type("Stress per degree", "1.022 Pa")
    assert _points(page)[0]["y"][0] == pytest.approx(2.0 * before, rel=1e-3)


def test_what_cannot_be_converted_says_why() -> None:
    curve, why = curve_of(read_readings(TORQUES.encode()))
    assert curve is None
    assert "geometry" in why


def test_a_column_of_the_user_wins(page: Page) -> None:
    text = "Shear rate,Stress A [Pa],Shear stress [Pa]\n" + "".join(
        f"{rate:.4g},{10 + rate**0.5:.4g},{20 + rate**0.5:.4g}\n" for rate in RATES
    )
    page.upload("two.csv", text.encode())
    first = page.kept("case")
    named = changed(first, ("readings", 0, "columns"), {"stress": "Stress A [Pa]"})
    page.app.session_state["rheo.case"] = named
    page.run()
    assert page.errors == []
    low = min(min(trace["y"]) for trace in _points(page))
    assert low < 12


def _points(page: Page) -> list[dict[str, list[float]]]:
    return [
        {"y": _decoded(trace["y"])}
        for trace in page.figure()["data"]
        if trace.get("mode") == "markers"
    ]


def _decoded(values: object) -> list[float]:
    import base64

    if isinstance(values, dict):
        return np.frombuffer(base64.b64decode(values["bdata"]), values["dtype"]).tolist()
    return list(values)


def test_a_column_can_be_left_unused() -> None:
    document = {
        "product": {"density": "1000 kg/m3"},
        "duty": {"flow": "1 m3/h"},
        "line": {"discharge": [{"part": "pipe", "length": "1 m", "inside_diameter": "50 mm"}]},
        "readings": {
            "text": "Shear rate [1/s],Shear stress [Pa],T [°C]\n1,5,20\n2,6,300\n3,7,20\n",
            "columns": {"temperature": ""},
        },
    }
    assert readings_of(case_from_document(document)).temperature is None
    del document["readings"]["columns"]
    assert readings_of(case_from_document(document)).temperature is not None


def test_mapping_refuses_what_would_break_readings(page: Page) -> None:

    case = changed(page.kept("case"), ("readings", 0, "units"), {"torque": "bananas"})
    problem = results.readings_of(case, page.kept("files")).problem
    assert isinstance(problem, InputError)
    assert "bananas" in str(problem)


def test_slip_that_the_fit_takes_in_flags_nothing(page: Page) -> None:
    page.press("Thickener")
    page.go("readings")
    assert page.kept("case").fit.slip is True
    assert "slips at the wall" not in page.html
    page.app.session_state["rheo.case"] = changed(page.kept("case"), ("fit", "slip"), False)
    page.run()
    assert "slips at the wall" in page.html


def test_what_a_start_must_overcome_can_be_given(page: Page) -> None:
    page.go("readings")
    before = page.strip()[4]
    assert page.widget("text_input", "Static yield stress").value == "24 Pa"
    page.type("Static yield stress", "48 Pa")
    assert page.kept("case").product.static_yield_stress == 48.0
    assert page.strip()[4] != before
    page.type("Static yield stress", "")
    assert page.kept("case").product.static_yield_stress is None
    page.type("Heat capacity", "3.9")
    assert page.kept("case").product.heat_capacity == 3900.0
    page.type("Vapour pressure", "0.2 bar")
    assert page.kept("case").product.vapour_pressure == 20000.0
    assert page.errors == []


def test_a_column_that_stops_the_reader_can_be_left_out(page: Page) -> None:
    rows = "".join(f"{speed};{0.2 * speed**0.5:.3f};\n" for speed in (5, 10, 20, 50, 100, 200))
    page.upload("odd.csv", f"rpm;mNm;mPas\n{rows}".encode())
    assert "the cell is empty" in "".join(page.errors)
    assert page.widget("selectbox", "mPas").value == "viscosity"
    page.choose("mPas", "not used")
    assert page.kept("case").readings[0].columns["viscosity"] == ""
    assert "the cell is empty" not in "".join(page.errors)
    assert page.widget("selectbox", "rpm").value == "speed"
    page.choose("mNm", "torque")
    assert page.kept("case").readings[0].columns["torque"] == "mNm"
