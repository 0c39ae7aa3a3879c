"""The units switch, and entry of quantities in the units shown; stored values never change with it.

``entry("Flow", ("duty", "flow"), "flow")`` draws a text field for one quantity of the case. A
number alone is read in the unit shown; with a unit, such as ``20 gpm``, in that. What is wrong
with it stands under the field. ``text_of(path, kind)`` returns what the field shows.
"""

from __future__ import annotations

import re
from typing import Any

import streamlit as st

from rheo.report import display
from rheo.report.numbers import exact
from ui import cautions, state

_ONLY_A_NUMBER = re.compile(r"\s*[-+−]?[\d.,'   ]+(?:[eE][-+]?\d+)?\s*")
# As rheo.units reads them, where a label is written for the eye.
_WRITTEN_AS = {"US gal": "gallon"}


def show() -> None:
    """Draw the switch."""
    st.selectbox(
        "Units",
        list(display.SYSTEMS),
        index=list(display.SYSTEMS).index(state.system()),
        format_func=display.SYSTEMS.__getitem__,
        key="units",
        on_change=lambda: state.set_system(st.session_state["units"]),
    )


def with_unit(typed: str, kind: str, system: str) -> str:
    """Return what was typed as a text with unit for the case file.

    Parameters
    ----------
    typed : str
        A number alone is taken in the unit shown.
    kind, system : str
        Keys of `rheo.report.display.QUANTITIES` and `SYSTEMS`.
    """
    if not _ONLY_A_NUMBER.fullmatch(typed):
        return typed.strip()
    return f"{typed.strip().replace('−', '-')} {_written_unit(kind, system)}"


def _written_unit(kind: str, system: str) -> str:
    label = display.unit_label(kind, system)
    return _WRITTEN_AS.get(label, label)


def value_of(path: tuple[str | int, ...]) -> Any:
    """Return a value of the case by its path; None where it is not given."""
    where: Any = state.case()
    for step in path:
        if where is None:
            return None
        if isinstance(step, int):
            where = where[step] if step < len(where) else None
        else:
            where = getattr(where, step, None)
    return where


def text_of(path: tuple[str | int, ...], kind: str) -> str:
    """Return a quantity of the case as the field shows it; empty where it is not given."""
    value = value_of(path)
    if value is None:
        return ""
    system = state.system()
    number = exact(float(display.shown(float(value), kind, system)))
    return f"{number} {display.unit_label(kind, system)}"


def entry(
    label: str,
    path: tuple[str | int, ...],
    kind: str,
    *,
    optional: bool = False,
    help: str | None = None,
    placeholder: str | None = None,
) -> None:
    """Draw a field for one quantity of the case.

    Parameters
    ----------
    label : str
        What it is.
    path : tuple of str or int
        Where it stands in the case.
    kind : str
        A key of `rheo.report.display.QUANTITIES`.
    optional : bool
        Whether an empty field takes the value out.
    help, placeholder : str, optional
        As for ``st.text_input``.
    """
    name = ".".join(str(step) for step in path)
    shown = text_of(path, kind)
    # Another value or unit makes another widget, which then shows it.
    widget = state.key(f"entry.{name}.{shown}.{state.system()}")

    def take() -> None:
        typed = str(st.session_state[widget]).strip()
        if typed == shown:
            state.attempt(name, lambda: None)
        elif typed or optional:
            wanted = with_unit(typed, kind, state.system()) if typed else None
            state.attempt(name, state.change, path, wanted)

    st.text_input(
        label, value=shown, key=widget, on_change=take, help=help, placeholder=placeholder
    )
    cautions.complaint(state.complaint(name))
