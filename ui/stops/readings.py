"""Readings: where they come from, what was understood, which of them are doubtful."""

from __future__ import annotations

import streamlit as st

from ui import answer_strip, cautions, fields, opening, state, style, units_switch, walk, words
from ui.fields import Field
from ui.readings import geometry, mapping, points, sets, solids, source

_AT_REST_AND_HOT = (
    Field(
        "static_yield_stress",
        "Static yield stress",
        "stress",
        "What a start after a stop must overcome; by a vane, after the longest stop. It is often "
        "higher than the yield stress of the flowing product.",
        "that of the flow curve",
    ),
    Field(
        "vapour_pressure",
        "Vapour pressure",
        "pressure",
        "Absolute, at the temperature of the suction; for NPSH and for boiling on the way.",
        "not known",
    ),
    Field(
        "heat_capacity",
        "Heat capacity",
        "heat_capacity",
        "For the warming by friction and for cooling along the line.",
        "not known",
    ),
)


def show() -> None:
    """Draw the stop."""
    st.header("Readings")
    answer_strip.show()
    _show_borrowed()
    source.show()
    sets.show()
    readings = sets.readings()
    if readings is None:
        st.markdown("**Say which column is which**")
        st.caption("Choose for each column of the file what it holds.")
        mapping.show()
        with st.expander("Instrument: geometry and full scale", expanded=True):
            geometry.show()
    else:
        _show_readings()
    cautions.safety("pressure", "start-up")
    walk.onward("readings")


def _show_readings() -> None:
    readings = sets.readings()
    if readings is None:
        return
    left, right = st.columns([3, 2], gap="medium")
    with left:
        with st.container(horizontal=True, horizontal_alignment="distribute"):
            st.markdown(f"**{style.plain(sets.label(sets.number()))}**")
            st.segmented_control(
                "Draw",
                (False, True),
                default=False,
                required=True,
                format_func=lambda viscosity: "Viscosity" if viscosity else "Stress",
                key=state.key("readings.viscosity"),
                label_visibility="collapsed",
            )
        points.show_picture(readings)
        st.caption(
            "Click a point to leave it out of the fit, or to take it in again. In the table, pick "
            "its box and press Enter, or click twice."
        )
    with right:
        st.markdown(f"**{style.plain(words.readings_state(state.case(), (readings,)))}**")
        doubts = points.doubts(readings)
        cautions.show(doubts)
        if not doubts:
            st.write("Nothing in them is doubtful.")
        points.show_actions(readings)
        st.caption(
            "Flagged readings stay in the fit until you leave them out: the program never drops "
            "one by itself."
        )
    points.show_table(readings)
    curve, _ = points.curve_of(readings)
    with st.expander("Instrument: geometry and full scale", expanded=curve is None):
        geometry.show()
    with st.expander("Columns and units, as understood"):
        mapping.show()
    with st.expander("Product, sweep, temperature and solids"):
        _show_product()


def _show_borrowed() -> None:
    """Say what is still the sample's once the readings are the user's own."""
    parts = opening.borrowed()
    if not parts:
        return
    listed = " and ".join([", ".join(parts[:-1]), parts[-1]] if len(parts) > 1 else parts)
    verb = "is" if len(parts) == 1 else "are"
    cautions.note(
        f"The {listed} {verb} still the sample's. Set the product's density and static "
        "yield stress below, and duty and line under Route, before you use the pressure drop."
    )


def _show_product() -> None:
    number, readings = sets.number(), sets.readings()
    columns = st.columns(3)
    with columns[0]:
        _show_name()
    with columns[1]:
        units_switch.entry("Density", ("product", "density"), "density")
    with columns[2]:
        units_switch.entry(
            "Temperature at the head of the line",
            ("product", "temperature"),
            "temperature",
            optional=True,
            placeholder="that of the readings",
        )
    fields.group("product.more", ("product",), _AT_REST_AND_HOT, columns=3)
    columns = st.columns(3)
    with columns[0]:
        _show_sweep(number)
    with columns[1]:
        if readings is None or not any(
            column.quantity == "temperature" for column in readings.columns
        ):
            units_switch.entry(
                "Temperature of these readings",
                ("readings", number, "temperature"),
                "temperature",
                optional=True,
                placeholder="not known",
            )
    columns = st.columns(3)
    with columns[0]:
        solids.entry(
            "Solids of the product", ("product", "solids_fraction"), "that of the readings"
        )
    with columns[1]:
        if readings is None or not any(
            column.quantity == "solids_fraction" for column in readings.columns
        ):
            solids.entry(
                "Solids of these readings", ("readings", number, "solids_fraction"), "not known"
            )


def _show_name() -> None:
    current = state.case().product.name
    widget = state.key(f"product.{current}")

    def take() -> None:
        typed = str(st.session_state[widget]).strip()
        if typed:
            state.attempt("product", state.change, ("product", "name"), typed)

    st.text_input("Product", value=current, key=widget, on_change=take)
    cautions.complaint(state.complaint("product"))


def _show_sweep(number: int) -> None:
    current = state.case().readings[number].sweep
    names = {"both": "all of it", "up": "rising only", "down": "falling only"}
    widget = state.key(f"sweep.{number}.{current}")

    def take() -> None:
        state.attempt(
            "sweep", state.change, ("readings", number, "sweep"), st.session_state[widget]
        )

    st.selectbox(
        "Sweep to fit",
        list(names),
        index=list(names).index(current),
        format_func=names.__getitem__,
        key=widget,
        on_change=take,
        help="Where rising and falling branch differ, take the one that the line will see: a "
        "product sheared for minutes behaves as on the falling branch.",
    )
    cautions.complaint(state.complaint("sweep"))


show()
