"""The two tables of parts: before the pump and after it."""

from __future__ import annotations

from typing import Any

import streamlit as st

from rheo.line.catalogue import STANDARDS
from ui import cautions, state
from ui.fields import COUNT, TEXT
from ui.route import parts

STEEL = {
    "ASME B36.10M": ("5", "10", "20", "30", "40", "60", "80", "100", "120", "140", "160", "STD"),
    "ASME B36.19M": ("5S", "10S", "40S", "80S"),
}
_WIDTHS = {"name": 124, "size": 138, "loss_coefficient": 62}


def choose_standard() -> tuple[str, str | None]:
    """Draw the choice of the standard whose sizes are offered; return it, with its schedule."""
    first = parts.first_size(state.case())
    keys = list(STANDARDS)
    default = first.standard if first is not None and first.standard in keys else "ISO 2037"
    widget = state.key(f"route.standard.{default}")
    steel = st.session_state.get(widget, default) in STEEL
    left, right = st.columns([3, 2]) if steel else (st.container(), st.container())
    chosen = left.selectbox(
        "Sizes offered",
        keys,
        index=keys.index(default),
        key=widget,
        help="The sizes among which the table lets you choose. Another inside diameter can be "
        "typed under Inside.",
    )
    if chosen not in STEEL:
        return chosen, None
    own = first.label.partition(" schedule ")[2] if first is not None else ""
    schedules = STEEL[chosen]
    usual = "40S" if chosen == "ASME B36.19M" else "40"
    schedule = right.selectbox(
        "Schedule",
        schedules,
        index=schedules.index(own if own in schedules else usual),
        key=state.key(f"route.schedule.{chosen}.{own}"),
    )
    return chosen, schedule


def show(side: str, sizes: list[str]) -> None:
    """Draw the table of one side.

    Parameters
    ----------
    side : str
        ``suction`` or ``discharge``.
    sizes : list of str
        Names of the sizes to choose from.
    """
    system = state.system()
    widget = state.key(f"route.{side}.{system}.{state.version()}")
    source = f"{widget}.source"
    if widget not in st.session_state or source not in st.session_state:
        cut = parts.side_of(state.case().document(), side)
        st.session_state[source] = (parts.rows(state.case(), side), cut.inner)
        state.attempt(f"route.{side}", lambda: None)
    shown, before = st.session_state[source]

    def take() -> None:
        state.attempt(f"route.{side}", _put, side, before, st.session_state[widget])

    st.data_editor(
        text_table(shown),
        key=widget,
        on_change=take,
        num_rows="dynamic",
        hide_index=True,
        column_config=_columns(sizes),
        placeholder="",
        alt=f"Parts {parts.SIDES[side]}",
    )
    cautions.complaint(state.complaint(f"route.{side}"))


def text_table(columns: dict[str, list[str]]) -> Any:
    """Return columns of text as a table that is one of text even without a row."""
    import pandas as pd

    return pd.DataFrame(columns, dtype="string")


def _put(side: str, before: tuple[dict[str, Any], ...], edits: Any) -> None:
    def edit(document: dict[str, Any]) -> None:
        cut = parts.side_of(document, side)
        inner = parts.edited(before, edits, document["duty"]["flow"])
        document["line"][side] = [*cut.head, *inner, *cut.tail]

    state.change_document(edit)


def _columns(sizes: list[str]) -> dict[str, Any]:
    columns: dict[str, Any] = {
        "Part": st.column_config.SelectboxColumn(
            options=list(parts.kinds()), required=True, width=176, help=_PART
        )
    }
    for field in parts.FIELDS:
        name = field.label
        width: Any = _WIDTHS.get(field.key, 82)
        if field.key == "size":
            columns[name] = st.column_config.SelectboxColumn(options=sizes, width=width)
        else:
            columns[name] = st.column_config.TextColumn(
                width=width,
                help=_HELP.get(field.key),
                alignment="left" if field.kind == TEXT else "right",
                default="1" if field.kind == COUNT else None,
            )
    return columns


_PART = (
    "What it is. Fittings by name take their loss coefficient from published tables; for another "
    "one choose fitting, own K."
)
_HELP = {
    "inside_diameter": "Of a pipe that no standard lists; it takes the place of the size.",
    "rise": "Height gained from its beginning to its end; negative when it falls.",
    "count": "How many like fittings.",
    "loss_coefficient": "Loss over ρV²/2 of one piece.",
    "loss": "What the equipment loses with this product at the flow of the duty; another flow and "
    "the exponent stand under One part in detail.",
}
