"""Holding tube and cleaning in place."""

from __future__ import annotations

from typing import Any

import streamlit as st

from rheo.case import CaseResult
from rheo.line.cleaning import cleaning
from rheo.report import display
from rheo.report.document import Section
from rheo.report.sections.starting import cleaning_section, holding_section
from ui import blocks, cautions, fields, state
from ui.fields import Field
from ui.route import parts

_HOLDING = (
    Field("hold_time", "Hold time", "time", placeholder="such as 30 s"),
    Field(
        "inside_diameter",
        "Inside diameter",
        "diameter",
        "Of the holding tube.",
    ),
    Field(
        "temperature",
        "Temperature",
        "temperature",
        "Of the product while it is held; left empty, that of the product in the line.",
    ),
)
_CLEANING = (
    Field("velocity", "Velocity wanted", "velocity", "1.5 m/s is common practice."),
    Field("temperature", "Water at", "temperature"),
)


def show(result: CaseResult) -> None:
    """Draw the holding tube that is asked for, and what cleans the line."""
    system = state.system()
    left, right = st.columns(2, gap="large")
    with left:
        st.markdown("**How long must the holding tube be?**")
        _holding_fields()
        tube = result.holding
        if tube is None:
            st.caption("Give a hold time and a diameter to see the length of tube it takes.")
        else:
            _show(holding_section(tube, system), "holding")
    with right:
        st.markdown("**What flow cleans this line?**")
        draft: dict[str, Any] | None = None if result.case.cleaning is not None else {}
        fields.group("cleaning", ("cleaning",), _CLEANING, columns=2, draft=draft, then=_again)
        wash = result.cleaning or cleaning(result.line.line)
        _show(cleaning_section(wash, system), "cleaning")
        st.caption("Sizes shows it for every size.")
    again = st.session_state.pop("rheo.holding.again", False)
    if again:
        st.rerun()


def _show(section: Section, key: str) -> None:
    with st.container(key=f"facts_beside_{key}"):
        for block in section.blocks:
            if getattr(block, "kind", "") != "safety":
                blocks.show(block, f"pressure.{key}")


def _again() -> None:
    st.session_state["rheo.holding.again"] = True


def _holding_fields() -> None:
    block = state.case().holding_tube
    draft: dict[str, Any] | None = None
    needs: tuple[str, ...] = ()
    shown: tuple[Field, ...] = _HOLDING
    if block is None:
        draft, needs = {}, ("hold_time", "inside_diameter")
        size = parts.first_size(state.case())
        if size is not None:
            own = display.text(size.inside_diameter, "diameter", state.system())
            st.caption(f"The pipes of the line have {own} inside.")
    elif block.size is not None:
        shown = tuple(one for one in _HOLDING if one.key != "inside_diameter")
    fields.group(
        "holding", ("holding_tube",), shown, columns=3, draft=draft, needs=needs, then=_again
    )
    if block is not None:
        st.button(
            "Leave the holding tube out",
            on_click=_leave_out,
        )
    cautions.complaint(state.complaint("holding.out"))


def _leave_out() -> None:
    def act() -> None:
        state.change(("holding_tube",), None)
        _again()

    state.attempt("holding.out", act)
