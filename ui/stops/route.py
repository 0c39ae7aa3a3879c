"""Route: the parts of the line in their order, the duty, the pump, and a drawing with pressures."""

from __future__ import annotations

import streamlit as st

from rheo.case import CaseResult
from rheo.report.case_pictures import drawing_picture
from rheo.report.sections.route import breakdown_table, pipes_table
from ui import answer_strip, blocks, cautions, pictures, places, state, walk
from ui.route import detail, duty, editor, ends, parts, pump


def show() -> None:
    """Draw the stop."""
    st.header("Route")
    result = answer_strip.show()
    duty.show_borrowed()
    if result is not None:
        pictures.show(drawing_picture(result, state.system()), "route.drawing", title=False)
    sizes = duty.show()
    for side, words in parts.SIDES.items():
        st.subheader(words[:1].upper() + words[1:])
        if side == "suction":
            ends.show(side)
            editor.show(side, sizes)
        else:
            editor.show(side, sizes)
            ends.show(side)
    if result is not None:
        cautions.show(places.at("route", result))
    with st.expander("One part in detail: order, temperature, roughness", expanded=False):
        detail.show()
    with st.expander("Pump", expanded=False):
        pump.show()
    if result is not None:
        _show_results(result)
    cautions.safety("pressure", "start-up")
    walk.onward("route")


def _show_results(result: CaseResult) -> None:
    with st.expander("What each part takes", expanded=True):
        blocks.show(breakdown_table(result.line, state.system()), "route.breakdown")
        blocks.show(pipes_table(result.line, state.system()), "route.pipes")


show()
