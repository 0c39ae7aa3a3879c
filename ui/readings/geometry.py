"""Where the fluid was sheared: the instrument's geometry and its dimensions."""

from __future__ import annotations

from contextlib import nullcontext
from typing import Any

import numpy as np
import streamlit as st

from rheo.geometry import GeometryRecord, geometry_record, geometry_records
from rheo.geometry.record import Dimension
from rheo.report import display
from ui import cautions, dimension, results, state, units_switch
from ui.readings import sets

NONE = ""
NONE_WORDS = "none: shear rate and stress as the instrument gives them"


def show() -> None:
    """Draw the geometry, its dimensions, and what goes with the instrument."""
    number, block, readings = sets.number(), sets.block(), sets.readings()
    in_use = None if readings is None or readings.geometry is None else readings.geometry
    kind = block.geometry.kind if block.geometry else in_use.key if in_use else NONE
    options = [NONE, *geometry_records()]
    widget = state.key(f"geometry.{number}.{kind}")

    def take() -> None:
        state.attempt("geometry", choose_kind, number, st.session_state[widget])
        state.touch()

    st.selectbox(
        "Measured in",
        options,
        index=options.index(kind),
        format_func=lambda key: geometry_record(key).name if key else NONE_WORDS,
        key=widget,
        on_change=take,
    )
    if kind:
        record = geometry_record(kind)
        columns = st.columns(min(len(record.dimensions), 4), vertical_alignment="bottom")
        for place, one in enumerate(record.dimensions):
            with columns[place % len(columns)]:
                _show_dimension(number, record, one)
        if block.geometry is None and in_use is not None:
            st.caption("As the file states it. What you write here wins.")
    cautions.complaint(state.complaint("geometry"))
    if kind:
        _show_instrument(number, geometry_record(kind))


def choose_kind(number: int, kind: str) -> None:
    """Take another geometry, with its standard dimensions where it has them.

    Raises
    ------
    InputError
        If the case would not be valid.
    """
    if not kind:
        state.change(("readings", number, "geometry"), None)
        return
    record = geometry_record(kind)
    given = {
        one.key: dimension.written(one, one.default) for one in record.dimensions if one.default
    }
    state.change(("readings", number, "geometry"), {"kind": kind, **given})
    state.change(("readings", number, "nominal_form"), None)


def _show_dimension(number: int, record: GeometryRecord, one: Dimension) -> None:
    value, system = _value(number, one.key), state.system()
    by_reading = value is not None and np.ndim(value) > 0
    shown = "by reading" if by_reading else ""
    if value is not None and not by_reading:
        shown = dimension.text(record, one, float(value), system)
    widget = state.key(f"geometry.{one.key}.{number}.{record.key}.{shown}.{system}")

    def take() -> None:
        typed = str(st.session_state[widget]).strip()
        if typed and typed != shown:
            state.attempt("geometry", change_dimension, number, record, one, typed)
            state.touch()

    st.text_input(
        dimension.label(one),
        value=shown,
        key=widget,
        on_change=take,
        disabled=by_reading,
        placeholder="such as 12.5 mm" if one.unit == "m" else None,
    )


def change_dimension(number: int, record: GeometryRecord, changed: Dimension, typed: str) -> None:
    """Put one dimension into the case; those that the file states stay as they are.

    Raises
    ------
    InputError
        If it is no such quantity, or is out of range.
    """
    block = state.case().readings[number]
    given: dict[str, Any] = {"kind": record.key}
    for one in record.dimensions:
        value = _value(number, one.key)
        if block.geometry is not None and one.key in block.geometry.dimensions:
            given[one.key] = block.geometry.write()[one.key]
        elif value is not None and np.ndim(value) == 0:
            given[one.key] = dimension.written(one, float(value))
    given[changed.key] = dimension.with_unit(record, changed, typed, state.system())
    new = state.changed(state.case(), ("readings", number, "geometry"), given)
    problem = results.readings_of(new, state.files()).problem
    if problem is not None and state.readings() is not None:
        raise problem
    state.put(new)


def _value(number: int, key: str) -> Any:
    """Return a dimension: of the case, else of the readings; None where it is not known."""
    block = state.case().readings[number]
    if block.geometry is not None and key in block.geometry.dimensions:
        return float(block.geometry.dimensions[key])
    sets_read = state.readings()
    geometry = None if sets_read is None else sets_read[number].geometry
    if geometry is None or (block.geometry is not None and geometry.key != block.geometry.kind):
        return None
    value = geometry.dimensions.get(key)
    return value if value is None or np.ndim(value) else float(value)


def _show_instrument(number: int, record: GeometryRecord) -> None:
    readings, system = sets.readings(), state.system()
    columns = st.columns(3, vertical_alignment="bottom")
    by_torque = record.reading == "torque"
    of_spring = by_torque or (readings is not None and readings.dial is not None)
    with columns[0] if of_spring else nullcontext():
        if by_torque:
            stated = None if readings is None else readings.full_scale_torque
            units_switch.entry(
                "Torque at full scale",
                ("readings", number, "full_scale_torque"),
                "torque",
                optional=True,
                placeholder=None
                if stated is None
                else f"{display.text(stated, 'torque', system)} (from the file)",
                help="Readings under 10 % of it are flagged.",
            )
        if readings is not None and readings.dial is not None:
            units_switch.entry(
                "Stress per degree of the dial",
                ("readings", number, "stress_per_degree"),
                "stress",
                optional=True,
                placeholder=f"{display.text(readings.stress_per_degree, 'stress', system)}",
            )
    with columns[1 if of_spring else 0]:
        particle = None if readings is None else readings.particle_diameter
        units_switch.entry(
            "Largest particle",
            ("readings", number, "particle_diameter"),
            "diameter",
            optional=True,
            placeholder="none given"
            if particle is None
            else f"{display.text(particle, 'diameter', system)} (from the file)",
            help="A gap under ten particles is flagged.",
        )
    with columns[2 if of_spring else 1]:
        _show_form(number, record)


def _show_form(number: int, record: GeometryRecord) -> None:
    forms = list(record.nominal_forms)
    if len(forms) < 2:
        return
    readings = sets.readings()
    current = (readings.nominal_form if readings is not None else None) or forms[0]
    widget = state.key(f"form.{number}.{record.key}.{current}")

    def take() -> None:
        path = ("readings", number, "nominal_form")
        state.attempt("geometry", state.change, path, st.session_state[widget])
        state.touch()

    st.selectbox(
        "Newtonian conversion",
        forms,
        index=forms.index(current) if current in forms else 0,
        key=widget,
        on_change=take,
        help=record.nominal_note,
    )
