"""The views of the pressure stop: each one picture, and the tables that go with it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import streamlit as st

from rheo.case import CaseResult
from rheo.case.comparisons import pressure_by_model, regime_margins
from rheo.report import display
from rheo.report.case_pictures import (
    doubt_picture,
    pressure_picture,
    shear_rates_picture,
    velocity_picture,
)
from rheo.report.document import Facts, Figure, Paragraph, Section
from rheo.report.numbers import number
from rheo.report.restate import restated
from rheo.report.sections.pressure import duty_blocks
from rheo.report.sections.profile import profile_facts
from rheo.report.sections.regimes import regime_sentence, regimes_table
from rheo.report.sections.starting import start_up_section
from rheo.report.sections.system import system_section
from rheo.report.words import capital, percent
from ui import blocks, cautions, guard, pictures, places, state, style, table
from ui.pressure import holding
from ui.shear_rates import line_rates

# How many models of the ranking stand with their pressures.
_MODELS = 5


@dataclass(frozen=True)
class View:
    """One view: name, what draws it, where its Cautions are listed, safety sentences besides."""

    name: str
    draw: Callable[[CaseResult], None]
    place: str = ""
    safety: tuple[str, ...] = ()


@st.fragment
def show(result: CaseResult) -> None:
    """Draw the choice of the view, and the view."""
    chosen = st.segmented_control(
        "View",
        list(VIEWS),
        default="line",
        required=True,
        format_func=lambda key: _title(VIEWS[key], result),
        key=state.key("pressure.view"),
        label_visibility="collapsed",
    )
    view = VIEWS[str(chosen or "line")]
    with guard.Guard(), st.spinner("Working it out"):
        view.draw(result)
    # The answer strip shows both pressures above every view.
    cautions.safety("pressure", "start-up", *view.safety)


def _title(view: View, result: CaseResult) -> str:
    """Return the name of a view, marked where Cautions stand in it."""
    warns = view.place and places.at(view.place, result)
    return f"{view.name} :material/warning:" if warns else view.name


def show_cautions(result: CaseResult) -> None:
    """Draw what makes the pressure itself doubtful."""
    cautions.show(places.at("pressure", result))


def text(words: str, kind: str = "lead") -> None:
    """Draw a paragraph."""
    st.html(f'<p class="rheo-text {kind}">{style.escape(words)}</p>')


def show_section(section: Section, key: str) -> None:
    """Draw a section of the note: sentence, picture beside its facts, then the rest."""
    parts = [one for one in section.blocks if getattr(one, "kind", "") != "safety"]
    leads = [one for one in parts if isinstance(one, Paragraph) and one.kind == "lead"]
    figures = [one for one in parts if isinstance(one, Figure)]
    facts = [one for one in parts if isinstance(one, Facts)]
    for lead in leads:
        blocks.show(lead, key)
    if figures and facts:
        left, right = st.columns([3, 2], gap="medium", vertical_alignment="center")
    else:
        left = right = st.container()
    with left:
        for place, figure in enumerate(figures):
            pictures.show(figure.picture, f"{key}.{place}", title=False)
            st.caption(style.plain(figure.caption or figure.picture.description))
    with right, st.container(key=f"facts_beside_{key.replace('.', '_')}"):
        for fact in facts:
            blocks.show(fact, key)
    for rest in parts:
        if rest not in leads and not isinstance(rest, Figure | Facts):
            blocks.show(rest, key)


def _show_line(result: CaseResult) -> None:
    picture = pressure_picture(result, state.system())
    pictures.show(picture, "pressure.line", title=False)
    st.caption(style.plain(picture.description))
    cautions.show(places.at("pressure.line", result))
    _show_facts(result)


def _show_facts(result: CaseResult) -> None:
    """Draw the facts of the duty in two columns, and what their intervals hold."""
    found = duty_blocks(result.line, result.doubt, state.system())
    rows = [row for one in found if isinstance(one, Facts) for row in one.rows]
    half = (len(rows) + 1) // 2
    for column, part in zip(st.columns(2, gap="large"), (rows[:half], rows[half:]), strict=True):
        with column, st.container(key=f"facts_beside_duty_{len(part)}_{part[0][0]}"):
            blocks.show(Facts(tuple(part)), "pressure.facts")
    for one in found:
        if isinstance(one, Paragraph):
            blocks.show(one, "pressure.facts")


def _show_system(result: CaseResult) -> None:
    system = state.system()
    section = system_section(
        result.system_curve, result.line, result.operating, result.line.start_up.rating, system
    )
    show_section(section, "pressure.system")
    shown = () if result.operating is None else result.operating.cautions
    cautions.show(one for one in places.at("pressure.system", result) if one not in shown)


def _show_regime(result: CaseResult) -> None:
    system = state.system()
    margins = regime_margins(result)
    text(regime_sentence(margins))
    pipes = [part for part in result.line.parts if part.kind == "pipe"]
    if pipes:
        losses = [float(part.pressure_loss) for part in pipes]
        chosen = st.selectbox(
            "Pipe to look into",
            range(len(pipes)),
            index=losses.index(max(losses)),
            format_func=lambda place: pipes[place].name,
            key=state.key(f"pressure.pipe.{len(pipes)}"),
            width=320,
        )
        left, right = st.columns([3, 2], gap="medium", vertical_alignment="center")
        picture = velocity_picture(result, pipes[chosen], system)
        with left:
            if picture is None:
                st.caption(
                    f"The flow in {style.plain(pipes[chosen].name, 60)} is "
                    f"{pipes[chosen].regime}; the velocity across it is drawn for laminar flow "
                    "only."
                )
            else:
                pictures.show(picture, "pressure.velocity", title=False)
                st.caption(style.plain(picture.description))
        with right, st.container(key="facts_beside_profile"):
            blocks.show(profile_facts(result.pipes[chosen], system), "pressure.profile")
    blocks.show(regimes_table(margins, system), "pressure.regimes")
    st.caption(
        "Reynolds numbers are Metzner and Reed's. By all criteria: from the most careful to the "
        "most hopeful of those made for this flow curve."
    )


def _show_rates(result: CaseResult) -> None:
    pictures.show(shear_rates_picture(result, state.system()), "pressure.rates", title=False)
    line_rates.show(result)


def _show_start_up(result: CaseResult) -> None:
    start_up = result.line.start_up
    show_section(start_up_section(start_up, state.system()), "pressure.start")
    cautions.show(
        one for one in places.at("pressure.start", result) if one not in start_up.cautions
    )


def _show_doubt(result: CaseResult) -> None:
    budget = result.doubt
    text(restated(budget.sentence, state.system()))
    left, right = st.columns([3, 2], gap="medium")
    with left:
        pictures.show(doubt_picture(result), "pressure.doubt", title=False)
        st.caption("Share of the variance by cause, to first order, the causes independent.")
    with right:
        st.markdown("**Which choice of model changes it**")
        table.show(
            [
                "Model",
                table.Number("Weight"),
                table.Number(f"Friction [{display.unit_label('pressure', state.system())}]"),
                table.Number("Change"),
            ],
            by_model(result, state.system()),
            "The first of the ranking, and the model in use.",
        )
    cautions.show(budget.cautions)
    following = result.next_readings
    if following is not None:
        st.markdown("**What to measure next**")
        text(restated(following.sentence, state.system()), "")


def by_model(result: CaseResult, system: str) -> list[table.Row]:
    """Return name, weight, friction pressure and change for every likely model."""
    rows = []
    for place, one in enumerate(pressure_by_model(result, least_weight=0.0)):
        used = one.fit.key == result.chosen.key
        if place >= _MODELS and not used:
            continue
        sign = "+" if one.share > 0 else "−"
        small = abs(one.share) < 5e-4
        rows.append(
            table.Row(
                (
                    capital(one.fit.record.name),
                    "< 0.1 %" if one.fit.weight < 1e-3 else percent(one.fit.weight),
                    number(float(display.shown(one.friction_pressure, "pressure", system))),
                    "in use" if used else "0 %" if small else f"{sign}{percent(abs(one.share))}",
                ),
                "chosen" if used else "",
            )
        )
    return rows


VIEWS = {
    "line": View("Along the line", _show_line, "pressure.line"),
    "system": View("System and pump", _show_system, "pressure.system"),
    "regime": View("Regime and profile", _show_regime),
    "rates": View("Shear rates", _show_rates),
    "start": View("Start-up", _show_start_up, "pressure.start"),
    "doubt": View("Doubt", _show_doubt),
    "holding": View("Holding and cleaning", holding.show, safety=("food-safety",)),
}
