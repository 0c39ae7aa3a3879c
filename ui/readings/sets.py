"""Which set of readings is shown, where a case has several."""

from __future__ import annotations

import streamlit as st

from rheo.case import case_from_document
from rheo.case.readings_blocks import ReadingsBlock
from rheo.readings import Readings
from rheo.report.text import one_line
from ui import state

_SET = "rheo.set"


def number() -> int:
    """Return the number of the set that is shown, counted from 0."""
    return min(int(st.session_state.get(_SET, 0)), len(state.case().readings) - 1)


def block() -> ReadingsBlock:
    """Return what the case says of the set that is shown."""
    return state.case().readings[number()]


def readings() -> Readings | None:
    """Return the set that is shown; None where it cannot be read."""
    sets = state.readings()
    return None if sets is None else sets[number()]


def label(index: int) -> str:
    """Return what a set is called."""
    file = state.case().readings[index].file
    if file is None:
        return f"table {index + 1}"
    stored = state.files().get(file)
    return one_line(stored.label if stored is not None and stored.label else file, 40)


def show() -> None:
    """Draw the choice between the sets; nothing for a single one."""
    count = len(state.case().readings)
    if count < 2:
        return
    widget = state.key(f"set.{count}")
    names = [label(index) for index in range(count)]

    def take() -> None:
        chosen = st.session_state[widget]
        st.session_state[_SET] = number() if chosen is None else chosen
        state.touch()

    with st.container(horizontal=True, vertical_alignment="bottom"):
        st.segmented_control(
            "Set of readings",
            range(count),
            default=number(),
            format_func=names.__getitem__,
            key=widget,
            on_change=take,
        )
        st.button("Remove this set", icon=":material/delete:", on_click=_remove)


def _remove() -> None:
    document = state.case().document()
    del document["readings"][number()]
    left = {block.get("file") for block in document["readings"]}
    files = {name: file for name, file in state.files().items() if name in left}
    state.attempt("upload", lambda: state.put(case_from_document(document), files))
    state.touch()
