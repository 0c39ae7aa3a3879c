"""What the user sees when something breaks: one sentence, never a traceback.

`app.py` runs every stop under guard. A fragment runs again by itself, so it guards itself:
``guard.run(lambda: draw(...))`` inside it.
"""

from __future__ import annotations

from collections.abc import Callable
from types import TracebackType

import streamlit as st

from ui import state, style
from ui.catch import Catch


class Guard(Catch):
    """A part of the page; what breaks in it becomes a sentence in its place."""

    def __exit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        where: TracebackType | None,
    ) -> bool:
        """Show the problem where the part would stand."""
        dealt_with = super().__exit__(kind, error, where)
        if self.problem is not None:
            st.error(style.plain(state.sentence(self.problem)), icon=":material/error:")
        return dealt_with


def run(draw: Callable[[], object]) -> None:
    """Draw a part of the page under guard."""
    with Guard():
        draw()
