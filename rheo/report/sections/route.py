"""The line, part by part."""

from __future__ import annotations

import math

from numpy.typing import ArrayLike

from rheo.line import LineResult
from rheo.line.result import PartResult
from rheo.report.display import shown, text, unit_label
from rheo.report.document import Block, Figure, Paragraph, Section, Table
from rheo.report.line_pictures import (
    drawing_picture,
    pressure_picture,
    rates_picture,
    velocity_picture,
    widest_sheared,
)
from rheo.report.numbers import number
from rheo.report.picture import FloatArray

SIDES = {"suction": "before the pump", "discharge": "after the pump"}


def route_section(
    line: LineResult,
    instrument_rates: FloatArray | None,
    rating: float | None,
    system: str,
) -> Section:
    """Return the section on the parts of the line.

    Parameters
    ----------
    line : LineResult
        At the duty.
    instrument_rates : array or None
        Shear rates of the readings [1/s].
    rating : float or None
        Rated pressure [Pa].
    system : str
        Unit system.

    Returns
    -------
    Section
        With a drawing, the breakdown, and where the shear rates fall.
    """
    blocks: list[Block] = [
        Figure(drawing_picture(line, system)),
        breakdown_table(line, system),
        pipes_table(line, system),
        Paragraph(
            "Friction factors are Fanning's. Reynolds numbers are Metzner and Reed's with the "
            "local n′ and K′ of laminar flow at the same 8V/D.",
            "small",
        ),
        Figure(pressure_picture(line, rating, system)),
        Figure(rates_picture(line, instrument_rates, system)),
    ]
    across = velocity_picture(line, system=system)
    part = widest_sheared(line)
    if across is not None and part is not None:
        blocks.append(Figure(across, f"In {part.name}. {across.description}"))
    return Section("The line, part by part", tuple(blocks))


def _cell(value: ArrayLike, quantity: str, system: str) -> str:
    known = float(shown(value, quantity, system))
    return number(known) if math.isfinite(known) else ""


def breakdown_table(line: LineResult, system: str) -> Table:
    """Return what each part of a line takes."""
    pressure = unit_label("pressure", system)
    length = unit_label("length", system)
    rows = [
        (
            part.name,
            SIDES[part.side],
            _cell(part.length, "length", system) if part.kind == "pipe" else "",
            _cell(part.diameter, "diameter", system),
            _cell(part.pressure_loss, "pressure", system),
            _cell(part.elevation_pressure, "pressure", system),
        )
        for part in line.parts
    ]
    rows.append(
        (
            "all parts",
            "",
            _cell(sum(float(part.length) for part in line.parts), "length", system),
            "",
            _cell(line.friction_pressure, "pressure", system),
            _cell(sum(float(part.elevation_pressure) for part in line.parts), "pressure", system),
        )
    )
    states = ("",) * len(line.parts) + ("chosen",)
    return Table(
        (
            "Part",
            "Side",
            f"Length [{length}]",
            f"Inside diameter [{unit_label('diameter', system)}]",
            f"Friction [{pressure}]",
            f"Height [{pressure}]",
        ),
        tuple(rows),
        numeric=(2, 3, 4, 5),
        caption="What each part takes",
        states=states,
    )


def pipes_table(line: LineResult, system: str) -> Table:
    """Return the flow in each pipe of a line."""
    pipes = [part for part in line.parts if part.kind == "pipe"]
    rate, temperature = unit_label("rate", system), unit_label("temperature", system)
    rows = tuple(
        (
            part.name,
            _temperatures(part, system),
            _cell(part.velocity, "velocity", system),
            _cell(part.wall_rate, "rate", system),
            _cell(part.wall_stress, "stress", system),
            number(float(part.reynolds)),
            number(float(part.friction_factor)),
            part.regime,
            _inside(part),
        )
        for part in pipes
    )
    return Table(
        (
            "Pipe",
            f"Temperature [{temperature}]",
            f"Velocity [{unit_label('velocity', system)}]",
            f"Wall shear rate [{rate}]",
            f"Wall shear stress [{unit_label('stress', system)}]",
            "Reynolds number [-]",
            "Friction factor [-]",
            "Regime",
            "Measured range",
        ),
        rows,
        numeric=(1, 2, 3, 4, 5, 6),
        caption="Flow in the pipes",
        widths=(1.9, 1.1, 0.9, 0.9, 0.9, 1.0, 0.9, 0.9, 1.0),
        states=tuple("flagged" if part.inside_measured_range is False else "" for part in pipes),
    )


def _temperatures(part: PartResult, system: str) -> str:
    first = text(float(part.temperature), "temperature", system).rsplit(" ", 1)[0]
    last = text(float(part.outlet_temperature), "temperature", system).rsplit(" ", 1)[0]
    return first if first == last else f"{first} to {last}"


def _inside(part: PartResult) -> str:
    if part.inside_measured_range is None:
        return "not known"
    return "inside" if part.inside_measured_range else "outside"
