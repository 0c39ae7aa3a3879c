"""The line as formulas: wall stress of each pipe, friction of each part, the sums."""

from __future__ import annotations

import math

from rheo.line import LineResult
from rheo.line.constants import GRAVITY
from rheo.line.parts import Equipment
from rheo.line.result import PartResult
from rheo.line.route import route
from rheo.report.sheets.book import Book, Sheet
from rheo.report.sheets.terms import PI, Term, not_negative, total
from rheo.report.sheets.wall_sheet import BY_PROGRAM, Duty, wall_sheet

# A pipe follows the closed form unless the program found something else by more than this.
_SAME = 1e-9
_TOP = 15


def line_sheets(book: Book, line: LineResult) -> None:
    """Write the sheets ``Line`` and ``Wall stress``.

    Parameters
    ----------
    book : Book
        The workbook.
    line : LineResult
        At one flow.
    """
    sheet = book.sheet(
        "Line",
        f"The line: {line.line.name}",
        "Yellow cells are inputs: change one and the blue formulas follow. All in SI.",
    )
    duty, vessels = _inputs(sheet, line)
    diameters = {
        index: sheet.number(_TOP + 1 + index, 4, part.diameter, "input")
        for index, part in enumerate(line.parts)
        if math.isfinite(part.diameter)
    }
    walls = wall_sheet(book, line, sheet, duty, diameters)
    friction, heights = _parts(sheet, line, duty, diameters, walls)
    _sums(sheet, line, _TOP + 3 + len(line.parts), duty, vessels, friction, heights)


def _inputs(sheet: Sheet, line: LineResult) -> tuple[Duty, dict[str, Term]]:
    sheet.widths(30, 14, 12, 12, 12, 12, 12, 14, 14, 14, 14, 12, 16, 16, 16, 14, 44)
    sheet.heads(3, ("Input", "Value", "Unit"))
    source, end = line.line.source_vessel, line.line.end_vessel
    rows: tuple[tuple[str, str, object, str], ...] = (
        ("flow", "Flow", line.flow, "m³/s"),
        ("density", "Density", line.product.density, "kg/m³"),
        ("gravity", "Acceleration of gravity", GRAVITY, "m/s²"),
        ("source_level", f"Level in {source.name}", source.level, "m"),
        ("source_pressure", f"Gauge pressure on {source.name}", source.gauge_pressure, "Pa"),
        ("end_level", f"Level in {end.name}", end.level, "m"),
        ("end_pressure", f"Gauge pressure on {end.name}", end.gauge_pressure, "Pa"),
        ("kinetic", f"Kinetic energy, {BY_PROGRAM}", line.kinetic_pressure, "Pa"),
        ("efficiency", "Hydraulic over shaft power", _efficiency(line), "-"),
    )
    cells: dict[str, Term] = {}
    for number, (key, words, value, unit) in enumerate(rows):
        sheet.text(4 + number, 0, words)
        cells[key] = sheet.number(4 + number, 1, value, "input")
        sheet.text(4 + number, 2, unit, "muted")
    return Duty(cells["flow"], cells["density"], cells["gravity"]), cells


def _efficiency(line: LineResult) -> float | None:
    if line.shaft_power is None or not float(line.shaft_power) > 0:
        return None
    return float(line.hydraulic_power) / float(line.shaft_power)


_HEADS = (
    "Part", "Kind", "Side", "Length [m]", "Inside diameter [m]", "Rise [m]", "Velocity [m/s]",
    "Friction factor (Fanning) [-]", "Loss coefficient K [-]", "Loss of equipment [Pa]",
    "at flow [m³/s]", "Exponent [-]", "Friction [Pa]", "Height [Pa]",
    "Friction by the program [Pa]", "Difference [-]", "Remark",
)  # fmt: skip


