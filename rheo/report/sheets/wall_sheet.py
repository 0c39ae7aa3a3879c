"""The wall stress of each pipe as formulas, solved in the open: one step, three cells."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from rheo.geometry.tube_flow import wall_rate
from rheo.line import LineResult
from rheo.line.result import PartResult
from rheo.report.sheets.book import Book, Sheet
from rheo.report.sheets.relations import RELATIONS, STEPS, Cells, Relation, next_wall_rate
from rheo.report.sheets.terms import PI, Term

BY_PROGRAM = "by the program"
_TOP = 3


@dataclass(frozen=True)
class Duty:
    """Cells that the whole line shares: flow [m3/s], density [kg/m3], gravity [m/s2]."""

    flow: Term
    density: Term
    gravity: Term


def wall_sheet(
    book: Book, line: LineResult, main: Sheet, duty: Duty, diameters: Mapping[int, Term]
) -> dict[int, tuple[Term, Term]]:
    """Write the sheet ``Wall stress``: laminar flow in each pipe.

    Parameters
    ----------
    book : Book
        The workbook.
    line : LineResult
        At one flow.
    main : Sheet
        The sheet that holds the cells of `duty`.
    duty : Duty
        Flow and density.
    diameters : mapping of int to Term
        Inside diameters [m] by the number of the part.

    Returns
    -------
    dict of int to (Term, Term)
        Wall stress and velocity by the number of the part, as another sheet refers to them.
    """
    model = line.product.model_at(line.product.temperature)
    relation = RELATIONS.get(model.key)
    closed = relation is not None and relation.nominal_rate is not None
    remark = (
        "This model has no closed form in a tube: wall shear rates are by the program; the stress "
        "follows from the flow curve."
    )
    if closed and relation is not None:
        remark = (
            f"8V/D as a function of the wall shear rate: {relation.source}. It is solved by "
            f"{STEPS} steps of Newton's method in logarithms, each in cells of its own."
        )
    title = f"Wall shear stress of laminar flow: {model.record.name}, {model.record.equation}"
    sheet = book.sheet("Wall stress", title, remark)
    heads = ["Pipe", "Inside diameter [m]", "Velocity [m/s]", "8V/D [1/s]"]
    heads += [f"{one.symbol} [{one.unit}]" for one in model.record.parameters]
    for number in range(1, STEPS + 1) if closed else ():
        heads += [
            f"γ̇w, guess {number} [1/s]",
            f"its 8V/D {number} [1/s]",
            f"its slope {number} [-]",
        ]
    heads += ["γ̇w [1/s]", "τw [Pa]", "Reynolds number [-]", "τw by the program [Pa]"]
    sheet.heads(_TOP, [*heads, "Difference [-]"])
    sheet.widths(30, *[13.0] * len(heads))
    sheet.sheet.freeze_panes(_TOP + 1, 1)
    found: dict[int, tuple[Term, Term]] = {}
    row = _TOP
    for index, part in enumerate(line.parts):
        if part.kind == "pipe":
            row += 1
            stress, velocity = _pipe(sheet, row, line, part, main, duty, diameters[index], relation)
            found[index] = (sheet.there(stress), sheet.there(velocity))
    return found


def _pipe(
    sheet: Sheet,
    row: int,
    line: LineResult,
    part: PartResult,
    main: Sheet,
    duty: Duty,
    width: Term,
    relation: Relation | None,
) -> tuple[Term, Term]:
    model = line.product.model_at(part.temperature)
    nominal_rate = 8.0 * np.asarray(part.velocity) / np.asarray(part.diameter)
    known_rate = float(wall_rate(model, nominal_rate))
    sheet.text(row, 0, part.name)
    diameter = sheet.formula(row, 1, main.there(width))
    velocity = sheet.formula(row, 2, 4.0 * main.there(duty.flow) / (PI * diameter**2.0))
    nominal = sheet.formula(row, 3, 8.0 * velocity / diameter)
    cells = {
        key: sheet.number(row, 4 + i, value, "input")
        for i, (key, value) in enumerate(model.parameters.items())
    }
    column = 4 + len(cells)
    if relation is None or relation.nominal_rate is None or relation.log_slope is None:
        rate = sheet.number(row, column, known_rate)
    else:
        rate, column = _steps(sheet, row, column, relation, cells, nominal)
    if relation is None:
        stress = sheet.number(row, column + 1, model.stress(known_rate))
    else:
        stress = sheet.formula(row, column + 1, relation.stress(rate, cells), "result")
    density = main.there(duty.density)
    sheet.formula(row, column + 2, 8.0 * density * velocity**2.0 / stress)
    program = sheet.number(row, column + 3, model.stress(known_rate))
    sheet.formula(row, column + 4, stress / program - 1.0, "difference")
    return stress, velocity


def _steps(
    sheet: Sheet, row: int, column: int, relation: Relation, cells: Cells, nominal: Term
) -> tuple[Term, int]:
    """Write the steps of Newton's method; return the wall shear rate and its column."""
    guess = nominal
    for _ in range(STEPS):
        rate = sheet.formula(row, column, guess)
        assert relation.nominal_rate is not None
        assert relation.log_slope is not None
        value = sheet.formula(row, column + 1, relation.nominal_rate(rate, cells))
        slope = sheet.formula(row, column + 2, relation.log_slope(rate, cells))
        guess = next_wall_rate(rate, value, slope, nominal)
        column += 3
    return sheet.formula(row, column, guess), column
