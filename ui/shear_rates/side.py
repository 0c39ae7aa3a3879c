"""One side of the converter: a geometry with its dimensions, entered in the units shown.

What is entered is kept in the session under a key of this module; it is no part of the case.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
import streamlit as st

from rheo.case import CaseResult
from rheo.errors import InputError
from rheo.geometry import (
    Geometry,
    GeometryRecord,
    geometry_record,
    geometry_records,
    make_geometry,
)
from rheo.geometry.record import Dimension
from rheo.report import display
from rheo.report.numbers import exact
from rheo.units import parse_quantity
from ui import dimension, state, units_switch
from ui.shear_rates.line_rates import instrument

_KEY = "rheo.converter"


def entered(side: str) -> dict[str, str]:
    """Return what was entered on a side, by name; changed in place."""
    everything: dict[str, dict[str, str]] = st.session_state.setdefault(_KEY, {})
    return everything.setdefault(state.key(side), {})


def show(side: str, result: CaseResult, default: str) -> Geometry:
    """Draw the geometry of a side and return it.

    Raises
    ------
    InputError
        While a dimension is missing or cannot be used.
    """
    kept = entered(side)
    kinds = list(geometry_records())
    kind = kept.get("kind", default)
    widget = state.key(f"converter.{side}.kind")

    def take() -> None:
        kept.clear()
        kept["kind"] = st.session_state[widget]

    st.selectbox(
        "In" if side == "source" else "Wanted in",
        kinds,
        index=kinds.index(kind),
        format_func=lambda key: geometry_record(key).name,
        key=widget,
        on_change=take,
    )
    record = geometry_record(kind)
    known = known_dimensions(result, kind)
    values: dict[str, float] = {}
    missing = []
    # End corrections that are zero in a plain geometry would only crowd the converter.
    asked = [one for one in record.dimensions if one.default != 0]
    columns: Sequence[Any] = ()
    for place, one in enumerate(asked):
        if place % 2 == 0:
            columns = st.columns(2, vertical_alignment="bottom")
        with columns[place % 2]:
            typed = _field(side, record, one, known.get(one.key))
        if typed:
            values[one.key] = dimension.read(record, one, typed, state.system())
        else:
            missing.append(one.description)
    if missing:
        raise InputError(f"give the {' and the '.join(missing)} of the {record.name}")
    return make_geometry(kind, **values)


def setting(side: str, geometry: Geometry, default: float | None) -> float | None:
    """Draw the flow or speed of a side and return it in SI; None while it is empty."""
    quantity = geometry.record.setting
    shown = "" if default is None else text(default, quantity)
    typed = field("Flow" if quantity == "flow" else "Speed", side, f"setting.{quantity}", shown)
    if not typed:
        return None
    unit = display.QUANTITIES[quantity].unit
    return parse_quantity(units_switch.with_unit(typed, quantity, state.system()), unit)


def known_dimensions(result: CaseResult, kind: str) -> dict[str, float]:
    """Return dimensions that the case knows: of its instrument, else of its widest-run pipe."""
    geometry = instrument(result)
    if geometry is not None and geometry.key == kind and kind != "tube":
        return {key: float(value) for key, value in geometry.dimensions.items()}
    pipes = list(result.line.line.pipes())
    if kind == "tube" and pipes:
        longest = max(pipes, key=lambda pipe: float(np.max(pipe.length)))
        return {"diameter": float(longest.diameter), "length": float(np.max(longest.length))}
    record = geometry_record(kind)
    return {one.key: one.default for one in record.dimensions if one.default is not None}


def text(value: float, quantity: str) -> str:
    """Return an SI value as the fields show it."""
    system = state.system()
    shown = exact(float(display.shown(value, quantity, system)))
    return f"{shown} {display.unit_label(quantity, system)}"


def field(label: str, side: str, name: str, default: str, **more: Any) -> str:
    """Draw a text field that keeps what was entered; return its text."""
    kept = entered(side)
    shown = kept.get(name, default)
    widget = state.key(f"converter.{side}.{name}.{shown}.{state.system()}")

    def take() -> None:
        kept[name] = str(st.session_state[widget]).strip()

    return st.text_input(label, value=shown, key=widget, on_change=take, **more).strip()


def _field(side: str, record: GeometryRecord, one: Dimension, known: float | None) -> str:
    system = state.system()
    default = "" if known is None else dimension.text(record, one, known, system)
    return field(dimension.label(one), side, f"{record.key}.{one.key}", default)
