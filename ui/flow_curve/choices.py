"""What another weighting, and the other branch of a sweep, would change; worked out when asked."""

from __future__ import annotations

import numpy as np
import streamlit as st

from rheo.case import CaseResult
from rheo.case.fit_choices import FitChoices, fit_choices
from rheo.fitting import Fit, Fits
from rheo.fitting.sweeps import SweepComparison
from rheo.report import display
from rheo.report.numbers import number, with_doubt
from rheo.report.scripts import unit_words
from rheo.report.words import capital, percent
from ui import cautions, state, style, table, words, work
from ui.flow_curve.compare import change
from ui.flow_curve.how import WORDS


def show(result: CaseResult) -> None:
    """Draw the button, and once it is pressed both comparisons."""
    asked = state.key("flow_curve.choices")
    if not st.toggle(
        "Compare them", key=asked, help="Fits all models again, a few times; takes some seconds."
    ):
        st.write(
            "How far the result hangs on the weights of the readings, and on the way up or down of "
            "a sweep."
        )
        return
    found = work.outcome("choices", "Comparing", result, lambda tell: fit_choices(result, tell))
    if found is None:
        return
    if found.value is None:
        if found.problem is not None:
            cautions.complaint(state.sentence(found.problem))
        return
    _show_weightings(found.value)
    _show_sweeps(found.value.sweeps, result)


def _show_weightings(found: FitChoices) -> None:
    st.html(f'<p class="rheo-text lead">{style.escape(found.sentence)}</p>')
    table.show(
        [
            "A reading is uncertain by",
            "Model",
            table.Words("Parameters"),
            table.Number("Pressure that the pump adds"),
            table.Number("Change"),
        ],
        weighting_rows(found, state.system()),
        "Take another under How it is fitted",
    )


def _show_sweeps(found: SweepComparison | None, result: CaseResult) -> None:
    if found is None:
        fitted_too = result.case.fit.entrance or result.case.fit.slip
        st.write(
            "Way up and way down are not compared where slip or an entrance loss is fitted."
            if fitted_too
            else "The readings do not say which were taken on the way up and which on the way "
            "down; there are no branches to compare."
        )
        return
    st.html(f'<p class="rheo-text lead">{style.escape(found.sentence)}</p>')
    table.show(
        [
            "Fitted",
            "Model",
            table.Number("Yield stress [Pa]"),
            table.Number("RMS error"),
        ],
        sweep_rows(found),
        "Choose the branch that is fitted under Readings",
    )
    static = found.static_yield_stress
    if static is not None:
        given = result.product.static_yield_stress
        taken = (
            "none is given"
            if given is None
            else f"{display.text(float(np.asarray(given)), 'stress', state.system())} is given"
        )
        cautions.note(
            f"For start-up take a static yield stress of at least {number(static.value)} Pa "
            f"({static.origin}); a vane after the longest rest of the line is surer. Under "
            f"Readings, with the product, {taken}."
        )


def weighting_rows(found: FitChoices, system: str) -> list[table.Row]:
    """Return a row for each weighting, the one in use first and marked."""
    (now, first), *_ = found.weightings.items()
    before = first.doubt.pressure
    return [
        table.Row(
            [
                WORDS.get(name, name) + (" (in use)" if name == now else ""),
                capital(one.chosen.record.name),
                _parameters(one.chosen),
                words.pressure_in_doubt(one, system),
                "" if name == now else change(before, one.doubt.pressure),
            ],
            "chosen" if name == now else "",
        )
        for name, one in found.weightings.items()
    ]


def sweep_rows(found: SweepComparison) -> list[list[str]]:
    """Return a row for the way up, the way down and both together."""
    named: tuple[tuple[str, Fits], ...] = (
        ("way up", found.up),
        ("way down", found.down),
        ("both", found.both),
    )
    return [
        [
            name,
            capital(fits.best.record.name),
            number(float(np.asarray(fits.best.model.yield_stress))),
            percent(fits.best.rms_relative_error),
        ]
        for name, fits in named
    ]


def _parameters(fit: Fit) -> str:
    shown = []
    for one in fit.parameters.values():
        value = with_doubt(one.value, one.stderr) if one.stderr > 0 else number(one.value)
        unit = "" if one.unit == "-" else f" {unit_words(one.unit)}"
        shown.append(f"{one.symbol} = {value}{unit}")
    return ", ".join(shown)
