"""Limits, costs, and which sizes are compared: all of them values of the case."""

from __future__ import annotations

from typing import Any

import streamlit as st

from rheo.case import CaseResult
from rheo.case.result import sizes_to_compare
from rheo.errors import InputError
from rheo.line.catalogue import STANDARDS
from rheo.report import display
from ui import fields, state
from ui.fields import NUMBER, SHARE, TEXT, Field
from ui.route.editor import STEEL

_LIMITS = (
    Field("pressure", "Pressure ≤", "pressure", "Of the pump's pressure rise."),
    Field("start_up_pressure", "Start-up pressure ≤", "pressure"),
    Field("max_velocity", "Velocity ≤", "velocity"),
    Field("min_velocity", "Velocity ≥", "velocity", "So that nothing settles."),
    Field("max_wall_rate", "Wall shear rate ≤", "rate", "What the product bears."),
    Field("min_hold_time", "Hold time ≥", "time", "Of the fastest particle."),
    Field("max_residence_time", "Time in the line ≤", "time"),
    Field("min_npsh", "NPSH available ≥", "length"),
)
_COST = (
    Field("energy_price", "Energy price a kWh", NUMBER),
    Field("currency", "Currency", TEXT),
    Field("annual_charge", "Yearly charge on capital", SHARE, "Interest, depreciation, upkeep."),
    Field("capital_price", "Installed price a metre", NUMBER),
    Field("capital_at_diameter", "at the inside diameter", "diameter"),
    Field("capital_exponent", "rising with the power", NUMBER, "1.5 for steel pipe (textbook)."),
)
_SIZES = (
    Field("smallest", "Smallest inside", "diameter"),
    Field("largest", "Largest inside", "diameter"),
    Field(
        "confidence",
        "Confidence wanted",
        SHARE,
        "Share of the likely flow curves with which a size must keep every limit.",
    ),
    Field("flow_spread", "Flow, more or less", SHARE, "How the choice moves with the flow."),
)


def show(result: CaseResult) -> None:
    """Draw the limits, the costs and the choice of sizes."""
    left, right = st.columns([3, 1], vertical_alignment="bottom")
    with left:
        fields.group("limits", ("limits",), _with_pump_values(result), columns=4)
    with right:
        fields.choice(
            "Regime",
            ("limits", "regime"),
            {None: "any", "laminar": "laminar", "turbulent": "turbulent"},
        )
        fields.switch(
            "Measured range only",
            ("limits", "keep_to_measured_rates"),
            help="Only sizes whose wall shear rates the viscometer has seen pass.",
        )


def show_cost() -> None:
    """Draw how costs are counted."""
    case = state.case()
    hours = Field("hours_a_year", "Hours a year", NUMBER)
    fields.group("sizes.hours", ("duty",), (hours,), columns=4)
    if case.pump is None or not case.pump.has_efficiency:
        st.caption("Costs need the pump's efficiency: give it under Route, Pump.")
    draft: dict[str, Any] | None = None if case.cost is not None else {}
    fields.group("cost", ("cost",), _COST, columns=3, draft=draft, needs=("energy_price",))


def show_sizes(result: CaseResult) -> None:
    """Draw which sizes are compared."""
    case = state.case()
    now = None if case.sizes is None else case.sizes.standard
    keys = [None, *STANDARDS]
    left, right = st.columns(2)
    with left:
        st.selectbox(
            "Sizes of",
            keys,
            index=keys.index(now) if now in keys else 0,
            format_func=lambda key: key or "the standard of the first free pipe",
            key=(widget := state.key(f"sizes.standard.{now}")),
            on_change=lambda: state.attempt("sizes.standard", _take_standard, widget),
        )
    if now in STEEL:
        with right:
            fields.choice("Schedule", ("sizes", "schedule"), {one: one for one in STEEL[str(now)]})
    if case.sizes is not None:
        fields.group("sizes", ("sizes",), _SIZES, columns=4)
    try:
        count = len(sizes_to_compare(result.case))
    except InputError:
        count = 0
    st.caption(f"{count} sizes are compared.")


def _take_standard(widget: str) -> None:
    standard = st.session_state[widget]

    def edit(document: dict[str, Any]) -> None:
        if standard is None:
            document.pop("sizes", None)
            return
        old = document.get("sizes", {})
        kept = {key: old[key] for key in ("confidence", "flow_spread") if key in old}
        document["sizes"] = {"standard": standard, **kept}
        if standard in STEEL:
            document["sizes"]["schedule"] = "40S" if standard == "ASME B36.19M" else "40"

    state.change_document(edit)


def _with_pump_values(result: CaseResult) -> tuple[Field, ...]:
    """The limits; where the pump gives one that the case leaves open, it shows as placeholder."""
    system = state.system()
    given = result.limits
    found = []
    for one in _LIMITS:
        value = getattr(given, one.key)
        own = getattr(result.case.limits, one.key)
        words = "none"
        if value is not None and own is None:
            words = f"{display.text(value, one.kind, system)}, the pump's"
        found.append(Field(one.key, one.label, one.kind, one.help, words))
    return tuple(found)
