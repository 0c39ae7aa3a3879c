"""What the user sees when something breaks: one sentence, never a traceback.

`app.py` runs every stop under guard. A fragment runs again by itself, so it guards itself:
``guard.run(lambda: draw(...))`` inside it.
"""

from __future__ import annotations

import sys
import traceback
from collections.abc import Callable
from types import TracebackType

import streamlit as st

from rheo.errors import InputError
from ui import state, style


class Guard:
    """A part of the page; what breaks in it becomes a sentence in its place.

    The last line of defence: whatever it is, the rest of the page stays. What ends a run of the
    script by intent (a rerun, a stop) is no `Exception` and passes through.
    """

    def __enter__(self) -> Guard:
        return self

    def __exit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        where: TracebackType | None,
    ) -> bool:
        """Say what went wrong; the details go to the terminal."""
        if isinstance(error, InputError):
            st.error(style.plain(state.sentence(error)), icon=":material/error:")
            return True
        if isinstance(error, Exception):
            traceback.print_exception(kind, error, where, file=sys.stderr)
            st.error(state.UNEXPECTED, icon=":material/error:")
            return True
        return False


def run(draw: Callable[[], object]) -> None:
    """Draw a part of the page under guard."""
    with Guard():
        draw()