def _parts(
    sheet: Sheet,
    line: LineResult,
    duty: Duty,
    diameters: dict[int, Term],
    walls: dict[int, tuple[Term, Term]],
) -> tuple[list[Term], list[Term]]:
    """Write a row for each part; return the cells of friction and of height."""
    sheet.heads(_TOP, _HEADS)
    sheet.sheet.freeze_panes(_TOP + 1, 1)
    friction: list[Term] = []
    heights: list[Term] = []
    steps = route(line.line)
    for index, (part, step) in enumerate(zip(line.parts, steps, strict=True)):
        row = _TOP + 1 + index
        for column, words in enumerate((part.name, part.kind, part.side)):
            sheet.text(row, column, words)
        rise = float(part.elevation_pressure) / (duty.density.value * duty.gravity.value)
        gained = sheet.number(row, 5, rise, "input")
        loss, remark = _friction(
            sheet, row, index, part, step.part, duty, diameters.get(index), walls
        )
        friction.append(sheet.formula(row, 12, loss))
        heights.append(sheet.formula(row, 13, duty.density * duty.gravity * gained))
        program = sheet.number(row, 14, part.pressure_loss)
        if program.value:
            sheet.formula(row, 15, friction[-1] / program - 1.0, "difference")
        sheet.text(row, 16, remark, "muted")
    return friction, heights


def _friction(
    sheet: Sheet,
    row: int,
    index: int,
    part: PartResult,
    given: object,
    duty: Duty,
    diameter: Term | None,
    walls: dict[int, tuple[Term, Term]],
) -> tuple[Term, str]:
    """Write what the friction of a part follows from; return its formula and a remark."""
    if isinstance(given, Equipment) or diameter is None:
        assert isinstance(given, Equipment)
        loss = sheet.number(row, 9, given.loss, "input")
        at = sheet.number(row, 10, given.at_flow, "input")
        exponent = sheet.number(row, 11, given.exponent, "input")
        return loss * (duty.flow / at) ** exponent, "ΔP = loss (Q/at flow)^exponent"
    if part.kind != "pipe":
        velocity = sheet.formula(row, 6, 4.0 * duty.flow / (PI * diameter**2.0))
        head = 0.5 * duty.density.value * velocity.value**2
        k = sheet.number(row, 8, float(part.pressure_loss) / head if head else math.nan, "input")
        return k * duty.density * velocity**2.0 / 2.0, f"ΔP = K ρV²/2, K {BY_PROGRAM} or given"
    length = sheet.number(row, 3, part.length, "input")
    stress, wall_velocity = walls[index]
    velocity = sheet.formula(row, 6, wall_velocity)
    factor = 2.0 * stress / (duty.density * velocity**2.0)
    implied = float(part.pressure_loss) * float(part.diameter)
    implied /= 2.0 * duty.density.value * velocity.value**2 * float(part.length)
    if part.regime == "laminar" and abs(factor.value / implied - 1.0) < _SAME:
        shown = sheet.formula(row, 7, factor)
        remark = "ΔP = 2f ρV² L/D with f = 2τw/(ρV²), τw from the sheet Wall stress"
    else:
        shown = sheet.number(row, 7, implied)
        why = (
            "mean along a pipe whose temperature changes"
            if part.regime == "laminar"
            else part.regime
        )
        remark = f"ΔP = 2f ρV² L/D, f {BY_PROGRAM} ({why})"
    return 2.0 * shown * duty.density * velocity**2.0 * length / diameter, remark


def _sums(
    sheet: Sheet,
    line: LineResult,
    row: int,
    duty: Duty,
    vessels: dict[str, Term],
    friction: list[Term],
    heights: list[Term],
) -> None:
    sheet.heads(row, ("Sum", "By formula", "Unit", "By the program", "Difference [-]"))

    def line_of(number: int, words: str, term: Term, unit: str, program: object) -> Term:
        sheet.text(row + number, 0, words)
        cell = sheet.formula(row + number, 1, term, "result")
        sheet.text(row + number, 2, unit, "muted")
        known = sheet.number(row + number, 3, program)
        if math.isfinite(known.value) and known.value:
            sheet.formula(row + number, 4, cell / known - 1.0, "difference")
        return cell

    all_friction = line_of(1, "Friction", total(friction), "Pa", line.friction_pressure)
    levels = vessels["end_level"] - vessels["source_level"]
    static = (
        vessels["end_pressure"]
        - vessels["source_pressure"]
        + duty.density * duty.gravity * levels
        + total(heights)
    )
    resting = line_of(2, "Heights and vessels", static, "Pa", line.static_pressure)
    needed = line_of(
        3,
        "Pressure that the pump adds",
        all_friction + resting + vessels["kinetic"],
        "Pa",
        line.differential_pressure,
    )
    power = line_of(4, "Hydraulic power", needed * duty.flow, "W", line.hydraulic_power)
    if line.shaft_power is not None and math.isfinite(vessels["efficiency"].value):
        shaft = not_negative(power) / vessels["efficiency"]
        line_of(5, "Shaft power", shaft, "W", line.shaft_power)
