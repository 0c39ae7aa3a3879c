"""The size to take: in a sentence, beside its neighbours, and one click to take it."""

from __future__ import annotations

import streamlit as st

from rheo.case import CaseResult
from rheo.case.take_size import with_size
from rheo.line.size_steps import SizeStep, candidate_in_line, sizes_beside
from rheo.line.size_words import Candidate
from rheo.line.sizing import Sizing
from rheo.report import display
from rheo.report.case_pictures import currency
from rheo.report.numbers import number
from rheo.report.restate import restated
from rheo.report.words import percent, without_shared_words
from ui import cautions, state, style, table


def show(result: CaseResult, sizing: Sizing) -> None:
    """Draw the recommendation and the button that takes it."""
    sentence = restated(sizing.sentence, state.system())
    st.html(f'<p class="rheo-text lead">{style.escape(sentence)}</p>')
    now = candidate_in_line(sizing, result.line.line)
    best = sizing.recommended
    with st.container(horizontal=True, vertical_alignment="bottom"):
        if best is not None:
            taken, name = now is not None and now.size == best.size, style.plain(best.size.name)
            st.button(
                f"{name} is in the route" if taken else f"Take {name}",
                type="primary",
                disabled=taken,
                icon=":material/check:",
                on_click=state.attempt,
                args=("sizes.take", take, best),
            )
        every = list(sizing.candidates)
        other = st.selectbox(
            "Another size",
            range(len(every)),
            index=None if now is None else every.index(now),
            placeholder="Another size",
            format_func=lambda place: every[place].size.name,
            key=state.key(f"sizes.other.{None if now is None else now.size.name}"),
            label_visibility="collapsed",
            width=280,
        )
        if other is not None and (now is None or every[other].size != now.size):
            st.button(
                "Take this one",
                on_click=state.attempt,
                args=("sizes.take", take, every[other]),
            )
    cautions.complaint(state.complaint("sizes.take"))


def take(candidate: Candidate) -> None:
    """Put a size into all pipes that may change size."""
    state.put(with_size(state.case(), candidate.size))
    state.touch()


def show_steps(result: CaseResult, sizing: Sizing) -> None:
    """Draw the size in use between its neighbours: what they would change."""
    at = candidate_in_line(sizing, result.line.line) or sizing.recommended
    if at is None:
        return
    smaller, larger = sizes_beside(sizing, at)
    shared, short = short_names(sizing)
    system = state.system()
    money = currency(result)
    headings: list[str | table.Number] = [
        "",
        f"Size of {shared}" if shared else "Size",
        table.Number(f"Pressure [{display.unit_label('pressure', system)}]"),
        table.Number(f"Velocity [{display.unit_label('velocity', system)}]"),
    ]
    if at.annual_cost is not None:
        headings += [
            table.Number(f"Capital [{money}]"),
            table.Number(f"Energy [{money}/year]"),
            table.Number(f"Cost [{money}/year]"),
        ]
    headings.append("Verdict")
    now = "In the route" if candidate_in_line(sizing, result.line.line) else "Recommended"
    rows = [
        _row(words, step, at, short, system)
        for words, step in (("One size down", smaller), (now, at), ("One size up", larger))
        if step is not None
    ]
    caption = (
        "" if at.annual_cost is None else "Costs of the sizes beside it: more or less than it."
    )
    with st.container(key="sizes_steps"):
        table.show(headings, rows, caption)


def short_names(sizing: Sizing) -> tuple[str, dict[str, str]]:
    """Return the words that the names of all sizes share, and the short name of each."""
    names = [one.size.name for one in sizing.candidates]
    shared, short = without_shared_words(names)
    return shared, dict(zip(names, short, strict=True))


def _row(
    words: str, step: SizeStep | Candidate, at: Candidate, short: dict[str, str], system: str
) -> table.Row:
    one = step.candidate if isinstance(step, SizeStep) else step
    pressure = display.shown(one.pressure, "pressure", system)
    cells = [
        words,
        short[one.size.name],
        number(float(pressure)),
        number(float(display.shown(one.velocity, "velocity", system))),
    ]
    if at.annual_cost is not None:
        for key in ("capital", "energy", "annual_cost"):
            if isinstance(step, SizeStep):
                cells.append(_more(getattr(step, key)))
            else:
                value = getattr(one, key)
                cells.append("" if value is None else number(value))
    cells.append("passes" if one.passes else f"fails: {restated(one.reasons[0], system)}")
    mark = "chosen" if one is at else "" if one.passes else "failed"
    return table.Row(cells, mark)


def _more(value: float | None) -> str:
    if value is None:
        return ""
    return f"+{number(value)}" if value > 0 else f"−{number(-value)}" if value < 0 else "0"


def show_moves(sizing: Sizing, system: str) -> None:
    """Draw how the choice moves with the doubt in the product and with the flow."""
    left, right = st.columns(2, gap="large")
    _, short = short_names(sizing)
    with left:
        if sizing.choice_by_draw:
            table.show(
                ["Size chosen", table.Number("By so many of the likely flow curves")],
                [(short.get(name, name), percent(share)) for name, share in sizing.choice_by_draw],
            )
        else:
            st.caption("There are no draws of the flow curve, so no doubt to follow.")
    with right:
        table.show(
            [table.Number(f"Flow [{display.unit_label('flow', system)}]"), "Size chosen"],
            [
                (number(float(display.shown(flow, "flow", system))), short.get(name, name))
                for flow, name in sizing.choice_by_flow
            ],
        )


def more_rows(sizing: Sizing, system: str) -> tuple[list[str | table.Number], list[table.Row]]:
    """Return headings and rows of what else is known of each size."""

    def cell(value: float | None, quantity: str) -> str:
        return "" if value is None else number(float(display.shown(value, quantity, system)))

    columns = (
        ("Hold time", "hold_time", "time"),
        ("Time in the line", "residence_time", "time"),
        ("NPSH available", "npsh", "length"),
        ("Cleaning flow", "cleaning_flow", "flow"),
        ("Pressure with water", "cleaning_pressure", "pressure"),
    )
    _, short = short_names(sizing)
    headings: list[str | table.Number] = ["Size", "Regime", table.Number("Sure to pass [%]")]
    headings += [
        table.Number(f"{name} [{display.unit_label(quantity, system)}]")
        for name, _, quantity in columns
    ]
    rows = []
    for one in sizing.candidates:
        sure = "" if one.share_passing is None else number(100 * one.share_passing, 2)
        cells = [short[one.size.name], one.regime, sure]
        cells += [cell(getattr(one, key), quantity) for _, key, quantity in columns]
        mark = "chosen" if one is sizing.recommended else "" if one.passes else "failed"
        rows.append(table.Row(cells, mark))
    return headings, rows
