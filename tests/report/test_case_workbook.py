"""The workbook of a case: its formulas against the program and against LibreOffice."""

from __future__ import annotations

import datetime
import io
from collections.abc import Callable

import numpy as np
import openpyxl
import pytest
from openpyxl.worksheet.worksheet import Worksheet

import rheo
from rheo.case import CaseResult
from rheo.line import Exit, Line, Pipe, Product, Vessel, solve_line
from rheo.report import workbook
from rheo.report.sheets.book import Book
from rheo.report.sheets.line_sheet import line_sheets

Values = dict[str, dict[str, object]]
DATE = datetime.date(2025, 6, 1)
SHEETS = [
    "About", "Readings", "Flow curve", "Fits", "Line", "Wall stress", "System curve", "Sizes",
    "Doubt",
]  # fmt: skip


def opened(content: bytes, values: bool = True) -> openpyxl.Workbook:
    return openpyxl.load_workbook(io.BytesIO(content), data_only=values)


def formulas(content: bytes) -> dict[str, list[str]]:
    return {
        sheet.title: [c.coordinate for row in sheet.iter_rows() for c in row if c.data_type == "f"]
        for sheet in opened(content, values=False).worksheets
    }


def column(sheet: Worksheet, heading: str) -> list[object]:
    """Return the numbers under a heading."""
    for row in sheet.iter_rows():
        for cell in row:
            if cell.value == heading:
                below = sheet.iter_rows(
                    min_row=cell.row + 1, min_col=cell.column, max_col=cell.column
                )
                found = []
                for (one,) in below:
                    if one.value is None and found:
                        break
                    found.append(one.value)
                return [value for value in found if value is not None]
    raise AssertionError(f"there is no heading {heading}")


@pytest.fixture(scope="module")
def content(small_result: CaseResult) -> bytes:
    return workbook(small_result, DATE)


def test_sheets(content: bytes) -> None:
    assert opened(content).sheetnames == SHEETS


def test_every_formula_agrees_with_a_spreadsheet_program(
    content: bytes, recalculate: Callable[[bytes], Values]
) -> None:
    stored, found, places = opened(content), recalculate(content), formulas(content)
    assert sum(len(one) for one in places.values()) > 200
    for title, cells in places.items():
        for place in cells:
            expected = stored[title][place].value
            assert found[title][place] == pytest.approx(expected, rel=1e-6, abs=1e-9), (
                title,
                place,
            )


def test_formulas_agree_with_the_program(content: bytes, small_result: CaseResult) -> None:
    book = opened(content)
    line = small_result.line
    friction = column(book["Line"], "Friction [Pa]")[: len(line.parts)]
    assert friction == pytest.approx([float(part.pressure_loss) for part in line.parts], rel=1e-6)
    sums = column(book["Line"], "By formula")
    assert sums[2] == pytest.approx(float(line.differential_pressure), rel=1e-6)
    assert sums[3] == pytest.approx(float(line.hydraulic_power), rel=1e-6)
    weights = column(book["Fits"], "Akaike weight [-]")
    assert weights == pytest.approx([fit.weight for fit in small_result.fits], rel=1e-6)
    criteria = column(book["Fits"], "AICc [-]")
    assert criteria == pytest.approx([fit.aicc for fit in small_result.fits], rel=1e-6)
    costs = [one.annual_cost for one in small_result.sizing.candidates]
    assert column(book["Sizes"], "Cost [EUR/year]") == pytest.approx(costs, rel=1e-6)
    shares = [one.share for one in small_result.doubt.shares]
    assert column(book["Doubt"], "Share of the variance") == pytest.approx(shares, rel=1e-6)


def test_readings_stand_whole_and_marked(content: bytes, small_result: CaseResult) -> None:
    sheet = opened(content)["Readings"]
    (readings,) = small_result.readings
    assert column(sheet, "Reading") == list(range(1, len(readings) + 1))
    assert column(sheet, "Shear stress [Pa]") == pytest.approx(readings.stress)
    assert column(sheet, "Left out")[:4] == ["", "left out", "", ""]


def test_residuals_are_those_of_the_fit(content: bytes, small_result: CaseResult) -> None:
    fit = small_result.chosen
    found = column(opened(content)["Flow curve"], "Residual [-]")[: fit.observed.size]
    assert found == pytest.approx(fit.observed / fit.predicted - 1.0, abs=1e-9)


def test_charts_are_native(content: bytes) -> None:
    import zipfile

    names = zipfile.ZipFile(io.BytesIO(content)).namelist()
    assert len([name for name in names if name.startswith("xl/charts/chart")]) >= 3


