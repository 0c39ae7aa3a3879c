"""What if: other values beside those of the case, which stays until the user keeps them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import streamlit as st

from rheo.case import Case, CaseResult
from rheo.case.comparisons import central_operating_point
from rheo.case.solids_state import follows_solids, solids_basis
from rheo.case.what_if import SolidsChange, WhatIf, what_if
from rheo.errors import InputError
from rheo.fitting.scaled_fits import ScaledFits
from rheo.line.operating import OperatingPoint
from rheo.readings.solids import in_words, read_share
from rheo.report import display
from rheo.units import parse_quantity
from ui import cautions, guard, results, state, table, words
from ui.flow_curve.compare import change, comparison
from ui.units_switch import with_unit

_NAMES = ("flow", "thicker", "warmer", "before", "after", "density")


@dataclass(frozen=True)
class Asked:
    """What the controls ask for.

    Parameters
    ----------
    change : WhatIf or None
        None where it cannot be understood.
    complaint : str
        Why, in a sentence.
    """

    change: WhatIf | None
    complaint: str = ""


def asked(values: dict[str, Any], system: str, fitted_by: str | None = None) -> Asked:
    """Return what the values of the controls ask for.

    Parameters
    ----------
    values : dict
        Of the controls by name: ``flow``, ``before``, ``after`` and ``density`` as typed,
        ``thicker`` in percent, ``warmer`` as typed, in degrees of the unit system.
    system : str
        Unit system.
    fitted_by : str, optional
        Where the fit follows the solids, so that ``before`` is not asked for: by what their
        fractions are, ``volume``, ``mass`` or an empty text.
    """

    def text(name: str) -> str:
        return str(values.get(name) or "").strip()

    if fitted_by is None and bool(text("before")) != bool(text("after")):
        return Asked(None, "Solids: give both, what the readings had and what there might be.")
    try:
        flow = with_unit(text("flow"), "flow", system) if text("flow") else None
        warmer = 0.0
        if text("warmer"):
            warmer = parse_quantity(
                with_unit(text("warmer"), "temperature_rise", system).replace("°F", "delta_degF"),
                "K",
                "warmer or colder",
            )
        solids = None
        if text("after"):
            by = "volume" if fitted_by is None else fitted_by
            before = _share(text("before"), by) if fitted_by is None else None
            density = None
            if text("density"):
                density = parse_quantity(
                    with_unit(text("density"), "density", system), "kg/m^3", "density of the solids"
                )
            solids = SolidsChange(before, _share(text("after"), by), density)
    except InputError as error:
        return Asked(None, state.sentence(error))
    return Asked(WhatIf(flow, 1.0 + float(values.get("thicker") or 0) / 100.0, warmer, solids))


def _share(typed: str, by: str) -> float:
    """Return a share [-] of a number in percent, or of one with its unit such as ``46 wt%``."""
    try:
        return float(typed) / 100.0
    except ValueError:
        share, said = read_share(typed, "solids")
    if said and by and said != by:
        raise InputError(f"'{typed[:60]}' is by {said}; give it by {by}", "solids")
    return share


@st.fragment
def show(result: CaseResult) -> None:
    """Draw the controls, and old and new side by side."""
    if st.session_state.pop("rheo.what_if.kept", False):
        st.rerun()
    with guard.Guard(), st.container(border=True, key="what_if"):
        st.markdown("**What if** the flow, the batch or the temperature were otherwise?")
        with st.container(key="pairs_what_if"):
            _controls(result)
        by = solids_basis(result.case, result.fitted) if follows_solids(result.fits) else None
        wanted = asked(state.what_if(), state.system(), by)
        if wanted.change is None:
            cautions.complaint(wanted.complaint)
        elif not wanted.change.changes_nothing:
            _show_comparison(result, wanted.change)


def _controls(result: CaseResult) -> None:
    system = state.system()
    degrees = display.unit_label("temperature_rise", system)
    columns = st.columns([1.2, 1.2, 1.2, 1], vertical_alignment="bottom")
    flow = display.text(result.flow, "flow", system)
    _entry(columns[0], "flow", "Flow", f"now {flow}")
    key = _key("thicker")
    columns[1].number_input(
        "Thinner or thicker [%]",
        min_value=-90,
        max_value=900,
        value=int(state.what_if().get("thicker") or 0),
        step=10,
        key=key,
        on_change=_take,
        args=("thicker",),
        help="So much less or more stress at every shear rate; below 0 is thinner.",
    )
    _entry(
        columns[2],
        "warmer",
        f"Warmer or colder [{degrees}]",
        "-10 is colder",
        "Added to every temperature of the product along the line.",
    )
    with columns[3], st.popover("Solids", icon=":material/grain:", width="stretch"):
        known = follows_solids(result.fits)
        if known:
            now = in_words(float(result.product.solids_fraction or 0.0))
            by = solids_basis(result.case, result.fitted)
            label = f"Solids [% by {by}]" if by else "Solids [%]"
            _entry(st, "after", label, f"now {now}")
        else:
            _entry(st, "before", "Solids in the readings [% by volume]", "such as 20")
            _entry(st, "after", "What if there were [% by volume]", "such as 25")
        _entry(
            st,
            "density",
            "Density of the solids, if the product's is to move",
            display.unit_label("density", system),
        )
        st.caption(
            _by_the_law(result)
            if known
            else "Thickened as spheres without attraction (Krieger and Dougherty 1959). "
            "Flocculated and fine slurries thicken faster: measure them."
        )


def _by_the_law(result: CaseResult) -> str:
    fits = result.fits
    low, high = fits.range if isinstance(fits, ScaledFits) else (0.0, 0.0)
    return (
        f"By the flow curves fitted to the readings, taken at {in_words(low)} to "
        f"{in_words(high)} of solids."
    )


def _entry(place: Any, name: str, label: str, placeholder: str, help: str | None = None) -> None:
    place.text_input(
        label,
        value=str(state.what_if().get(name) or ""),
        placeholder=placeholder,
        key=_key(name),
        on_change=_take,
        args=(name,),
        help=help,
    )


def _key(name: str) -> str:
    return state.key(f"what_if.{name}.{st.session_state.get('rheo.what_if.turn', 0)}")


def _take(name: str) -> None:
    state.what_if()[name] = st.session_state[_key(name)]


def _show_comparison(result: CaseResult, wanted: WhatIf) -> None:
    try:
        case = what_if(result, wanted)
    except InputError as error:
        cautions.complaint(state.sentence(error))
        return
    with st.spinner("Working it out"):
        other = results.result_of(case, state.files())
    if other.value is None:
        if other.problem is not None:
            cautions.complaint(state.sentence(other.problem))
        return
    new: CaseResult = other.value
    rows = compared(result, new, state.system())
    table.show(["", table.Number("Now"), table.Number("What if"), table.Number("Change")], rows)
    known = set(result.cautions)
    cautions.show(one for one in new.cautions if one not in known)
    if wanted.warmer and not new.product.knows_temperature:
        st.html(
            '<p class="rheo-text small">The readings are at one temperature, so the flow curve '
            "does not move with it. Take readings at two temperatures around the line's.</p>"
        )
    with st.container(horizontal=True):
        st.button("Keep these values", type="primary", on_click=_keep, args=(case,))
        st.button("Back to the case as it is", on_click=_forget)
    cautions.complaint(state.complaint("what_if"))


def compared(result: CaseResult, other: CaseResult, system: str) -> list[list[str]]:
    """Return name, value now, value then and change of what a duty is judged by."""
    flows = [display.text(one.flow, "flow", system) for one in (result, other)]
    rows = [
        ["Flow", *flows, change(result.flow, other.flow)],
        *comparison(result, other, system),
    ]
    rows.append(["Regime", _regimes(result), _regimes(other), ""])
    for name, key, quantity in (
        ("NPSH available", "npsh_available", "length"),
        ("Shaft power", "shaft_power", "power"),
        ("Time in the line", "residence_time", "time"),
    ):
        values = [getattr(one.line, key) for one in (result, other)]
        if None not in values:
            texts = [display.text(float(value), quantity, system) for value in values]
            rows.append([name, *texts, change(*map(float, values))])
    points = [central_operating_point(one) for one in (result, other)]
    if points[0] is not None and points[1] is not None:
        rows.append(["The pump would give", *(_moves(one, system) for one in points), ""])
    rating = result.line.start_up.rating
    if rating is not None:
        rows.append(["Starts again after a stop", _starts(result), _starts(other), ""])
    return rows


def _moves(point: OperatingPoint | None, system: str) -> str:
    if point is None or not point.found:
        return "! no operating point"
    return display.text(point.flow, "flow", system)


def _regimes(result: CaseResult) -> str:
    return " and ".join(dict.fromkeys(part.regime for part in result.line.parts if part.regime))


def _starts(result: CaseResult) -> str:
    return "✓ yes" if bool(result.line.start_up.restarts) else "! no"


def _keep(case: Case) -> None:
    state.put(case)
    state.touch()
    _forget()
    st.session_state["rheo.what_if.kept"] = True


def _forget() -> None:
    state.what_if().clear()
    st.session_state["rheo.what_if.turn"] = int(st.session_state.get("rheo.what_if.turn", 0)) + 1


def lead(result: CaseResult, system: str) -> str:
    """Return what the pump must add, and of what it is made, in a sentence."""
    line = result.line
    adds = words.pressure_in_doubt(result, system)
    friction = display.text(float(line.friction_pressure), "pressure", system)
    static = display.text(float(line.static_pressure), "pressure", system)
    flow = display.text(result.flow, "flow", system)
    return (
        f"At {flow} the pump must add {adds} (95 %, by all causes): {friction} of friction and "
        f"{static} for heights and vessels."
    )
