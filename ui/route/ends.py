"""Where the line begins and ends: vessels, or open flanges."""

from __future__ import annotations

from typing import Any

import streamlit as st

from ui import cautions, fields, state
from ui.fields import NUMBER, TEXT, Field

_VESSEL = (
    Field("name", "Name", TEXT),
    Field(
        "level",
        "Liquid level",
        "length",
        "Height of the surface above the nozzle; negative when the nozzle lies above it.",
    ),
    Field("gauge_pressure", "Gauge pressure", "pressure", "On the surface; 0 when it is open."),
)
_LOSS = {
    "entrance": Field(
        "loss_coefficient",
        "Entrance K",
        NUMBER,
        "Left empty: that of a sharp edge, 0.5 + 160/Re (Hooper 1981), or of the kind of entrance "
        "that the case file names.",
    ),
    "exit": Field(
        "loss_coefficient", "Exit K", NUMBER, "Left empty: all of the kinetic energy is lost."
    ),
}


def show(side: str) -> None:
    """Draw the fields of the end on one side: ``suction`` or ``discharge``."""
    case = state.case()
    blocks = getattr(case.line, side)
    vessel = next((n for n, one in enumerate(blocks) if one.part == "vessel"), None)
    loss = "entrance" if side == "suction" else "exit"
    at_loss = next((n for n, one in enumerate(blocks) if one.part == loss), None)
    words = "Starts in a vessel" if side == "suction" else "Ends in a vessel"
    widget = state.key(f"route.{side}.vessel.{vessel is not None}")

    def take() -> None:
        wanted = bool(st.session_state[widget])
        state.attempt(f"route.{side}.end", state.change_document, _put(side, loss, wanted))

    left, right = st.columns([1, 4], vertical_alignment="bottom")
    with left:
        st.toggle(
            words,
            value=vessel is not None,
            key=widget,
            on_change=take,
            help="Without a vessel that end is a flange at atmospheric pressure.",
        )
    with right:
        if vessel is not None:
            columns = st.columns([3, 1]) if at_loss is not None else [st.container()]
            with columns[0]:
                fields.group(f"route.{side}.vessel", ("line", side, vessel), _VESSEL, columns=3)
            if at_loss is not None:
                with columns[1]:
                    path = ("line", side, at_loss)
                    fields.group(f"route.{side}.loss", path, (_LOSS[loss],), columns=1)
    cautions.complaint(state.complaint(f"route.{side}.end"))


def _put(side: str, loss: str, wanted: bool) -> Any:
    """Return an edit that puts a vessel with its entrance or exit to the end, or takes it away."""

    def edit(document: dict[str, Any]) -> None:
        line = document["line"]
        kept = [one for one in line.get(side, ()) if one["part"] not in ("vessel", loss)]
        if wanted:
            ends = [{"part": "vessel"}, {"part": loss}]
            kept = [*ends, *kept] if side == "suction" else [*kept, *ends[::-1]]
        line[side] = kept

    return edit
