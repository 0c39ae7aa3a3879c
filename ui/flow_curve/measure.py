"""Which readings to take next, so that the pressure drop is known best."""

from __future__ import annotations

import streamlit as st

from rheo.case import CaseResult
from rheo.line.measure_next import NextReadings
from rheo.report import display
from rheo.report.numbers import number
from rheo.report.words import percent
from ui import cautions, state, style, table

_ROWS = 8
_SETTINGS = {"angular_speed": ("Speed", "angular_speed"), "flow": ("Flow", "flow")}


def show(result: CaseResult) -> None:
    """Draw the answer in a sentence, and what a reading at each speed would tell."""
    found = result.next_readings
    if found is None:
        st.write(
            "Nothing can be said: no fitted model has parameters that the readings tell apart. "
            "Take readings over a wider range of speeds."
        )
        return
    st.html(f'<p class="rheo-text lead">{style.escape(found.sentence)}</p>')
    cautions.show(found.cautions)
    system = state.system()
    name, quantity = _SETTINGS.get(found.kind, ("Shear rate", "rate"))
    headings: list[str | table.Number] = [
        table.Number(f"{name} [{display.unit_label(quantity, system)}]")
    ]
    if found.kind != "rate":
        headings.append(table.Number(f"Shear rate [{display.unit_label('rate', system)}]"))
    headings.append(table.Number("Interval would become"))
    table.show(
        headings,
        rows(found, system),
        f"One more reading at each {name.lower()}; interval by the readings and model alone",
    )


def rows(found: NextReadings, system: str) -> list[table.Row]:
    """Return some of the speeds in rising order, the most telling one marked."""
    best = found.ranking[0]
    rising = sorted(found.ranking, key=lambda one: one.setting)
    step = max(1, len(rising) // _ROWS)
    kept = sorted({*rising[::step], rising[-1], best}, key=lambda one: one.setting)
    quantity = _SETTINGS.get(found.kind, ("", "rate"))[1]
    shown = []
    for one in kept:
        cells = [number(float(display.shown(one.setting, quantity, system)))]
        if found.kind != "rate":
            cells.append(number(float(display.shown(one.rate, "rate", system))))
        cells.append(f"± {percent(one.half_width)}")
        shown.append(table.Row(cells, "chosen" if one is best else ""))
    return shown
