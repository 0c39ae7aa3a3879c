"""Formulas that carry their result, and the relations written with them."""

from __future__ import annotations

import datetime
import io
import math
from collections.abc import Callable

import numpy as np
import openpyxl
import pytest

import rheo
from rheo.geometry.tube_flow import nominal_rate, wall_rate
from rheo.report.sheets.book import LONGEST_CELL, Book, address
from rheo.report.sheets.relations import RELATIONS, STEPS, next_wall_rate
from rheo.report.sheets.terms import PI, Term, as_term, exp, ln, sqrt, total

A, B, C = Term("A1", 2.0), Term("B1", 3.0), Term("C1", -4.0)
DATE = datetime.date(2025, 6, 1)

EXPRESSIONS = [
    (A + B * C, "A1+B1*C1", -10.0),
    ((A + B) * C, "(A1+B1)*C1", -20.0),
    (A - (B - C), "A1-(B1-C1)", -5.0),
    (A - B - C, "A1-B1-C1", 3.0),
    (A / (B / C), "A1/(B1/C1)", -8.0 / 3.0),
    (A / B / C, "A1/B1/C1", -1.0 / 6.0),
    (A ** (B**2.0), "A1^(B1^2)", 512.0),
    ((A**B) ** 2.0, "(A1^B1)^2", 64.0),
    ((-1.0 * A) ** 2.0, "((-1)*A1)^2", 4.0),
    (A**-1.5, "A1^(-1.5)", 2.0**-1.5),
    (2.0 * A**2.0 / 3.0, "2*A1^2/3", 8.0 / 3.0),
    (1.0 - A / 4.0, "1-A1/4", 0.5),
    (sqrt(A * B) + ln(B) + exp(C / 2.0), "SQRT(A1*B1)+LN(B1)+EXP(C1/2)", None),
    (PI * A**2.0 / 4.0, "PI()*A1^2/4", math.pi),
    (A * 1e-5, "A1*1e-05", 2e-5),
]


@pytest.mark.parametrize(("term", "text", "value"), EXPRESSIONS, ids=[e[1] for e in EXPRESSIONS])
def test_brackets_stand_where_spreadsheets_need_them(
    term: Term, text: str, value: float | None
) -> None:
    assert term.text == text
    expected = math.sqrt(6.0) + math.log(3.0) + math.exp(-2.0) if value is None else value
    assert term.value == pytest.approx(expected, rel=1e-15)


def test_sum_of_a_column() -> None:
    cells = [Term(address(i, 1), float(i)) for i in range(4)]
    assert total(cells) == Term("SUM($B$1:$B$4)", 6.0)
    assert total([]) == as_term(0.0)


@pytest.mark.parametrize(
    "term", [A / 0.0, ln(C), sqrt(C), exp(as_term(1e4)), C**0.5, as_term(0.0) ** -1.0]
)
def test_what_has_no_value_is_not_a_number(term: Term) -> None:
    assert math.isnan(term.value)


def test_addresses() -> None:
    assert [address(0, n) for n in (0, 25, 26, 51, 52, 701, 702)] == [
        "$A$1", "$Z$1", "$AA$1", "$AZ$1", "$BA$1", "$ZZ$1", "$AAA$1",
    ]  # fmt: skip


MODELS = {
    "newtonian": {"viscosity": 0.5},
    "power-law": {"consistency": 3.0, "flow_index": 0.3},
    "bingham": {"yield_stress": 20.0, "plastic_viscosity": 0.05},
    "herschel-bulkley": {"yield_stress": 50.0, "consistency": 1.0, "flow_index": 0.15},
    "casson": {"yield_stress": 30.0, "casson_viscosity": 0.1},
    "sisko": {"infinite_shear_viscosity": 0.05, "consistency": 4.0, "flow_index": 0.3},
    "robertson-stiff": {"consistency": 3.0, "rate_offset": 2.0, "flow_index": 0.4},
    "carreau": {
        "zero_shear_viscosity": 10.0,
        "infinite_shear_viscosity": 0.01,
        "time_constant": 2.0,
        "flow_index": 0.4,
    },
    "carreau-yasuda": {
        "zero_shear_viscosity": 10.0,
        "infinite_shear_viscosity": 0.01,
        "time_constant": 2.0,
        "flow_index": 0.4,
        "yasuda_exponent": 1.2,
    },
    "cross": {
        "zero_shear_viscosity": 10.0,
        "infinite_shear_viscosity": 0.01,
        "time_constant": 2.0,
        "rate_index": 0.7,
    },
}
RATES = (0.01, 1.0, 100.0, 1e4)


def cells(key: str) -> dict[str, Term]:
    return {name: Term(name, value) for name, value in MODELS[key].items()}


def test_every_relation_has_a_case_here() -> None:
    assert set(MODELS) == set(RELATIONS)


