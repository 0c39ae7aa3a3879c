"""Entry of a share of solids, shown as it was written: by mass, by volume, or without a word."""

from __future__ import annotations

import re

import streamlit as st

from rheo.case.quantity import Quantity
from rheo.readings.solids import in_words
from ui import cautions, state, units_switch

_ONLY_A_NUMBER = re.compile(r"[\d.]+")


def entry(label: str, path: tuple[str | int, ...], placeholder: str) -> None:
    """Draw a field for a share of solids of the case; empty takes it out.

    Parameters
    ----------
    label : str
        What it is.
    path : tuple of str or int
        Where it stands in the case.
    placeholder : str
        What an empty field means.
    """
    name = ".".join(str(step) for step in path)
    value = units_switch.value_of(path)
    shown = text_of(value)
    widget = state.key(f"entry.{name}.{shown}")

    def take() -> None:
        typed = str(st.session_state[widget]).strip()
        if typed == shown:
            state.attempt(name, lambda: None)
        else:
            state.attempt(name, state.change, path, with_percent(typed) or None)

    st.text_input(
        label,
        value=shown,
        key=widget,
        on_change=take,
        placeholder=placeholder,
        help="Such as 25 %, 46 wt% or 18 vol%; as the readings have it. A number alone is in %.",
    )
    cautions.complaint(state.complaint(name))


def text_of(value: Quantity | None) -> str:
    """Return a share of the case as the field shows it."""
    if value is None:
        return ""
    written = value.written
    return written if isinstance(written, str) and "%" in written else in_words(float(value))


def with_percent(typed: str) -> str:
    """Return what was typed, a number alone with the percent sign that it stands for."""
    return f"{typed} %" if _ONLY_A_NUMBER.fullmatch(typed) else typed
