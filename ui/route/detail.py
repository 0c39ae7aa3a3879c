"""One part in detail: where it stands, and the values for which the table has no room."""

from __future__ import annotations

from typing import Any

import streamlit as st

from ui import cautions, fields, state
from ui.fields import NUMBER, Field
from ui.route import parts

_PIPE = (
    (
        "pipe",
        (
            Field("roughness", "Roughness", "roughness", "Height of the equivalent sand roughness"),
            Field(
                "temperature",
                "Temperature in it",
                "temperature",
                "Left empty: the temperature at which the product arrives.",
            ),
        ),
    ),
    (
        "heat",
        (
            Field("ambient_temperature", "Surroundings", "temperature"),
            Field(
                "heat_transfer_coefficient",
                "Heat transfer coefficient",
                "heat_transfer",
                "Overall, on the inside area. With the temperature of the surroundings it says "
                "how the product cools or warms on its way.",
            ),
        ),
    ),
)
_EQUIPMENT = (
    (
        "loss",
        (
            Field("loss", "Loss", "pressure", "With this product."),
            Field("at_flow", "at the flow", "flow"),
            Field(
                "exponent",
                "Exponent",
                NUMBER,
                "Of the flow in that loss: about 2 in turbulent flow, the flow index of the "
                "product in laminar flow.",
            ),
        ),
    ),
    (
        "equipment",
        (
            Field("volume", "Product held", "volume"),
            Field("rise", "Rise", "length"),
            Field("outlet_temperature", "Leaves at", "temperature"),
        ),
    ),
    (
        "passage",
        (
            Field("passage_length", "Length of a passage", "length"),
            Field(
                "passage_diameter",
                "Its hydraulic diameter",
                "diameter",
                "Both together say what it takes to start the product in it again.",
            ),
        ),
    ),
)
_REDUCER = (
    (
        "reducer",
        (
            Field("angle", "Whole angle of the cone", "angle", "180° for a sudden change."),
            Field("loss_coefficient", "Loss coefficient K", NUMBER, "Of the smaller pipe."),
        ),
    ),
)
_FITTING = (
    (
        "fitting",
        (
            Field(
                "diameter",
                "Inside diameter",
                "diameter",
                "Left empty: that of the pipe before it.",
            ),
        ),
    ),
)
_GROUPS: dict[str, Any] = {
    "pipe": _PIPE,
    "equipment": _EQUIPMENT,
    "reducer": _REDUCER,
    "fitting": _FITTING,
}


def show() -> None:
    """Draw the choice of the part, what can be done with it, and its fields."""
    case = state.case()
    document = case.document()
    found = [
        (side, len(cut.head) + number, part)
        for side in parts.SIDES
        for cut in (parts.side_of(document, side),)
        for number, part in enumerate(cut.inner)
    ]
    if not found:
        st.caption("Add a part to the table first.")
        return
    labels = [_label(number, *one) for number, one in enumerate(found, 1)]
    kept = state.key("route.part")
    now = min(int(st.session_state.get(f"{kept}.kept", 0)), len(found) - 1)
    widget = f"{kept}.{now}.{len(found)}.{state.version()}"
    with st.container(horizontal=True, vertical_alignment="bottom"):
        chosen = st.selectbox(
            "Part", range(len(found)), index=now, format_func=labels.__getitem__, key=widget,
            width=330,
        )  # fmt: skip
        st.session_state[f"{kept}.kept"] = chosen
        side, index, part = found[chosen]
        for words, icon, act, stuck in (
            ("Up", "arrow_upward", -1, chosen == 0 and side == "suction"),
            ("Down", "arrow_downward", 1, chosen == len(found) - 1 and side == "discharge"),
            ("Copy", "content_copy", 0, False),
            ("Remove", "delete", None, False),
        ):
            st.button(
                words,
                icon=f":material/{icon}:",
                key=state.key(f"route.act.{words}"),
                on_click=_act,
                args=(side, index, act),
                disabled=stuck,
            )
    cautions.complaint(state.complaint("route.move"))
    for name, group in _GROUPS[part["part"]]:
        # The table shows the loss too, and must then be drawn anew.
        then = state.touch if name == "loss" else None
        fields.group(f"route.{name}", ("line", side, index), group, columns=3, then=then)
    if part["part"] == "pipe":
        fields.switch("Keep its size when sizes are compared", ("line", side, index, "fixed_size"))


def _label(number: int, side: str, _: int, part: dict[str, Any]) -> str:
    name = part.get("name") or parts.kind_of(part)
    return f"{number}  {name}, {parts.SIDES[side]}"


def _act(side: str, index: int, act: int | None) -> None:
    def move() -> None:
        crosses = False

        def edit(document: dict[str, Any]) -> None:
            nonlocal crosses
            crosses = parts.change_place(document, side, index, act)

        state.change_document(edit)
        if act and not crosses:
            kept = f"{state.key('route.part')}.kept"
            st.session_state[kept] = int(st.session_state.get(kept, 0)) + act
        state.touch()

    state.attempt("route.move", move)