@pytest.mark.parametrize("rate", RATES)
@pytest.mark.parametrize("key", MODELS)
def test_relations_agree_with_the_program(key: str, rate: float) -> None:
    model = rheo.model(key, **MODELS[key])
    relation, at = RELATIONS[key], Term("A1", rate)
    assert relation.stress(at, cells(key)).value == pytest.approx(
        float(model.stress(rate)), rel=1e-13
    )
    if relation.log_slope is not None:
        slope = float(model.log_slope(rate))
        assert relation.log_slope(at, cells(key)).value == pytest.approx(slope, rel=1e-13)
    if relation.nominal_rate is not None:
        # The printed closed forms lose digits near the yield stress; the program's do not.
        expected = float(nominal_rate(model, np.asarray(rate)))
        found = relation.nominal_rate(at, cells(key)).value
        assert found == pytest.approx(expected, rel=1e-9 if rate >= 1.0 else 1e-6)


@pytest.mark.parametrize("nominal", RATES)
@pytest.mark.parametrize("key", [k for k, r in RELATIONS.items() if r.nominal_rate is not None])
def test_the_steps_in_cells_reach_the_wall_rate(key: str, nominal: float) -> None:
    relation, p = RELATIONS[key], cells(key)
    wanted = rate = Term("A1", nominal)
    for _ in range(STEPS):
        assert relation.nominal_rate is not None
        assert relation.log_slope is not None
        there = relation.nominal_rate(rate, p)
        step = next_wall_rate(rate, there, relation.log_slope(rate, p), wanted)
        rate = Term("A1", step.value)
    expected = float(wall_rate(rheo.model(key, **MODELS[key]), np.asarray(nominal)))
    assert rate.value == pytest.approx(expected, rel=1e-8)


def small_book() -> bytes:
    book = Book("=1+1", DATE)
    sheet = book.sheet("Terms", '=HYPERLINK("x")', "@SUM(A1)")
    inputs = [sheet.number(3, 3 + i, value) for i, value in enumerate((2.0, 3.0, -4.0))]
    row = 5
    for term, text, _ in EXPRESSIONS:
        sheet.text(row, 0, f"+{text}")
        renamed = text
        for name, cell in zip(("A1", "B1", "C1"), inputs, strict=True):
            renamed = renamed.replace(name, cell.text)
        sheet.formula(row, 1, Term(renamed, term.value))
        row += 1
    for key in MODELS:
        names = {
            name: sheet.number(row, 4 + i, value)
            for i, (name, value) in enumerate(MODELS[key].items())
        }
        rate = sheet.number(row, 3, 12.5)
        sheet.text(row, 0, key)
        sheet.formula(row, 1, RELATIONS[key].stress(rate, names))
        relation = RELATIONS[key]
        if relation.nominal_rate is not None:
            sheet.formula(row, 2, relation.nominal_rate(rate, names))
        row += 1
    return book.bytes()


def test_a_spreadsheet_program_finds_the_stored_results(
    recalculate: Callable[[bytes], dict[str, dict[str, object]]],
) -> None:
    book = small_book()
    stored = openpyxl.load_workbook(io.BytesIO(book), data_only=True)["Terms"]
    found = recalculate(book)["Terms"]
    formulas = [
        cell.coordinate
        for row in openpyxl.load_workbook(io.BytesIO(book))["Terms"].iter_rows()
        for cell in row
        if cell.data_type == "f"
    ]
    assert len(formulas) >= len(EXPRESSIONS) + len(MODELS)
    for place in formulas:
        assert found[place] == pytest.approx(stored[place].value, rel=1e-12), place


def test_text_is_never_a_formula() -> None:
    book = Book("title", DATE)
    sheet = book.sheet("Text", "title")
    hostile = [
        "=1+1", "+1", "-1", "@SUM(1)", "=cmd|' /C calc'!A0", "{=1}", "http://example.org",
        "\x00\x1b",        "0123", "1e5", "x" * 40_000, "שלום 😀 \u202e", "<b>&amp;", "_x0041_",
    ]  # fmt: skip
    for row, text in enumerate(hostile):
        sheet.text(row + 2, 0, text)
    read = openpyxl.load_workbook(io.BytesIO(book.bytes()))["Text"]
    for row, text in enumerate(hostile):
        cell = read.cell(row + 3, 1)
        assert cell.data_type == "s", text
        assert cell.hyperlink is None
    assert read["A3"].value == "=1+1"
    assert read["A10"].value == "[U+0000][U+001B]"
    assert len(read["A13"].value) <= LONGEST_CELL
    assert read["A13"].value.endswith("more)")
    assert read["A14"].value == "שלום 😀 [U+202E]"


def test_the_same_workbook_has_the_same_bytes() -> None:
    assert small_book() == small_book()


def test_what_is_not_known_leaves_a_cell_empty() -> None:
    book = Book("title", DATE)
    sheet = book.sheet("Empty", "title")
    cell = sheet.number(2, 0, None)
    sheet.number(3, 0, math.inf)
    assert math.isnan(cell.value)
    read = openpyxl.load_workbook(io.BytesIO(book.bytes()))["Empty"]
    assert read["A3"].value is None
    assert read["A4"].value is None
