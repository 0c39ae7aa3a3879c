"""A case that asks for very many flow curves: drawn beside the page, with progress and an end.

``many_draws.begin()`` says whether the flow curves of the case are at hand, and starts on them
where they are not; ``many_draws.show()`` then stands in place of the stop.
"""

from __future__ import annotations

from collections.abc import Callable

import streamlit as st

from rheo.case.run import drawn_from
from rheo.errors import in_groups
from rheo.fitting import Fits
from ui import cautions, results, state, work

# So many are drawn in a moment, while the page waits.
SOON = 5_000
_FEWER = 1_000
_NAME = "draws"
_WORDS = "Drawing flow curves"


def begin() -> bool:
    """Return whether the page can be drawn; start to draw flow curves where there are too many."""
    asked = _asked()
    if asked is None:
        work.drop(_NAME)
        return True
    return work.ended(_NAME, *asked)


def show() -> None:
    """Draw how far it is, and what can be done instead."""
    asked = _asked()
    count = state.case().doubt.draws
    st.header(_WORDS)
    st.write(
        f"The case asks for {in_groups(str(count))} flow curves, each a refit of the readings. "
        "With fewer the intervals are the same within their last digit."
    )
    if asked is not None:
        work.outcome(_NAME, _WORDS, *asked)
    st.button(
        f"Take {_FEWER} instead",
        on_click=state.attempt,
        args=("draws", state.change, ("doubt", "draws"), _FEWER),
    )
    cautions.complaint(state.complaint("draws"))


def _asked() -> tuple[str, Callable[[work.Progress], object]] | None:
    """Return what is to be drawn, and how; None where it is little or nothing."""
    case = state.case()
    doubt = case.doubt
    if doubt.draws <= SOON:
        return None
    fits: Fits | None = results.fits_of(case, state.files()).value
    if fits is None or case.fit.model not in (*fits.keys, "auto"):
        return None
    key = drawn_from(case, fits)
    fitted = results.fits_key(case, state.files())
    subject = f"{fitted} {doubt.draws} {doubt.seed} {key}"
    return subject, lambda tell: fits.draws(doubt.draws, doubt.seed, key, tell)
