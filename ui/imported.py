"""What was imported is set aside from the collection of garbage.

Streamlit collects garbage after every run of the script, and what waits to be sent to the browser
waits for that too. Most of what is looked through are the classes and functions of libraries, which
stay: `imported.settle` takes them out of sight, anew only when more was imported.
"""

from __future__ import annotations

import gc
import sys

import streamlit as st


def settle() -> None:
    """Set aside what is there now, where modules have been imported since the last time."""
    _settle(len(sys.modules))


@st.cache_resource(max_entries=64, show_spinner=False)
def _settle(modules: int) -> None:  # noqa: ARG001
    gc.collect()
    gc.freeze()
