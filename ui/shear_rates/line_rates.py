"""The wall shear rates of the line, and the viscometer settings at which they would be seen."""

from __future__ import annotations

import numpy as np
import streamlit as st

from rheo.case import CaseResult
from rheo.geometry import Geometry
from rheo.geometry.convert import ShearPoint, shear_point_at_rate
from rheo.report import display
from rheo.report.numbers import number
from ui import state, table, words

SETTING_QUANTITY = {"angular_speed": "angular_speed", "flow": "flow"}


def instrument(result: CaseResult) -> Geometry | None:
    """Return the geometry of the readings; of the first tube where they are of several."""
    geometry = result.fitted.geometry
    if geometry is None or geometry.shape == ():
        return geometry
    return geometry.map(lambda value: value[0] if np.ndim(value) else value)


def show(result: CaseResult) -> None:
    """Draw the pipes of the line with their wall rates."""
    system = state.system()
    pipes = [part for part in result.line.parts if part.kind == "pipe"]
    geometry = instrument(result)
    rates = np.array([float(part.wall_rate) for part in pipes])
    points: ShearPoint | None = None
    if geometry is not None and rates.size and (rates > 0).all():
        points = shear_point_at_rate(result.model, geometry, rates)
    headings: list[str | table.Number] = [
        "Pipe",
        table.Number(f"Inside diameter [{display.unit_label('diameter', system)}]"),
        table.Number(f"Velocity [{display.unit_label('velocity', system)}]"),
        table.Number(f"Wall shear rate [{display.unit_label('rate', system)}]"),
        table.Number(f"Wall stress [{display.unit_label('stress', system)}]"),
        "Measured range",
    ]
    if points is not None and geometry is not None:
        quantity = SETTING_QUANTITY[geometry.record.setting]
        headings.append(table.Number(f"Viscometer [{display.unit_label(quantity, system)}]"))
    rows = []
    for place, part in enumerate(pipes):
        cells = [
            part.name,
            *(
                number(float(display.shown(value, quantity, system)))
                for value, quantity in (
                    (part.diameter, "diameter"),
                    (part.velocity, "velocity"),
                    (part.wall_rate, "rate"),
                    (part.wall_stress, "stress"),
                )
            ),
            _inside(part.inside_measured_range),
        ]
        if points is not None and geometry is not None:
            quantity = SETTING_QUANTITY[geometry.record.setting]
            cells.append(number(float(display.shown(points.setting[place], quantity, system))))
        outside = part.inside_measured_range is False
        rows.append(table.Row(cells, "flagged" if outside else ""))
    name = "" if geometry is None else f" Viscometer: {geometry.record.name}."
    table.show(headings, rows, f"At {words.flow_text(result, system)}.{name}")
    if geometry is None:
        st.caption(
            "State the geometry of your viscometer under Readings to see its speeds beside these."
        )


def _inside(inside: bool | None) -> str:
    if inside is None:
        return "not known"
    return "✓ inside" if inside else "! outside"
