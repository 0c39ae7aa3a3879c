"""Another model beside the one in use: what the line would then need."""

from __future__ import annotations

import time

import streamlit as st

from rheo.case import Case, CaseResult
from rheo.case.schema import AUTO
from rheo.errors import in_groups
from rheo.fitting import Fit
from rheo.report import display
from rheo.report.case_pictures import wall_rate_words
from rheo.report.numbers import number
from rheo.report.words import capital
from ui import cautions, many_draws, results, state, style, table, words, work
from ui.results import Files

# Flow curves that a model which is only looked at is judged by.
_AT_FIRST = 250
# When to start on all of them [s].
_LATER = 0.4


def choose(result: CaseResult) -> tuple[Fit, CaseResult]:
    """Draw the choice of the model to look at; return its fit and the result with it.

    Parameters
    ----------
    result : CaseResult
        With the model in use.

    Returns
    -------
    tuple
        The fit looked at, and the result of the case with that model (the one given while it is
        the model in use).
    """
    keys = [fit.key for fit in result.fits]
    widget = state.key(f"looked_at.{result.chosen.key}")
    looked_at = st.selectbox(
        "Look at the model",
        keys,
        index=keys.index(result.chosen.key),
        format_func=lambda key: _name(result, key),
        key=widget,
    )
    if looked_at == result.chosen.key:
        return result.chosen, result
    case, files = state.case(), state.files()
    whole = state.changed(case, ("fit", "model"), looked_at)
    some = state.changed(whole, ("doubt", "draws"), min(case.doubt.draws, _AT_FIRST))
    if not _drawn(result, looked_at, some.doubt.draws):
        return result.fits[looked_at], result
    with st.spinner("Working out the line with it"):
        other = results.result_of(some, files)
    if other.value is None:
        if other.problem is not None:
            cautions.complaint(state.sentence(other.problem))
        return result.fits[looked_at], result
    if case.doubt.draws <= many_draws.SOON:
        # Ready, most likely, when the model is taken.
        work.begin("taken", results.result_key(whole, files), lambda _: _worked_out(whole, files))
    return result.fits[looked_at], other.value


def _worked_out(case: Case, files: Files) -> object:
    # The page first.
    time.sleep(_LATER)
    return results.result_of(case, files)


def _drawn(result: CaseResult, key: str, count: int) -> bool:
    """Return whether the flow curves of a model are at hand; else tell how far it is.

    A model that the readings hardly settle can take seconds to refit.
    """
    case, files = state.case(), state.files()
    seed = case.doubt.seed
    subject = f"{results.fits_key(case, files)} {count} {seed} {key}"
    found = work.outcome(
        "looked_at",
        "Drawing its flow curves",
        subject,
        lambda tell: result.fits.draws(count, seed, key, tell),
    )
    return found is not None


def show(result: CaseResult, other: CaseResult) -> None:
    """Draw both results side by side, and the button that takes the other model."""
    system = state.system()
    table.show(
        [
            "With",
            table.Number(f"{capital(result.chosen.record.name)} (in use)"),
            table.Number(capital(other.chosen.record.name)),
            table.Number("Change"),
        ],
        comparison(result, other, system),
        f"Its interval is that of {other.case.doubt.draws} flow curves; it is worked out from "
        f"{in_groups(str(result.case.doubt.draws))} once you use it."
        if other.case.doubt.draws < result.case.doubt.draws
        else "",
    )
    name = other.chosen.record.name
    st.button(
        f"Use {style.plain(name)}",
        type="primary",
        on_click=state.attempt,
        args=("model", state.change, ("fit", "model"), other.chosen.key),
    )
    cautions.complaint(state.complaint("model"))


def show_return(result: CaseResult) -> None:
    """Draw the way back to the ranking's own choice, where the user has chosen a model."""
    if state.case().fit.model == AUTO:
        return
    best = result.fits.best
    if best.key == result.chosen.key:
        words_ = "You have fixed this model. The interval leaves out the doubt about the model."
    else:
        words_ = f"You chose this model; the ranking has {best.record.name} first."
    st.html(f'<p class="rheo-text small">{style.escape(words_)}</p>')
    st.button(
        "Let the ranking choose",
        on_click=state.attempt,
        args=("model", state.change, ("fit", "model"), None),
    )


def comparison(result: CaseResult, other: CaseResult, system: str) -> list[list[str]]:
    """Return what changes with another result: name, before, after, change in percent."""
    both = (result, other)
    adds = [one.doubt.pressure for one in both]
    friction = [float(one.line.friction_pressure) for one in both]
    rows = [
        [
            "Pressure that the pump adds",
            *(words.pressure_in_doubt(one, system) for one in both),
            change(*adds),
        ],
        [
            "Friction in it",
            *(display.text(value, "pressure", system) for value in friction),
            change(*friction),
        ],
    ]
    rates = [0.0 if one.wall_rates is None else one.wall_rates[1] for one in both]
    rows.append(
        ["Wall shear rate", *(wall_rate_words(one, system) for one in both), change(*rates)]
    )
    start = [float(one.line.start_up.pressure) for one in both]
    texts = [display.text(value, "pressure", system) for value in start]
    return [*rows, ["Start-up pressure", *texts, change(*start)]]


def change(before: float, after: float) -> str:
    """Return a change in percent, with its sign."""
    if before <= 0:
        return ""
    percent = 100.0 * (after / before - 1.0)
    sign = "+" if percent > 0 else "−"
    return "0 %" if abs(percent) < 0.05 else f"{sign}{number(abs(percent), 2)} %"


def _name(result: CaseResult, key: str) -> str:
    name = capital(result.fits[key].record.name)
    return f"{name} (in use)" if key == result.chosen.key else name
