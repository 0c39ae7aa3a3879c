"""Starting the line again, holding and cleaning."""

from __future__ import annotations

import numpy as np

from rheo.line.cleaning import Cleaning
from rheo.line.holding import HoldingTube
from rheo.line.start_up import StartUp
from rheo.report.display import shown, text, unit_label
from rheo.report.document import Block, Cautions, Facts, Paragraph, Section, Table
from rheo.report.numbers import number
from rheo.report.restate import restated


def start_up_section(start: StartUp, system: str) -> Section:
    """Return the section on starting a full line from rest."""
    rows = [
        ("Pressure to start the full line", text(float(start.pressure), "pressure", system)),
        (
            "including to make the product yield",
            text(float(start.yield_pressure), "pressure", system),
        ),
        ("including heights and vessels", text(float(start.static_pressure), "pressure", system)),
    ]
    if start.rating is not None:
        rows.append(("Pressure rating", text(start.rating, "pressure", system)))
    if start.allowed_yield_stress is not None and np.isfinite(start.allowed_yield_stress):
        allowed = text(float(start.allowed_yield_stress), "stress", system)
        rows.append(("Mean static yield stress that the rating could start", allowed))
    if start.flush_length is not None and start.flush_volume is not None:
        flush = text(start.flush_length, "length", system)
        volume = text(start.flush_volume, "volume", system)
        rows.append(("To be flushed with water first", f"{flush} of line, {volume}"))
    if start.heat_to is not None:
        rows.append(("Starts when warmed to", text(start.heat_to, "temperature", system)))
    blocks: list[Block] = [
        Paragraph(restated(start.sentence, system), "lead"),
        Paragraph(start.safety, "safety"),
        Facts(tuple(rows)),
    ]
    if start.sections:
        blocks.append(_sections(start, system))
    if start.cautions:
        blocks.append(Cautions(start.cautions))
    blocks.append(Paragraph(start.method, "small"))
    return Section("Start-up", tuple(blocks))


def _sections(start: StartUp, system: str) -> Table:
    pressure = unit_label("pressure", system)
    rows = tuple(
        (
            section.name,
            number(float(section.length_ratio)),
            number(float(shown(section.yield_stress, "stress", system))),
            number(float(shown(section.yield_pressure, "pressure", system))),
            number(float(shown(without, "pressure", system))),
        )
        for section, (_, without) in zip(start.sections, start.without, strict=True)
    )
    return Table(
        (
            "Section",
            "L/D [-]",
            f"Static yield stress [{unit_label('stress', system)}]",
            f"To yield [{pressure}]",
            f"Line without it [{pressure}]",
        ),
        rows,
        numeric=(1, 2, 3, 4),
        caption="Start-up by section, and the pressure when that section alone is empty",
    )


def holding_section(tube: HoldingTube, system: str) -> Section:
    """Return the section on a holding tube."""
    ends = tube.length_interval
    low, high = (None, None) if ends is None else (float(ends[0]), float(ends[1]))
    rows = (
        ("Length needed", text(float(tube.length), "length", system, low, high)),
        (
            "Length by the mean velocity, not safe",
            text(float(tube.length_by_mean_velocity), "length", system),
        ),
        ("Fastest over mean velocity", number(float(tube.velocity_ratio))),
        (
            "Velocity of the fastest particle",
            text(float(tube.fastest_velocity), "velocity", system),
        ),
        ("Pressure drop", text(float(tube.pressure_drop), "pressure", system)),
    )
    blocks: list[Block] = [
        Paragraph(restated(tube.sentence, system), "lead"),
        Paragraph(tube.safety, "safety"),
        Facts(rows),
    ]
    if tube.cautions:
        blocks.append(Cautions(tube.cautions))
    return Section("Holding tube", tuple(blocks))


def cleaning_section(wash: Cleaning, system: str) -> Section:
    """Return the section on cleaning in place."""
    rows = (
        ("Velocity in the widest pipe", text(wash.velocity, "velocity", system)),
        ("Flow", text(float(wash.flow), "flow", system)),
        ("Pressure with water", text(float(wash.differential_pressure), "pressure", system)),
        ("as head of water", text(float(wash.head), "length", system)),
    )
    return Section("Cleaning in place", (Facts(rows), Paragraph(wash.safety, "safety")))
