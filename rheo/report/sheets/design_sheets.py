"""System curve, sizes and doubt as sheets."""

from __future__ import annotations

import math

from rheo.line.cost import JOULES_PER_KILOWATT_HOUR, Costs
from rheo.line.doubt import DoubtBudget
from rheo.line.sizing import Sizing
from rheo.line.system import SystemCurve
from rheo.report.palette import LIGHT
from rheo.report.sheets.book import Book, Sheet
from rheo.report.sheets.terms import PI, Term, not_negative, sqrt, total

_SIZE_HEADS = (
    "Size", "Inside diameter [m]", "Velocity [m/s]", "8V/D [1/s]", "Wall shear rate [1/s]",
    "Pressure [Pa]", "95 % from [Pa]", "to [Pa]", "Start-up pressure [Pa]", "Regime",
    "Passes", "Why not",
)  # fmt: skip
_COST_HEADS = (
    "Capital [{0}]", "Energy [{0}/year]", "Cost [{0}/year]", "Cost by the program [{0}/year]",
    "Difference [-]",
)  # fmt: skip


def sizes_sheet(book: Book, sizing: Sizing, flow: float, costs: Costs | None) -> None:
    """Write every size against the limits; velocities and costs as formulas.

    Parameters
    ----------
    book : Book
        The workbook.
    sizing : Sizing
        The comparison.
    flow : float
        [m3/s].
    costs : Costs or None
        How costs are counted.
    """
    sheet = book.sheet("Sizes", "Sizes compared", sizing.sentence)
    rows: list[tuple[str, str, float, str]] = [("flow", "Flow", flow, "m³/s")]
    if costs is not None:
        rows += [
            ("hours", "Running hours a year", costs.hours, "h"),
            ("price", "Price of energy", costs.energy_price, f"{costs.currency}/kWh"),
            ("efficiency", "Hydraulic over electrical power", costs.efficiency, "-"),
            ("charge", "Share of the capital charged to a year", costs.annual_charge, "1/year"),
        ]
    sheet.heads(3, ("Input", "Value", "Unit"))
    inputs: dict[str, Term] = {}
    for i, (key, words, value, unit) in enumerate(rows):
        sheet.text(4 + i, 0, words)
        inputs[key] = sheet.number(4 + i, 1, value, "input")
        sheet.text(4 + i, 2, unit, "muted")
    top = 6 + len(rows)
    money = [] if costs is None else [head.format(costs.currency) for head in _COST_HEADS]
    sheet.heads(top, (*_SIZE_HEADS[:-1], *money, _SIZE_HEADS[-1]))
    sheet.widths(34, *[14.0] * (len(_SIZE_HEADS) + len(money) - 2), 70)
    sheet.sheet.freeze_panes(top + 1, 1)
    for i, one in enumerate(sizing.candidates):
        row = top + 1 + i
        sheet.text(row, 0, one.size.name)
        diameter = sheet.number(row, 1, one.size.inside_diameter)
        velocity = sheet.formula(row, 2, 4.0 * inputs["flow"] / (PI * diameter**2.0))
        sheet.formula(row, 3, 8.0 * velocity / diameter)
        sheet.number(row, 4, one.wall_rate)
        pressure = sheet.number(row, 5, one.pressure)
        low, high = one.pressure_interval or (None, None)
        for column, known in ((6, low), (7, high), (8, one.start_up_pressure)):
            sheet.number(row, column, known)
        sheet.text(row, 9, one.regime)
        sheet.text(row, 10, "recommended" if one is sizing.recommended else _verdict(one.passes))
        if costs is not None:
            _costs(sheet, row, 11, pressure, inputs, one.capital, one.annual_cost)
        sheet.text(row, 11 + len(money), "; ".join(one.reasons))
    if len(sizing.candidates) > 1:
        _chart(book, sheet, top, len(sizing.candidates))


def _verdict(passes: bool) -> str:
    return "passes" if passes else "fails"


