"""The duty, and a whole new route from a few values."""

from __future__ import annotations

from typing import Any

import streamlit as st

from ui import cautions, fields, opening, state
from ui.fields import NUMBER, SHARE, Field
from ui.route import editor, parts
from ui.units_switch import with_unit

_DUTY = (
    Field("flow", "Flow", "flow"),
    Field(
        "flow_tolerance",
        "Flow, more or less",
        SHARE,
        "Largest deviation of the flow; it counts in the doubt budget.",
    ),
    Field("hours_a_year", "Hours a year", NUMBER, "For the cost of energy."),
)
_NEW = (
    ("length", "Length of pipe", ""),
    ("rise", "Rise", ""),
    ("bends", "90° bends", "0"),
    ("valves", "Ball valves", "0"),
    ("level", "Liquid above the pump", ""),
    ("gauge_pressure", "Pressure at the end", ""),
)
_PARTS = {"product": "product", "duty": "duty", "line": "route"}


def show() -> list[str]:
    """Draw the duty, the sizes offered and the way to a new route; return the names of sizes."""
    left, middle, right = st.columns([4.6, 2.6, 1.5], vertical_alignment="bottom")
    with left:
        fields.group("duty", ("duty",), _DUTY, columns=3)
    with middle:
        sizes = parts.size_options(state.case(), *editor.choose_standard())
    # Another key closes it, once the route has been replaced.
    widget = state.key(f"route.new.{state.version()}")
    with right, st.popover("New route", icon=":material/add_road:", width="stretch", key=widget):
        _show_new(sizes)
    old = state.key("route.before")
    if old in st.session_state:
        st.button("Put the old route back", icon=":material/undo:", on_click=_put_back, args=(old,))
    return sizes


def show_borrowed() -> None:
    """Say which parts of the case are still those of a sample, though the readings are not."""
    borrowed = [_PARTS[one] for one in opening.borrowed() if one in ("duty", "line")]
    if borrowed:
        st.info(
            f"The {' and the '.join(borrowed)} {'is' if len(borrowed) == 1 else 'are'} still "
            "that of the sample. Put your own in its place: change the flow, and use New "
            "route.",
            icon=":material/edit:",
        )


def _show_new(sizes: list[str]) -> None:
    key = state.key("route.new")
    size_key = f"{key}.size.{sizes[0]}"
    st.selectbox("Size", sizes, index=_now(sizes), key=size_key)
    columns = st.columns(2)
    for place, (name, label, start) in enumerate(_NEW):
        columns[place % 2].text_input(label, value=start, key=f"{key}.{name}")
    st.caption(
        "From a vessel to a vessel, with the pump between; long-radius bends. Everything can be "
        "changed in the tables afterwards."
    )

    def replace() -> None:
        texts = {name: str(st.session_state[f"{key}.{name}"]) for name, _, _ in _NEW}
        state.attempt("route.new", _replace, st.session_state[size_key], texts)

    st.button("Replace the route", type="primary", key=f"{key}.go", on_click=replace)
    cautions.complaint(state.complaint("route.new"))


def _now(sizes: list[str]) -> int:
    """Return the number of the size that the route has now; else of one in the middle."""
    size = parts.first_size(state.case())
    return sizes.index(size.name) if size is not None and size.name in sizes else len(sizes) // 2


def _replace(size: str, texts: dict[str, str]) -> None:
    before = state.case().document()["line"]
    state.change_document(lambda document: document.update(line=new_line(size, texts)))
    st.session_state[state.key("route.before")] = before
    state.touch()


def new_line(size: str, texts: dict[str, str]) -> dict[str, Any]:
    """Return a line from vessel to vessel as plain data of the case.

    Parameters
    ----------
    size : str
        Name of the pipe size.
    texts : dict
        What was typed for ``length``, ``rise``, ``bends``, ``valves``, ``level`` and
        ``gauge_pressure``; empty texts leave a value out.
    """
    system = state.system()

    def quantity(key: str, kind: str) -> dict[str, str]:
        text = texts.get(key, "").strip()
        return {key: with_unit(text, kind, system)} if text else {}

    pipe = {"part": "pipe", "size": size, **quantity("length", "length")}
    discharge: list[dict[str, Any]] = [{**pipe, **quantity("rise", "length")}]
    for key, kind, name in (
        ("bends", "elbow-90-long", "90° bends"),
        ("valves", "valve-ball", "ball valves"),
    ):
        count = texts.get(key, "").strip()
        if count not in ("", "0"):
            number = int(count) if count.isdecimal() else count
            discharge.append({"part": "fitting", "name": name, "kind": kind, "count": number})
    return {
        "name": "line",
        "suction": [{"part": "vessel", **quantity("level", "length")}, {"part": "entrance"}],
        "discharge": [
            *discharge,
            {"part": "exit"},
            {"part": "vessel", **quantity("gauge_pressure", "pressure")},
        ],
    }


def _put_back(old: str) -> None:
    before = st.session_state.pop(old)
    state.attempt("route.new", state.change, ("line",), before)
    state.touch()
