"""Readings, flow curve and fits as sheets."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution
from rheo.fitting import Fit, Fits
from rheo.models import Model
from rheo.readings import FlowCurve, Readings
from rheo.report.palette import LIGHT
from rheo.report.picture import FloatArray
from rheo.report.sections.readings import reading_words
from rheo.report.sheets.book import Book, Sheet
from rheo.report.sheets.relations import RELATIONS
from rheo.report.sheets.terms import Term, exp, ln, root_mean_square, total

_RAW: tuple[tuple[str, str], ...] = (
    ("angular_speed", "Angular speed [rad/s]"),
    ("torque", "Torque [N·m]"),
    ("torque_fraction", "Share of full scale [-]"),
    ("dial", "Dial [degree]"),
    ("flow", "Flow [m³/s]"),
    ("velocity", "Velocity [m/s]"),
    ("pressure_drop", "Pressure drop [Pa]"),
    ("tube_diameter", "Tube diameter [m]"),
    ("tube_length", "Tube length [m]"),
    ("gap", "Gap [m]"),
    ("temperature", "Temperature [K]"),
    ("solids_fraction", "Solids fraction [-]"),
    ("time", "Time [s]"),
)
_GRID = 61


def readings_sheet(
    book: Book,
    number: int,
    readings: Readings,
    curve: FlowCurve,
    cautions: Sequence[Caution],
) -> None:
    """Write every reading in SI, with what was flagged and what was left out.

    Parameters
    ----------
    book : Book
        The workbook.
    number : int
        Of the set, counted from 0; the first has the plain name.
    readings : Readings
        As given.
    curve : FlowCurve
        Their nominal shear rates and stresses.
    cautions : sequence of Caution
        From screening.
    """
    name = "Readings" if number == 0 else f"Readings {number + 1}"
    sheet = book.sheet(name, "Readings", f"Source: {readings.source}. All in SI.")
    raw = [(key, head) for key, head in _RAW if getattr(readings, key) is not None]
    nominal = ", nominal" if readings.geometry is not None else ""
    heads = ["Reading", *(head for _, head in raw)]
    heads += [f"Shear rate{nominal} [1/s]", f"Shear stress{nominal} [Pa]"]
    heads += ["Branch", "Left out", "Flagged"]
    sheet.heads(3, heads)
    sheet.widths(9, *[16.0] * (len(heads) - 2), 40)
    sheet.sheet.freeze_panes(4, 1)
    columns: list[FloatArray] = [np.asarray(getattr(readings, key), dtype=float) for key, _ in raw]
    columns += [curve.rate, curve.stress]
    words = reading_words(len(readings), cautions)
    out = readings.excluded if readings.excluded is not None else np.zeros(len(readings), bool)
    for i in range(len(readings)):
        row = 4 + i
        sheet.number(row, 0, i + 1)
        for column, values in enumerate(columns, 1):
            sheet.number(row, column, values[i])
        last = len(columns)
        sheet.text(row, last + 1, "" if readings.branch is None else readings.branch[i])
        sheet.text(row, last + 2, "left out" if out[i] else "")
        sheet.text(row, last + 3, words[i])


@dataclass(frozen=True, eq=False)
class FittedCurve:
    """One flow curve with the readings that belong to it.

    Parameters
    ----------
    name : str
        Of the model, with its temperature where there are several.
    model : Model
        With scalar parameters.
    points : array of int, shape (n,)
        Numbers of the readings, counted from 0.
    rate, stress : array, shape (n,)
        Shear rate [1/s] to which each reading belongs by the fit, and its stress [Pa].
    """

    name: str
    model: Model
    points: NDArray[np.intp]
    rate: FloatArray
    stress: FloatArray


def flow_curve_sheet(book: Book, number: int, curve: FittedCurve) -> None:
    """Write a fitted flow curve: parameters, readings against it as formulas, a chart.

    Parameters
    ----------
    book : Book
        The workbook.
    number : int
        Of the curve, counted from 0; the first has the plain name.
    curve : FittedCurve
        What to write.
    """
    model = curve.model
    name = "Flow curve" if number == 0 else f"Flow curve {number + 1}"
    sheet = book.sheet(
        name,
        f"{curve.name}: {model.record.equation}",
        "Yellow cells are the fitted parameters: change one and the blue formulas follow.",
    )
    sheet.widths(12, 16, 16, 16, 14, 4, 16, 16)
    sheet.heads(3, ("Parameter", "Value", "Unit"))
    cells: dict[str, Term] = {}
    for i, parameter in enumerate(model.record.parameters):
        sheet.text(4 + i, 0, parameter.symbol)
        cells[parameter.key] = sheet.number(4 + i, 1, model.parameters[parameter.key], "input")
        sheet.text(4 + i, 2, parameter.unit, "muted")
    top = 6 + len(cells)
    sheet.heads(
        top,
        ("Reading", "Shear rate [1/s]", "Shear stress [Pa]", "By the model [Pa]", "Residual [-]"),
    )
    relation = RELATIONS.get(model.key)
    known = np.asarray(model.stress(curve.rate), dtype=float)
    errors: list[Term] = []
    for i, point in enumerate(curve.points):
        row = top + 1 + i
        sheet.number(row, 0, int(point) + 1)
        rate = sheet.number(row, 1, curve.rate[i])
        stress = sheet.number(row, 2, curve.stress[i])
        fitted = (
            sheet.number(row, 3, known[i])
            if relation is None
            else sheet.formula(row, 3, relation.stress(rate, cells))
        )
        errors.append(sheet.formula(row, 4, stress / fitted - 1.0, "percent"))
    last = top + len(errors)
    if errors:
        sheet.text(last + 2, 3, "Root mean square", "muted")
        sheet.formula(last + 2, 4, root_mean_square(errors), "percent")
    _grid(sheet, top, model, cells, curve)
    _chart(book, sheet, name, top, last)


def _grid(sheet: Sheet, top: int, model: Model, cells: dict[str, Term], curve: FittedCurve) -> None:
    """Write the line for the chart."""
    relation = RELATIONS.get(model.key)
    low, high = float(curve.rate.min()), float(curve.rate.max())
    sheet.heads(top, ("Shear rate [1/s]", "By the model [Pa]"), 6)
    for i, at in enumerate(np.geomspace(low, max(high, 1.001 * low), _GRID)):
        rate = sheet.number(top + 1 + i, 6, at)
        if relation is None:
            sheet.number(top + 1 + i, 7, model.stress(at))
        else:
            sheet.formula(top + 1 + i, 7, relation.stress(rate, cells))


def _chart(book: Book, sheet: Sheet, name: str, top: int, last: int) -> None:
    chart = book.file.add_chart({"type": "scatter", "subtype": "straight"})
    chart.add_series(
        {
            "name": "readings",
            "categories": [name, top + 1, 1, last, 1],
            "values": [name, top + 1, 2, last, 2],
            "line": {"none": True},
            "marker": marker(1),
        }
    )
    chart.add_series(
        {
            "name": "model",
            "categories": [name, top + 1, 6, top + _GRID, 6],
            "values": [name, top + 1, 7, top + _GRID, 7],
            "line": {"color": LIGHT.style(0).colour, "width": 2},
            "marker": {"type": "none"},
        }
    )
    for axis, title in (("x", "Shear rate [1/s]"), ("y", "Shear stress [Pa]")):
        getattr(chart, f"set_{axis}_axis")(
            {
                "name": title,
                "log_base": 10,
                "crossing": "min",
                "major_gridlines": {"visible": True, "line": {"color": LIGHT.rule}},
            }
        )
    chart.set_size({"width": 620, "height": 400})
    chart.set_legend({"position": "bottom"})
    sheet.sheet.insert_chart(top, 9, chart)


def marker(style: int) -> dict[str, object]:
    """Return a solid chart marker in a series colour."""
    colour = LIGHT.style(style).colour
    kind = LIGHT.style(style).marker
    return {
        "type": kind if kind in ("circle", "square", "triangle", "diamond") else "circle",
        "size": 7,
        "fill": {"color": colour},
        "border": {"color": colour},
    }


def fits_sheet(book: Book, fits: Fits, chosen: Fit) -> None:
    """Write the ranking, with AICc and weights as formulas, and the parameters of every model.

    Parameters
    ----------
    book : Book
        The workbook.
    fits : Fits
        All models.
    chosen : Fit
        The one in use.
    """
    sheet = book.sheet("Fits", "Models fitted", f"{fits.reason} In use: {chosen.record.name}.")
    sheet.widths(22, 14, 14, 14, 14, 14, 14, 14, 14, 16)
    heads = (
        "Model", "Readings n", "Parameters", "Weighted sum of squares S [-]", "AICc [-]",
        "AICc by the program [-]", "exp(-Δ/2) [-]", "Akaike weight [-]", "RMS error",
        "Worst error",
    )  # fmt: skip
    sheet.heads(3, heads)
    criteria: list[Term] = []
    for i, fit in enumerate(fits):
        row = 4 + i
        sheet.text(row, 0, fit.record.name)
        count = sheet.number(row, 1, fit.observed.size)
        size = sheet.number(row, 2, fit.parameter_count)
        squares = sheet.number(row, 3, fit.weighted_ss)
        if fit.readings_for_aicc is None:
            k = size + 1.0
            small = 2.0 * k * (k + 1.0) / (count - k - 1.0)
            criteria.append(sheet.formula(row, 4, count * ln(squares / count) + 2.0 * k + small))
            sheet.number(row, 5, fit.aicc)
        else:
            for column in (4, 5):
                sheet.text(row, column, f"needs {fit.readings_for_aicc} readings")
            criteria.append(Term("", np.nan))
        sheet.number(row, 8, fit.rms_relative_error, "percent")
        sheet.number(row, 9, fit.worst_relative_error, "percent")
    known = [cell for cell in criteria if np.isfinite(cell.value)]
    if len(known) == len(criteria):
        lowest = min(criteria, key=lambda cell: cell.value)
        shares = [
            sheet.formula(4 + i, 6, exp(-0.5 * (cell - lowest))) for i, cell in enumerate(criteria)
        ]
        for i, share in enumerate(shares):
            sheet.formula(4 + i, 7, share / total(shares))
    _parameters(sheet, 7 + len(fits), fits)


def _parameters(sheet: Sheet, top: int, fits: Fits) -> None:
    heads = (
        "Model", "Parameter", "Symbol", "Unit", "Value", "Standard error", "95 % from", "to",
        "Remark",
    )  # fmt: skip
    sheet.heads(top, heads)
    row = top
    for fit in fits:
        for one in fit.parameters.values():
            row += 1
            texts = (fit.record.name, one.key.replace("_", " "), one.symbol, one.unit)
            for column, words in enumerate(texts):
                sheet.text(row, column, words)
            for column, value in enumerate((one.value, one.stderr, one.low, one.high), 4):
                sheet.number(row, column, value)
            sheet.text(row, 8, one.note or (f"at its {one.bound} bound" if one.bound else ""))