def test_hostile_text_is_never_a_formula(hostile_result: CaseResult) -> None:
    content = workbook(hostile_result, DATE)
    book = opened(content, values=False)
    known = ("SUM(", "SQRT(", "EXP(", "LN(", "MAX(", "PI(", "COUNT(", "SUMSQ(")
    for sheet in book.worksheets:
        for row in sheet.iter_rows():
            for cell in row:
                assert cell.hyperlink is None
                if cell.data_type == "f":
                    rest = str(cell.value)
                    for function in known:
                        rest = rest.replace(function, "(")
                    rest = rest.replace("'Line'!", "").replace("'Wall stress'!", "")
                    assert not any(letter.islower() for letter in rest.replace("e-0", "")), rest
    assert "<script>" in str(book["About"]["A1"].value)


MODELS = {
    "newtonian": {"viscosity": 2.0},
    "power-law": {"consistency": 12.0, "flow_index": 0.4},
    "bingham": {"yield_stress": 30.0, "plastic_viscosity": 0.4},
    "herschel-bulkley": {"yield_stress": 20.0, "consistency": 6.0, "flow_index": 0.45},
    "casson": {"yield_stress": 15.0, "casson_viscosity": 0.3},
    "sisko": {"infinite_shear_viscosity": 0.1, "consistency": 8.0, "flow_index": 0.3},
    "robertson-stiff": {"consistency": 9.0, "rate_offset": 3.0, "flow_index": 0.4},
    "carreau": {
        "zero_shear_viscosity": 50.0,
        "infinite_shear_viscosity": 0.05,
        "time_constant": 3.0,
        "flow_index": 0.4,
    },
    "ellis": {"zero_shear_viscosity": 30.0, "half_stress": 20.0, "stress_index": 2.2},
}


def line_book(
    key: str, flow: float, roughness: float = 0.0, **changes: float
) -> tuple[bytes, rheo.LineResult]:
    line = Line(
        suction=(Vessel(2.0), Pipe(3.0, inside_diameter=0.06)),
        discharge=(
            Pipe(20.0, inside_diameter=0.04, rise=4.0, roughness=roughness),
            Exit(1.0),
            Vessel(1.0),
        ),
    )
    product = Product(rheo.model(key, **{**MODELS[key], **changes}), density=1100.0)
    result = solve_line(line, product, flow, efficiency=0.5)
    book = Book("line", DATE)
    line_sheets(book, result)
    return book.bytes(), result


@pytest.mark.parametrize("key", MODELS)
def test_the_wall_stress_of_every_model_follows_in_cells(key: str) -> None:
    content, result = line_book(key, 1.2e-3)
    book = opened(content)
    stresses = column(book["Wall stress"], "τw [Pa]")
    known = [float(part.wall_stress) for part in result.parts if part.kind == "pipe"]
    assert stresses == pytest.approx(known, rel=1e-9)
    assert column(book["Line"], "By formula")[2] == pytest.approx(
        float(result.differential_pressure), rel=1e-9
    )
    assert all(regime != "turbulent" for regime in (part.regime for part in result.parts))


def test_turbulent_friction_is_said_to_be_the_programs() -> None:
    content, result = line_book("newtonian", 2e-3, roughness=1e-4, viscosity=1e-3)
    assert [p.regime for p in result.parts if p.kind == "pipe"] == ["turbulent", "turbulent"]
    book = opened(content)
    remarks = [str(value) for value in column(book["Line"], "Remark")]
    assert any("by the program (turbulent)" in remark for remark in remarks)
    assert column(book["Line"], "By formula")[2] == pytest.approx(
        float(result.differential_pressure), rel=1e-9
    )


def test_a_changed_input_is_followed(
    recalculate: Callable[[bytes], Values],
) -> None:
    """Twice the flow, entered in its cell, gives what the program gives for twice the flow."""
    content, _ = line_book("herschel-bulkley", 6e-4)
    _, twice = line_book("herschel-bulkley", 1.2e-3)
    book = opened(content, values=False)
    book["Line"]["B5"] = 1.2e-3
    changed = io.BytesIO()
    book.save(changed)
    found = recalculate(changed.getvalue())["Line"]
    rows = [place for place, value in found.items() if value == "Pressure that the pump adds"]
    (row,) = (int(place[1:]) for place in rows if place.startswith("A"))
    assert found[f"B{row}"] == pytest.approx(float(twice.differential_pressure), rel=1e-6)
    assert np.isfinite(float(twice.differential_pressure))
