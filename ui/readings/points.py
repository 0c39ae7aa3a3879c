"""The readings themselves: the picture, the table, and which of them are left out.

A point is left out or taken in by a click on it in the picture, or by its box in the table. The
table keeps its own edits while it is shown; a click in the picture makes it draw anew.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

import numpy as np
import streamlit as st

from rheo.case.load_readings import screened
from rheo.errors import Caution, InputError
from rheo.fitting.any_state import at_several_solids
from rheo.readings import FlowCurve, Readings
from rheo.report import display
from rheo.report.figures import flow_curve
from ui import cautions, pictures, results, state, words
from ui.readings import sets

# What the table shows of settings and readings, where they are there, and as which quantity.
_COLUMNS = (
    ("angular_speed", "Speed", "angular_speed"),
    ("torque", "Torque", "torque"),
    ("torque_fraction", "Torque", ""),
    ("dial", "Dial", ""),
    ("flow", "Flow", "flow"),
    ("velocity", "Velocity", "velocity"),
    ("pressure_drop", "Pressure drop", "pressure"),
    ("tube_diameter", "Tube", "diameter"),
    ("gap", "Gap", "diameter"),
)


def curve_of(readings: Readings) -> tuple[FlowCurve | None, str]:
    """Return the nominal flow curve, or why there is none."""
    try:
        return readings.flow_curve(), ""
    except InputError as error:
        return None, state.sentence(error)


def show_picture(readings: Readings) -> None:
    """Draw the flow curve of the readings; a click leaves a point out or takes it in."""
    curve, why = curve_of(readings)
    if curve is None:
        cautions.complaint(why)
        return
    excluded = _excluded(readings)
    flagged = np.zeros(len(readings), dtype=bool)
    flagged[list(words.flagged_points(state.case(), readings))] = True
    result = state.result()
    picture = flow_curve(
        curve.rate,
        curve.stress,
        temperature=curve.temperature,
        solids=curve.solids_fraction if at_several_solids(readings) else None,
        branch=curve.branch,
        excluded=excluded,
        flagged=flagged,
        in_line=None if result is None else result.wall_rates,
        viscosity=bool(st.session_state.get(state.key("readings.viscosity"))),
        system=state.system(),
    )
    widget = f"points.{sets.number()}.{results.digest(excluded.tolist(), state.version())}"

    def take() -> None:
        chosen = st.session_state[state.key(widget)]["selection"]["points"]
        clicked = {point["customdata"] for point in chosen if "customdata" in point}
        if clicked:
            state.attempt("points", toggle, clicked)
            state.touch()

    pictures.show(picture, state.key(widget), select=take, title=False)
    cautions.complaint(state.complaint("points"))


def show_table(readings: Readings) -> None:
    """Draw the table with a box for each reading."""
    number = sets.number()
    widget = state.key(f"table.{number}.{state.version()}")
    source = f"{widget}.source"
    if widget not in st.session_state or source not in st.session_state:
        st.session_state[source] = (_rows(readings), _excluded(readings).tolist())
    rows, excluded_before = st.session_state[source]

    def take() -> None:
        use = [not out for out in excluded_before]
        for row, edit in st.session_state[widget]["edited_rows"].items():
            use[int(row)] = bool(edit.get("Use", use[int(row)]))
        state.attempt("points", exclude, [i for i, used in enumerate(use) if not used])

    st.data_editor(
        rows,
        key=widget,
        on_change=take,
        hide_index=True,
        disabled=[name for name in rows if name != "Use"],
        column_config={
            "Use": st.column_config.CheckboxColumn(width="small"),
            "No.": st.column_config.NumberColumn(width="small"),
            **{
                name: st.column_config.NumberColumn(format=_format(values))
                for name, values in rows.items()
                if name not in ("No.", "Use") and values and isinstance(values[0], float)
            },
        },
        height=min(38 + 35 * len(readings), 420),
    )


def show_actions(readings: Readings) -> None:
    """Draw what can be done with all flagged points at once."""
    flagged = [
        i for i in words.flagged_points(state.case(), readings) if not _excluded(readings)[i]
    ]
    left_out = np.flatnonzero(_excluded(readings)).tolist()
    with st.container(horizontal=True):
        if flagged:
            st.button(
                f"Leave out the {words.count(len(flagged), 'flagged reading')}",
                icon=":material/filter_alt:",
                on_click=_act,
                args=([*left_out, *flagged],),
            )
        if left_out:
            st.button("Take all in again", icon=":material/undo:", on_click=_act, args=([],))


def doubts(readings: Readings) -> tuple[Caution, ...]:
    """Return what is doubtful in the readings, with what the reader noted first."""
    return (*readings.cautions, *screened(state.case(), readings))


def exclude(points: Iterable[int]) -> None:
    """Leave just these readings of the set shown out of the fit; counted from 0."""
    numbers = sorted({int(point) + 1 for point in points})
    state.change(("readings", sets.number(), "exclude"), numbers or None)


def toggle(points: Iterable[Any]) -> None:
    """Leave readings out that were in, and take in those that were out."""
    readings = sets.readings()
    if readings is None:
        return
    now = set(np.flatnonzero(_excluded(readings)).tolist())
    exclude(now ^ {int(np.ravel(point)[0]) for point in points})


def _format(values: list[float]) -> str:
    """Return a format with so many decimals that the middle value shows four digits."""
    middle = float(np.median(np.abs(values)))
    leading = int(np.floor(np.log10(middle))) if middle > 0 else 0
    return f"%.{min(max(3 - leading, 0), 6)}f"


def _act(points: list[int]) -> None:
    state.attempt("points", exclude, points)
    state.touch()


def _excluded(readings: Readings) -> np.ndarray:
    if readings.excluded is None:
        return np.zeros(len(readings), dtype=bool)
    return np.asarray(readings.excluded)


def _rows(readings: Readings) -> dict[str, list[Any]]:
    system = state.system()
    rows: dict[str, list[Any]] = {
        "No.": list(range(1, len(readings) + 1)),
        "Use": (~_excluded(readings)).tolist(),
    }
    reasons: list[list[str]] = [[] for _ in range(len(readings))]
    for caution in screened(state.case(), readings):
        for point in caution.points:
            reasons[point].append(caution.code.replace("-", " "))
    rows["Flag"] = [", ".join(found) for found in reasons]
    if readings.temperature is not None:
        unit = display.unit_label("temperature", system)
        rows[f"T [{unit}]"] = display.shown(readings.temperature, "temperature", system).tolist()
    if readings.solids_fraction is not None:
        by = f" by {readings.solids_basis}" if readings.solids_basis else ""
        rows[f"Solids [%{by}]"] = (100.0 * readings.solids_fraction).tolist()
    if readings.branch is not None:
        rows["Branch"] = [str(word) for word in readings.branch]
    for key, name, quantity in _COLUMNS:
        values = getattr(readings, key)
        if values is None:
            continue
        if quantity:
            unit = display.unit_label(quantity, system)
            rows[f"{name} [{unit}]"] = display.shown(values, quantity, system).tolist()
        elif key == "torque_fraction":
            rows[f"{name} [%]"] = (100.0 * np.asarray(values)).tolist()
        else:
            rows[f"{name} [°]"] = np.asarray(values).tolist()
    curve, _ = curve_of(readings)
    if curve is not None:
        for name, values, quantity in (
            ("Rate γ̇", curve.rate, "rate"),
            ("Stress τ", curve.stress, "stress"),
            ("Viscosity η", curve.viscosity, "viscosity"),
        ):
            unit = display.unit_label(quantity, system)
            rows[f"{name} [{unit}]"] = display.shown(values, quantity, system).tolist()
    return rows
