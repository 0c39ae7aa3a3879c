"""Sizes: every size against the limits, what each costs, and which to take."""

from __future__ import annotations

import streamlit as st

from rheo.case import CaseResult
from rheo.line.sizing import Sizing
from rheo.report.case_pictures import currency, sizes_picture
from rheo.report.sections.sizes import sizes_table
from ui import answer_strip, blocks, cautions, pictures, places, state, table, walk, work
from ui.sizes import choice, limits


def show() -> None:
    """Draw the stop."""
    st.header("Sizes")
    result = answer_strip.need_result()
    found = work.outcome("sizes", "Comparing sizes", result, result.compare_sizes)
    if found is not None and found.value is not None:
        _show_sizing(result, found.value)
    elif found is not None and found.problem is not None:
        cautions.complaint(state.sentence(found.problem))
    cautions.show(places.at("sizes", result))
    _show_inputs(result)
    cautions.safety("pressure", "start-up", "food-safety")
    walk.onward("sizes")


def _show_sizing(result: CaseResult, sizing: Sizing) -> None:
    system = state.system()
    choice.show(result, sizing)
    cautions.show(sizing.cautions)
    choice.show_steps(result, sizing)
    picture = sizes_picture(result, system)
    if picture is not None:
        pictures.show(picture, "sizes.picture", title=False)
        st.caption(picture.description)
    with st.container(key="sizes_table"):
        blocks.show(sizes_table(sizing, currency(result), system), "sizes.table")
    st.markdown("**How the choice moves**")
    choice.show_moves(sizing, system)
    with st.expander("More about each size: hold time, NPSH, cleaning"):
        table.show(*choice.more_rows(sizing, system), "Cleaning at 1.5 m/s with water.")


def _show_inputs(result: CaseResult) -> None:
    with st.expander("Limits", expanded=True):
        limits.show(result)
    with st.expander("Costs"):
        limits.show_cost()
    with st.expander("Sizes compared, confidence and flow"):
        limits.show_sizes(result)


show()
