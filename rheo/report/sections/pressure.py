"""Pressure drop with its interval, and what makes it uncertain."""

from __future__ import annotations

from rheo.line import LineResult
from rheo.line.doubt import DoubtBudget
from rheo.line.measure_next import NextReadings
from rheo.report.display import text
from rheo.report.document import Block, Cautions, Facts, Figure, Paragraph, Section, Table
from rheo.report.line_pictures import doubt_picture
from rheo.report.numbers import number
from rheo.report.restate import restated


def pressure_text(budget: DoubtBudget, system: str) -> str:
    """Return the pressure that the pump adds with its 95 % interval by all causes."""
    return text(budget.pressure, "pressure", system, *budget.interval)


def pressure_section(
    line: LineResult,
    budget: DoubtBudget,
    following: NextReadings | None,
    system: str,
) -> Section:
    """Return the section on the pressure that the pump must add.

    Parameters
    ----------
    line : LineResult
        At the duty.
    budget : DoubtBudget
        What makes it uncertain.
    following : NextReadings or None
        What to measure next.
    system : str
        Unit system.

    Returns
    -------
    Section
        With the doubt budget as a figure and a table.
    """
    blocks = duty_blocks(line, budget, system)
    blocks += _budget(budget, system)
    if following is not None:
        blocks.append(Paragraph(restated(following.sentence, system)))
        if following.cautions:
            blocks.append(Cautions(following.cautions))
    return Section("Pressure drop", tuple(blocks))


def duty_blocks(line: LineResult, budget: DoubtBudget, system: str) -> list[Block]:
    """Return the facts of the duty, and what their intervals hold.

    Parameters
    ----------
    line : LineResult
        At the duty.
    budget : DoubtBudget
        What makes its pressure uncertain.
    system : str
        Unit system.

    Returns
    -------
    list of Block
        Facts, and where there are draws a paragraph.
    """
    rows = [
        ("Flow", text(float(line.flow), "flow", system)),
        ("Pressure that the pump adds", pressure_text(budget, system)),
        ("the same, by readings and model choice alone", _of_the_product(line, system)),
        ("including friction", text(float(line.friction_pressure), "pressure", system)),
        ("including heights and vessels", text(float(line.static_pressure), "pressure", system)),
        ("including kinetic energy", text(float(line.kinetic_pressure), "pressure", system)),
        ("Gauge pressure before the pump", text(float(line.suction_pressure), "pressure", system)),
        ("Gauge pressure after the pump", text(float(line.discharge_pressure), "pressure", system)),
        ("NPSH available", _optional(line.npsh_available, "length", system)),
        ("Hydraulic power", text(float(line.hydraulic_power), "power", system)),
        ("Shaft power", _optional(line.shaft_power, "power", system)),
        (
            "Warming by friction",
            _optional(line.temperature_rise, "temperature_rise", system),
        ),
        ("Product held in the line", text(float(line.volume), "volume", system)),
        ("Mean time in the line", text(float(line.residence_time), "time", system)),
    ]
    blocks: list[Block] = [Facts(tuple(rows))]
    if line.draws is not None:
        blocks.append(
            Paragraph(
                "The first interval is the 95 % interval by all causes of the doubt budget. The "
                f"second holds the middle 95 % of {line.draws.shape[-1]} likely flow curves: draws "
                "from the fits, the models mixed by their weights, each taken through the same "
                "calculation; it holds the doubt in the product alone.",
                "small",
            )
        )
    return blocks


def _of_the_product(line: LineResult, system: str) -> str:
    ends = line.differential_pressure_interval
    low, high = (None, None) if ends is None else (float(ends[0]), float(ends[1]))
    return text(float(line.differential_pressure), "pressure", system, low, high)


def _optional(value: object, quantity: str, system: str) -> str:
    return text(value, quantity, system) if value is not None else "not worked out"


def _budget(budget: DoubtBudget, system: str) -> list[Block]:
    rows = tuple(
        (
            one.name,
            text(one.standard_deviation, "pressure", system, digits=2),
            f"{number(100 * one.share, 2)} %",
        )
        for one in budget.shares
    )
    blocks: list[Block] = [
        Paragraph(restated(budget.sentence, system)),
        Figure(doubt_picture(budget)),
        Table(
            ("Cause", "Standard deviation of the pressure drop", "Share of the variance"),
            rows,
            numeric=(1, 2),
            caption="Doubt budget, to first order, the causes taken as independent",
        ),
    ]
    if budget.cautions:
        blocks.append(Cautions(budget.cautions))
    return blocks
