"""Shear rates: did the viscometer see what the pipe will see, and what that is elsewhere."""

from __future__ import annotations

import streamlit as st

from rheo.case import CaseResult
from rheo.report.case_pictures import shear_rates_picture, wall_rate_words
from rheo.report.numbers import number
from ui import answer_strip, cautions, pictures, places, state, style, walk
from ui.shear_rates import converter, line_rates


def show() -> None:
    """Draw the stop."""
    st.header("Shear rates")
    result = answer_strip.need_result()
    st.html(f'<p class="rheo-text lead">{style.escape(_answer(result))}</p>')
    pictures.show(shear_rates_picture(result, state.system()), "shear_rates", title=False)
    line_rates.show(result)
    cautions.show(places.at("shear_rates", result))
    st.subheader("Converter")
    converter.show(result)
    cautions.safety("pressure", "start-up")
    walk.onward("shear_rates")


def _answer(result: CaseResult) -> str:
    """Say whether the viscometer saw the shear rates of the pipes."""
    measured, inside = result.product.measured_rates, result.inside_measured_range
    system = state.system()
    rates = wall_rate_words(result, system)
    if measured is None or inside is None:
        return f"The pipes work at {rates}; what range was measured is not known."
    span = f"{number(measured[0])} to {number(measured[1])} 1/s"
    if inside:
        return f"Yes: the viscometer saw {span}, and the pipes work at {rates}, inside that."
    return (
        f"Not all of it: the viscometer saw {span}, and the pipes work at {rates}. What lies "
        "outside rests on extrapolation; take readings there."
    )


show()
