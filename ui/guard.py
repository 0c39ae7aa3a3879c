"""What the user sees when something breaks: one sentence, never a traceback."""

from __future__ import annotations

import sys
import traceback
from collections.abc import Callable

import streamlit as st

from rheo.errors import InputError
from ui import state, style

UNEXPECTED = (
    "Something went wrong here that you did not cause. Your case is kept: undo your last change, "
    "or save the case and reload the page. The terminal that runs the page shows the details."
)


def run(draw: Callable[[], object]) -> None:
    """Draw a part of the page; what breaks in it becomes a sentence in its place."""
    try:
        draw()
    except InputError as error:
        st.error(style.plain(state.sentence(error)), icon=":material/error:")
    except Exception:  # the last line of defence: whatever it is, the page stays
        print(traceback.format_exc(), file=sys.stderr, flush=True)
        st.error(UNEXPECTED, icon=":material/error:")
