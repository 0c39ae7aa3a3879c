"""Pressure: how much, along the line, with the pump, at start-up, and how wrong it could be."""

from __future__ import annotations

import streamlit as st

from ui import answer_strip, state, style, walk
from ui.pressure import views, what_if


def show() -> None:
    """Draw the stop."""
    st.header("Pressure")
    result = answer_strip.need_result()
    st.html(f'<p class="rheo-text lead">{style.escape(what_if.lead(result, state.system()))}</p>')
    views.show_cautions(result)
    what_if.show(result)
    views.show(result)
    walk.onward("pressure")


show()
