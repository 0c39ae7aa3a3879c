"""Flow curve: which model, why, how far to trust it, and what another would change."""

from __future__ import annotations

import streamlit as st

from rheo.case import CaseResult
from rheo.report.case_pictures import flow_curve_picture, residuals_picture
from rheo.report.sections.fitted import parameter_table
from rheo.report.words import capital
from ui import answer_strip, blocks, cautions, pictures, places, state, style, walk, words
from ui.flow_curve import choices, compare, how, measure, ranking


def show() -> None:
    """Draw the stop."""
    st.header("Flow curve")
    result = answer_strip.show()
    if result is None:
        _show_fit_alone()
    else:
        _show_result(result)
    cautions.safety("pressure", "start-up")
    walk.onward("flow_curve")


def _show_result(result: CaseResult) -> None:
    said = f"{words.fluid_words(result, state.system())} {_reason(result)}"
    st.html(f'<p class="rheo-text lead">{style.scripted(said)}</p>')
    left, right = st.columns([3, 2], gap="medium", vertical_alignment="bottom")
    with left:
        viscosity, log = _choose_axes()
    with right:
        looked_at, other = compare.choose(result)
    # A place of its own: what is below would be drawn anew if it moved to another one.
    beside = st.empty()
    if other is not result:
        with beside.container():
            compare.show(result, other)
    left, right = st.columns([3, 2], gap="medium")
    with left:
        picture = flow_curve_picture(
            other,
            viscosity=viscosity,
            log=log,
            fit=other.fits[looked_at.key],
            system=state.system(),
        )
        pictures.show(picture, "flow_curve", title=False)
    with right:
        if other is result:
            compare.show_return(result)
        of_fit = (*looked_at.cautions, *places.of_fit(result), *places.at("flow_curve", result))
        if looked_at.key != result.chosen.key:
            of_fit = tuple(one for one in of_fit if one not in result.chosen.cautions)
        readings = places.of_readings(result)
        cautions.show(one for one in dict.fromkeys(of_fit) if one not in readings)
    ranking.show(result.fits, result.chosen, ranking.pressures_of(result))
    with st.expander("Parameters, with their intervals", expanded=True):
        blocks.show(parameter_table(looked_at), "parameters")
        st.caption(
            f"Valid: {style.plain(looked_at.record.validity)} "
            f"Source: {style.plain(looked_at.record.source)}"
        )
    with st.expander("Residuals: what the model leaves unexplained", expanded=True):
        picture = residuals_picture(result, looked_at, state.system())
        pictures.show(picture, "residuals", title=False)
        st.caption(picture.description)
    with st.expander("What to measure next", expanded=True):
        measure.show(result)
    with st.expander("How it is fitted"):
        how.show(result)
    with st.expander("Other weights, and the way up or down"):
        choices.show(result)


def _reason(result: CaseResult) -> str:
    if result.chosen.key == result.fits.best.key:
        return result.fits.reason
    chosen = capital(result.chosen.record.name)
    return f"{chosen} is your choice. By the ranking: {result.fits.reason}"


def _choose_axes() -> tuple[bool, bool]:
    """Draw the choice of what is drawn; return whether viscosity, and whether logarithmic."""
    with st.container(horizontal=True, horizontal_alignment="left"):
        viscosity = st.segmented_control(
            "Draw",
            (False, True),
            default=False,
            required=True,
            format_func=lambda on: "Viscosity" if on else "Stress",
            key=state.key("flow_curve.viscosity"),
            label_visibility="collapsed",
        )
        log = st.segmented_control(
            "Axes",
            (True, False),
            default=True,
            required=True,
            format_func=lambda on: "Logarithmic" if on else "Linear",
            key=state.key("flow_curve.log"),
            label_visibility="collapsed",
        )
    return bool(viscosity), bool(log)


def _show_fit_alone() -> None:
    """Show the ranking where the line cannot be worked out."""
    fitted = state.fitted()
    if fitted is None:
        return
    st.html(f'<p class="rheo-text lead">{style.escape(fitted.fits.reason)}</p>')
    ranking.show(fitted.fits, fitted.chosen)
    blocks.show(parameter_table(fitted.chosen), "parameters")
    cautions.show(fitted.chosen.cautions)


show()
