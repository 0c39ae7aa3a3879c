"""The walk: seven stops, each with its state in a few words, and the way to the next."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import streamlit as st

from ui import reload, state, style, words


@dataclass(frozen=True)
class Stop:
    """One stop: key (also the name of its file and its address) and title."""

    key: str
    title: str


STOPS = (
    Stop("readings", "Readings"),
    Stop("flow_curve", "Flow curve"),
    Stop("shear_rates", "Shear rates"),
    Stop("route", "Route"),
    Stop("pressure", "Pressure"),
    Stop("sizes", "Sizes"),
    Stop("note", "Note"),
)


def pages() -> dict[str, Any]:
    """Return a page for each stop, by its key."""
    return {
        stop.key: st.Page(
            f"stops/{stop.key}.py",
            title=stop.title,
            url_path=stop.key.replace("_", "-"),
            default=number == 0,
        )
        for number, stop in enumerate(STOPS)
    }


def show(found: dict[str, Any]) -> None:
    """Draw the walk with the state of each stop."""
    states = words.walk_states(state.case(), state.readings(), state.result(), state.system())
    with st.container(gap=None, key="walk"):
        for number, stop in enumerate(STOPS, 1):
            st.page_link(
                found[stop.key], label=f"{number}  {stop.title}", query_params=reload.query()
            )
            st.html(f'<div class="rheo-state">{style.escape(states.get(stop.key, "–"))}</div>')


def onward(key: str) -> None:
    """Draw the way to the stop before and the stop after; every stop ends with it."""
    keys = [stop.key for stop in STOPS]
    at = keys.index(key)
    with st.container(horizontal=True, horizontal_alignment="distribute", key="onward"):
        for other, icon in ((at - 1, "arrow_back"), (at + 1, "arrow_forward")):
            if 0 <= other < len(STOPS):
                stop = STOPS[other]
                st.page_link(
                    f"stops/{stop.key}.py",
                    label=stop.title,
                    icon=f":material/{icon}:",
                    icon_position="left" if other < at else "right",
                    query_params=reload.query(),
                )