def _costs(
    sheet: Sheet,
    row: int,
    column: int,
    pressure: Term,
    inputs: dict[str, Term],
    capital: float | None,
    program: float | None,
) -> None:
    paid = sheet.number(row, column, capital, "input")
    seconds = 3600.0 / JOULES_PER_KILOWATT_HOUR
    power = not_negative(pressure) * inputs["flow"] / inputs["efficiency"]
    energy = sheet.formula(row, column + 1, power * inputs["hours"] * seconds * inputs["price"])
    whole = sheet.formula(row, column + 2, paid * inputs["charge"] + energy, "result")
    known = sheet.number(row, column + 3, program)
    if math.isfinite(known.value) and known.value:
        sheet.formula(row, column + 4, whole / known - 1.0, "difference")


def _chart(book: Book, sheet: Sheet, top: int, count: int) -> None:
    chart = book.file.add_chart({"type": "column"})
    chart.add_series(
        {
            "name": "Pressure",
            "categories": [sheet.name, top + 1, 0, top + count, 0],
            "values": [sheet.name, top + 1, 5, top + count, 5],
            "fill": {"color": LIGHT.style(0).colour},
            "gap": 60,
        }
    )
    chart.set_x_axis({"name": "Size"})
    chart.set_y_axis({"name": "Pressure [Pa]", "major_gridlines": {"visible": True}})
    chart.set_legend({"none": True})
    chart.set_size({"width": 760, "height": 360})
    sheet.sheet.insert_chart(top + count + 3, 0, chart)


def system_sheet(book: Book, curve: SystemCurve) -> None:
    """Write the system curve with its band, and a chart."""
    sheet = book.sheet("System curve", "Pressure that the line needs", "By the program, in SI.")
    sheet.heads(3, ("Flow [m³/s]", "Pressure [Pa]", "95 % from [Pa]", "to [Pa]", "Regime"))
    sheet.widths(14, 14, 14, 14, 14)
    for i, flow in enumerate(curve.flow):
        sheet.number(4 + i, 0, flow)
        sheet.number(4 + i, 1, curve.pressure[i])
        sheet.number(4 + i, 2, None if curve.low is None else curve.low[i])
        sheet.number(4 + i, 3, None if curve.high is None else curve.high[i])
        sheet.text(4 + i, 4, curve.regime[i])
    last = 3 + curve.flow.size
    chart = book.file.add_chart({"type": "scatter", "subtype": "straight"})
    columns = [(1, "pressure", 0, 2.25)]
    if curve.low is not None:
        columns += [(2, "95 % from", 5, 1.0), (3, "95 % to", 5, 1.0)]
    for column, name, style, width in columns:
        chart.add_series(
            {
                "name": name,
                "categories": [sheet.name, 4, 0, last, 0],
                "values": [sheet.name, 4, column, last, column],
                "line": {"color": LIGHT.style(style).colour, "width": width},
                "marker": {"type": "none"},
            }
        )
    chart.set_x_axis({"name": "Flow [m³/s]", "min": 0})
    chart.set_y_axis({"name": "Pressure [Pa]"})
    chart.set_legend({"position": "bottom"})
    chart.set_size({"width": 620, "height": 400})
    sheet.sheet.insert_chart(3, 6, chart)


def doubt_sheet(book: Book, budget: DoubtBudget) -> None:
    """Write the doubt budget: variances add up, shares as formulas."""
    sheet = book.sheet("Doubt", "What makes the pressure drop uncertain", budget.sentence)
    heads = ("Cause", "Standard deviation [Pa]", "Variance [Pa²]", "Share of the variance")
    sheet.heads(3, heads)
    sheet.widths(30, 22, 18, 20)
    variances: list[Term] = []
    for i, one in enumerate(budget.shares):
        sheet.text(4 + i, 0, one.name)
        deviation = sheet.number(4 + i, 1, one.standard_deviation)
        variances.append(sheet.formula(4 + i, 2, deviation**2.0))
    whole = sum(variance.value for variance in variances)
    if not variances or not whole > 0:
        return
    last = 4 + len(variances)
    everything = sheet.formula(last, 2, total(variances), "result")
    sheet.text(last, 0, "all causes together")
    sheet.formula(last, 1, sqrt(everything), "result")
    for i, variance in enumerate(variances):
        sheet.formula(4 + i, 3, variance / everything, "percent")
