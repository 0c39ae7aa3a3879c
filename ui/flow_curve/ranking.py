"""The ranked models in words and numbers."""

from __future__ import annotations

from collections.abc import Mapping

import streamlit as st

from rheo.case import CaseResult
from rheo.case.comparisons import ModelPressure, pressure_by_model
from rheo.fitting import Fit, Fits
from rheo.fitting.ranking import TIE
from rheo.report import display
from rheo.report.numbers import number
from rheo.report.words import capital, percent
from ui import results, state, table, words
from ui.flow_curve.compare import change

# A model with less than this chance of being the best of them fits worse; with an error so many
# times that of the first it is said to miss the shape.
_LEAST_WEIGHT, _SAME_SHAPE = 0.01, 3.0


def show(fits: Fits, chosen: Fit, pressures: Mapping[str, ModelPressure] | None = None) -> None:
    """Draw the ranking, the model in use marked.

    Parameters
    ----------
    fits, chosen : Fits, Fit
        The ranked models, and the one in use.
    pressures : mapping of str to ModelPressure, optional
        What the line takes by each model, by its key.
    """
    headings: list[table.Heading] = [
        "Model",
        table.Words("In words"),
        table.Number("Parameters"),
        table.Number("RMS error"),
        table.Number("Worst error"),
        table.Number("AICc above first"),
        table.Number("Weight"),
    ]
    system = state.system()
    if pressures is not None:
        unit = display.unit_label("pressure", system)
        headings += [table.Number(f"Pressure drop [{unit}]"), table.Number("Change")]
    rows = [
        table.Row(
            [*_cells(fit, fits, chosen), *_pressure(fit, pressures, system)],
            "chosen" if fit.key == chosen.key else "",
            fit.record.equation,
        )
        for fit in fits
    ]
    rows += [
        table.Row(
            [capital(key), f"not fitted: {reason}", *[""] * (len(headings) - 2)],
            "muted",
        )
        for key, reason in fits.skipped.items()
    ]
    table.show(
        headings,
        rows,
        "All fitted to the same readings with the same weights. AICc weighs the misfit against the "
        "number of parameters; the weight (Akaike) is the chance that a model is the best of them.",
    )


def pressures_of(result: CaseResult) -> dict[str, ModelPressure]:
    """Return what the line takes by every model, by its key."""
    found: dict[str, ModelPressure] = _pressures(
        results.result_key(state.case(), state.files()), result
    )
    return found


@st.cache_resource(max_entries=32, show_spinner=False)
def _pressures(key: str, _result: CaseResult) -> dict[str, ModelPressure]:  # noqa: ARG001
    return {one.fit.key: one for one in pressure_by_model(_result, least_weight=0.0)}


def _cells(fit: Fit, fits: Fits, chosen: Fit) -> list[str]:
    return [
        capital(fit.record.name),
        verdict(fit, fits, chosen),
        str(fit.parameter_count),
        percent(fit.rms_relative_error),
        percent(fit.worst_relative_error),
        _criterion(fit, fits.best),
        percent(fit.weight) if fit.weight >= 1e-4 else "< 0.01 %",
    ]


def _criterion(fit: Fit, best: Fit) -> str:
    """Return by how much AICc lies above the best, or from how many readings it would be known."""
    if fit.readings_for_aicc is not None:
        return f"needs {fit.readings_for_aicc} readings"
    return number(fit.aicc - best.aicc, 3) if fit is not best else "0"


def _pressure(
    fit: Fit, pressures: Mapping[str, ModelPressure] | None, system: str
) -> tuple[str, ...]:
    if pressures is None:
        return ()
    found = pressures.get(fit.key)
    if found is None:
        return ("not known", "")
    shown = number(float(display.shown(found.friction_pressure, "pressure", system)))
    return shown, change(1.0, 1.0 + found.share)


def verdict(fit: Fit, fits: Fits, chosen: Fit) -> str:
    """Return in a few words how a model compares with the first of the ranking."""
    best = fits.best
    above = fit.aicc - best.aicc
    more = fit.parameter_count - best.parameter_count
    if fit.key == best.key:
        said = "first of the ranking" if chosen.key != fit.key else "in use: first of the ranking"
    elif above <= 0:
        said = f"fits as well, with {words.count(more, 'parameter')} more"
    elif above <= TIE:
        extra = f", with {words.count(more, 'parameter')} more" if more > 0 else ""
        said = f"as likely{extra}"
    elif fit.rms_relative_error <= 1.05 * best.rms_relative_error and more > 0:
        said = f"no better fit for {words.count(more, 'parameter')} more"
    elif fit.weight >= _LEAST_WEIGHT:
        said = "less likely"
    elif fit.rms_relative_error <= _SAME_SHAPE * best.rms_relative_error:
        said = "fits worse"
    else:
        said = "misses the shape"
    return f"in use by your choice: {said}" if fit.key == chosen.key != best.key else said
