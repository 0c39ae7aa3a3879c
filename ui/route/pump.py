"""The pump: of which kind, what it can do."""

from __future__ import annotations

from typing import Any

import streamlit as st

from rheo.report import display
from ui import cautions, fields, state
from ui.fields import COUNT, NUMBER, SHARE, TEXT, Field
from ui.route import editor

KINDS = {
    "duty": "Only the duty is known",
    "centrifugal": "Centrifugal, by its curve",
    "positive-displacement": "Positive displacement",
}
_RATED = Field(
    "rated_pressure",
    "Rated pressure",
    "pressure",
    "What it may give. The start-up pressure is held against it.",
)
_EFFICIENCY = Field("efficiency", "Efficiency", SHARE, "Hydraulic power over shaft power.")
_FIELDS = {
    "duty": (Field("name", "Name", TEXT), _RATED, _EFFICIENCY),
    "centrifugal": (
        Field("name", "Name", TEXT),
        Field(
            "speed",
            "Speed",
            "angular_speed",
            "With it, a curve taken with water is corrected for viscosity.",
        ),
        Field("stages", "Stages", COUNT),
        _RATED,
        Field("efficiency", "Efficiency", SHARE, "Where the points give none."),
    ),
    "positive-displacement": (
        Field("name", "Name", TEXT),
        Field("displacement", "Volume a revolution", "volume"),
        Field("speed", "Speed", "angular_speed"),
        _RATED,
        Field("slip_flow", "Slip", "flow", "Flow that leaks back at the pressure beside it."),
        Field("slip_pressure", "at the pressure", "pressure"),
        Field(
            "slip_exponent", "Exponent of the slip", NUMBER, "1 viscous leakage, 0.5 thin liquids."
        ),
        _EFFICIENCY,
        Field("npsh_required", "NPSH required", "length"),
    ),
}
_NEEDS = {"positive-displacement": ("displacement", "speed", "rated_pressure")}
POINTS = (
    Field("flow", "Flow", "flow"),
    Field("head", "Head", "length"),
    Field("efficiency", "Efficiency", SHARE),
    Field("npsh_required", "NPSH required", "length"),
)


def show() -> None:
    """Draw the choice of the pump and its values."""
    pump = state.case().pump
    now = "duty" if pump is None else pump.kind
    chosen = st.segmented_control(
        "Pump",
        list(KINDS),
        default=now,
        required=True,
        format_func=KINDS.__getitem__,
        key=state.key(f"pump.kind.{now}"),
        label_visibility="collapsed",
    )
    kind = str(chosen or now)
    new = kind != now
    draft: dict[str, Any] | None = {"kind": kind} if new or pump is None else None
    if kind == "centrifugal":
        _show_points(new)
        if new:
            st.caption("Give at least two points of the curve; then this pump takes its place.")
            return
    elif new and kind == "positive-displacement":
        st.caption(
            "Give the volume a revolution, the speed and the rated pressure; then this pump takes "
            "the place of the other."
        )
    elif new:
        st.caption(
            "Give its rating or its efficiency; then this pump takes the place of the other."
        )
    needs = _NEEDS.get(kind, ()) if draft is not None else ()
    fields.group(f"pump.{kind}", ("pump",), _FIELDS[kind], columns=3, draft=draft, needs=needs)
    if kind == "centrifugal":
        fields.switch("The curve was taken with water", ("pump", "for_water"))


def headings(system: str) -> dict[str, str]:
    """Return key of each column of the curve by its heading."""
    found = {}
    for one in POINTS:
        unit = "%" if one.kind == SHARE else display.unit_label(one.kind, system)
        found[f"{one.label} [{unit}]"] = one.key
    return found


def points_of(rows: list[dict[str, str]]) -> list[dict[str, Any]]:
    """Return the points of a curve as plain data of the case, from texts by key."""
    by_key = {one.key: one for one in POINTS}
    return [
        {key: by_key[key].written(text) for key, text in row.items() if text}
        for row in rows
        if any(row.values())
    ]


def _show_points(new: bool) -> None:
    system = state.system()
    columns = headings(system)
    widget = state.key(f"pump.points.{new}.{system}.{state.version()}")
    source = f"{widget}.source"
    if widget not in st.session_state or source not in st.session_state:
        st.session_state[source] = [] if new else _rows()
    rows: list[dict[str, str]] = st.session_state[source]
    keys = {key: heading for heading, key in columns.items()}
    shown = {heading: [row.get(key, "") for row in rows] for heading, key in columns.items()}

    def take() -> None:
        edits = st.session_state[widget]
        gone = set(edits["deleted_rows"])
        found = []
        for number, row in enumerate(rows):
            cells = edits["edited_rows"].get(number, {})
            if number not in gone:
                found.append({key: _text(cells.get(keys[key], row.get(key))) for key in keys})
        found += [
            {key: _text(cells.get(keys[key])) for key in keys} for cells in edits["added_rows"]
        ]
        state.attempt("pump.points", state.change_document, _put(points_of(found), new))

    st.data_editor(
        editor.text_table(shown),
        key=widget,
        on_change=take,
        num_rows="dynamic",
        hide_index=True,
        column_config={
            heading: st.column_config.TextColumn(alignment="right", width=166)
            for heading in columns
        },
        width="content",
        alt="Points of the pump's curve",
    )
    cautions.complaint(state.complaint("pump.points"))


def _put(points: list[dict[str, Any]], new: bool) -> Any:
    def edit(document: dict[str, Any]) -> None:
        if new:
            document["pump"] = {"kind": "centrifugal"}
        document["pump"]["points"] = points

    return edit


def _text(value: Any) -> str:
    return "" if value is None else str(value).strip()


def _rows() -> list[dict[str, str]]:
    pump = state.case().pump
    return [
        {one.key: one.shown(getattr(point, one.key)).rsplit(" ", 1)[0] for one in POINTS}
        for point in getattr(pump, "points", ())
    ]
