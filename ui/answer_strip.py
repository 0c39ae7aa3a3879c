"""The answer, at the top of every stop: pressure drop, wall shear rate, regime, size, start-up.

``answer_strip.show()`` draws it for the current case, and where there is no result says why.
``answer_strip.need_result()`` draws it and returns the result; without one it ends the script run,
so that a stop can begin with ``result = answer_strip.need_result()``.
``cells(result, system)`` returns its contents as data.
"""

from __future__ import annotations

from dataclasses import dataclass

import streamlit as st

from rheo.case import CaseResult
from rheo.report import display
from rheo.report.case_pictures import wall_rate_words
from rheo.report.numbers import number
from ui import state, style, words


@dataclass(frozen=True)
class Cell:
    """One answer.

    Parameters
    ----------
    name, value, note : str
        What it is, its value with unit, and a few words below it.
    state : str
        ``good``, ``warning``, ``bad`` or empty: colour of the note, beside its words.
    """

    name: str
    value: str
    note: str = ""
    state: str = ""


def cells(result: CaseResult, system: str) -> tuple[Cell, ...]:
    """Return the five answers."""
    return (
        _pressure(result, system),
        _wall_rate(result, system),
        _regime(result),
        _size(result),
        _start_up(result, system),
    )


def show() -> CaseResult | None:
    """Draw the strip for the current case and return its result."""
    result = state.result()
    if result is None:
        problem = state.problem()
        st.error(
            "There is no pressure drop yet. "
            + ("" if problem is None else style.plain(state.sentence(problem), 400)),
            icon=":material/error:",
        )
        return None
    st.html(html(cells(result, state.system())))
    return result


def need_result() -> CaseResult:
    """Draw the strip and return the result; end the run of the script where there is none."""
    result = show()
    if result is None:
        st.write("Put it right under Readings, Flow curve or Route, or open a sample.")
        st.stop()
    return result


def html(found: tuple[Cell, ...]) -> str:
    """Return the strip as HTML."""
    boxes = "".join(
        f'<div><div class="name">{style.escape(cell.name)}</div>'
        f'<div class="value">{style.escape(cell.value)}</div>'
        f'<div class="note {cell.state}">{style.escape(cell.note)}</div></div>'
        for cell in found
    )
    return f'<div class="rheo-strip" role="status" aria-label="Answer">{boxes}</div>'


def _pressure(result: CaseResult, system: str) -> Cell:
    friction = display.text(float(result.line.friction_pressure), "pressure", system)
    return Cell(
        "Pressure that the pump adds",
        words.pressure_in_doubt(result, system),
        f"friction {friction}; ± by all causes",
    )


def _wall_rate(result: CaseResult, system: str) -> Cell:
    if result.wall_rates is None:
        return Cell("Wall shear rate", "none", "no pipe")
    value = wall_rate_words(result, system)
    inside = result.inside_measured_range
    if inside is None:
        return Cell("Wall shear rate", value)
    return Cell(
        "Wall shear rate",
        value,
        "✓ inside the measured range" if inside else "! outside the measured range",
        "good" if inside else "warning",
    )


def _regime(result: CaseResult) -> Cell:
    pipes = result.pipes
    if not pipes:
        return Cell("Regime", "none", "no pipe")
    ratios = [float(pipe.reynolds / pipe.critical_reynolds) for pipe in pipes]
    closest = max(ratios)
    return Cell(
        "Regime",
        " and ".join(dict.fromkeys(str(pipe.regime) for pipe in pipes)),
        f"Re is {number(100 * closest, 2)} % of critical"
        if closest < 1
        else f"Re is {number(closest, 2)} times critical",
        "warning" if 0.7 < closest < 1.4 else "",
    )


def _size(result: CaseResult) -> Cell:
    names = words.line_sizes(result)
    if not names:
        return Cell("Size", "none", "no pipe")
    return Cell("Size", ", ".join(names), words.velocity_note(result, state.system()))


def _start_up(result: CaseResult, system: str) -> Cell:
    found = result.line.start_up
    value = display.text(float(found.pressure), "pressure", system)
    restarts = found.restarts
    if restarts is None:
        return Cell("Start-up pressure", value, "no rating given")
    rating = display.text(found.rating, "pressure", system)
    return Cell(
        "Start-up pressure",
        value,
        f"✓ below {rating}" if bool(restarts) else f"! above {rating}",
        "good" if bool(restarts) else "bad",
    )
