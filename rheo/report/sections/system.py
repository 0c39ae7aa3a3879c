"""System curve and operating point."""

from __future__ import annotations

from rheo.line import LineResult
from rheo.line.operating import OperatingPoint
from rheo.line.system import SystemCurve
from rheo.report.display import text
from rheo.report.document import Block, Cautions, Facts, Figure, Paragraph, Section
from rheo.report.line_pictures import system_picture
from rheo.report.numbers import number
from rheo.report.restate import restated
from rheo.report.words import capital


def system_section(
    curve: SystemCurve,
    line: LineResult,
    operating: OperatingPoint | None,
    rating: float | None,
    system: str,
) -> Section:
    """Return the section on the system curve and the pump.

    Parameters
    ----------
    curve : SystemCurve
        Pressure over flow.
    line : LineResult
        At the duty.
    operating : OperatingPoint or None
        Where the pump's curve meets it; None when no curve is known.
    rating : float or None
        Rated pressure [Pa].
    system : str
        Unit system.

    Returns
    -------
    Section
        With the figure.
    """
    blocks: list[Block] = [Figure(system_picture(curve, line, operating, rating, system))]
    if operating is None:
        blocks.append(
            Paragraph(
                "No pump curve is given, so the pump is taken to give the duty. Enter the points "
                "of a curve, or displacement and slip, to see what a pump does on this line."
            )
        )
        return Section("System curve", tuple(blocks))
    blocks.insert(0, Paragraph(capital(restated(operating.sentence, system)), "lead"))
    rows: list[tuple[str, str]] = []
    if operating.flow is not None and operating.pressure is not None:
        ends = operating.flow_interval or (None, None)
        rows.append(("Flow", text(operating.flow, "flow", system, *ends)))
        ends = operating.pressure_interval or (None, None)
        rows.append(("Pressure", text(operating.pressure, "pressure", system, *ends)))
    if operating.share_found is not None:
        share = f"{number(100 * operating.share_found)} %"
        rows.append(("Likely flow curves with an operating point", share))
    if operating.efficiency is not None:
        rows.append(("Efficiency", f"{number(100 * operating.efficiency)} %"))
    for words, value, quantity in (
        ("Shaft power", operating.shaft_power, "power"),
        ("NPSH required", operating.npsh_required, "length"),
        ("NPSH available", operating.npsh_available, "length"),
    ):
        if value is not None:
            rows.append((words, text(value, quantity, system)))
    if rows:
        blocks.append(Facts(tuple(rows)))
    if operating.cautions:
        blocks.append(Cautions(operating.cautions))
    return Section("System curve and pump", tuple(blocks))
