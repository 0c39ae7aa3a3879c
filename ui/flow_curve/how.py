"""How the models are fitted: weights, and what is fitted with them in tubes."""

from __future__ import annotations

from typing import Any

import streamlit as st

from rheo.case import CaseResult
from rheo.case.schema import INSTRUMENT
from rheo.fitting.weighting import WEIGHTINGS
from ui import cautions, state

WORDS = {
    "relative": "the same percentage of every reading",
    "absolute": "the same amount at every reading",
    INSTRUMENT: "by the instrument's data sheet",
}
_SHARES = (
    ("percent_of_reading", "Of the reading [%]"),
    ("percent_of_full_scale", "Of full scale [%]"),
)


def show(result: CaseResult) -> None:
    """Draw the choices; each takes part in the fit at once."""
    fit = state.case().fit
    names = [*WEIGHTINGS, INSTRUMENT]
    widget = state.key(f"fit.weighting.{fit.weighting}")
    columns = st.columns([2, 1, 1], vertical_alignment="bottom")
    with columns[0]:
        st.selectbox(
            "A reading is taken to be uncertain by",
            names,
            index=names.index(fit.weighting),
            format_func=lambda name: WORDS.get(name, name),
            key=widget,
            on_change=lambda: state.attempt("fit", choose_weighting, st.session_state[widget]),
            help="With a wide range of stresses the same percentage keeps low readings in the fit.",
        )
    if fit.weighting == INSTRUMENT:
        for column, (key, label) in zip(columns[1:], _SHARES, strict=True):
            with column:
                _show_share(key, label)
    geometry = result.fitted.geometry
    if geometry is not None and geometry.key == "tube":
        _show_tube()
    cautions.complaint(state.complaint("fit"))


def choose_weighting(name: str) -> None:
    """Take other weights; those of the instrument begin with 1 % of each.

    Raises
    ------
    InputError
        If the case would not be valid.
    """

    def edit(document: dict[str, Any]) -> None:
        fit = document.setdefault("fit", {})
        fit["weighting"] = name
        for key, _ in _SHARES:
            if name == INSTRUMENT:
                fit.setdefault(key, "1 %")
            else:
                fit.pop(key, None)

    state.change_document(edit)


def _show_share(key: str, label: str) -> None:
    now = float(getattr(state.case().fit, key) or 0.0)
    widget = state.key(f"fit.{key}.{now}")
    st.number_input(
        label,
        min_value=0.0,
        max_value=100.0,
        value=now,
        step=0.5,
        key=widget,
        on_change=lambda: state.attempt(
            "fit", state.change, ("fit", key), f"{st.session_state[widget]:g} %"
        ),
    )


def _show_tube() -> None:
    fit = state.case().fit
    with st.container(horizontal=True):
        for key, label, words in (
            ("entrance", "Fit the entrance loss", "Needs tubes of two lengths over diameter."),
            ("slip", "Fit slip at the wall", "Needs tubes of two diameters."),
        ):
            widget = state.key(f"fit.{key}")
            st.toggle(
                label,
                value=bool(getattr(fit, key)),
                key=widget,
                help=words,
                on_change=lambda key=key, widget=widget: state.attempt(
                    "fit", state.change, ("fit", key), bool(st.session_state[widget])
                ),
            )
