"""The converter: the same shear rate in another place, both ways."""

from __future__ import annotations

import streamlit as st

from rheo.case import CaseResult
from rheo.errors import InputError
from rheo.geometry import Geometry
from rheo.geometry.convert import Conversion, ShearPoint, convert, sentence, shear_point_at_rate
from rheo.report import display
from rheo.report.numbers import number
from rheo.report.restate import restated
from rheo.units import parse_quantity
from ui import cautions, guard, state, style, table, units_switch
from ui.shear_rates import side
from ui.shear_rates.line_rates import instrument

WAYS = ("From a flow or speed", "From a shear rate")


@st.fragment
def show(result: CaseResult) -> None:
    """Draw both sides and what comes out."""
    guard.run(lambda: _draw(result))


def _draw(result: CaseResult) -> None:
    kept = side.entered("way")
    way = st.segmented_control(
        "Convert",
        WAYS,
        default=kept.get("way", WAYS[0]),
        required=True,
        key=state.key("converter.way"),
        label_visibility="collapsed",
    )
    kept["way"] = str(way)
    geometry = instrument(result)
    other = "concentric-cylinders" if geometry is None or geometry.key == "tube" else geometry.key
    left, right = st.columns(2, gap="large")
    try:
        if way == WAYS[1]:
            with left:
                rate = _rate(result)
            with right:
                target = side.show("target", result, other)
            _show_points({"": shear_point_at_rate(result.model, target, rate)})
            return
        with left:
            source = side.show("source", result, "tube")
            at = side.setting("source", source, _default_setting(result, source))
        with right:
            target = side.show("target", result, other)
        if at is None:
            cautions.complaint("Give the flow or the speed to convert.")
            return
        _show(convert(result.model, source, at, {target.record.name: target}))
    except InputError as error:
        cautions.complaint(state.sentence(error))


def _rate(result: CaseResult) -> float:
    rates = result.wall_rates
    default = "" if rates is None else side.text(rates[1], "rate")
    typed = side.field("Shear rate", "source", "rate", default)
    if not typed:
        raise InputError("give the shear rate to convert")
    return parse_quantity(units_switch.with_unit(typed, "rate", state.system()), "1/s")


def _default_setting(result: CaseResult, geometry: Geometry) -> float | None:
    return result.flow if geometry.record.setting == "flow" else None


def _show(conversion: Conversion) -> None:
    said = restated(sentence(conversion), state.system())
    st.html(f'<p class="rheo-text lead">{style.escape(said)}</p>')
    points = {conversion.source.geometry.record.name: conversion.source, **conversion.targets}
    if len(points) == 1:
        # Twice the same kind of geometry: both are shown all the same.
        (target,) = conversion.targets.values()
        points = {"from": conversion.source, "to": target}
    _show_points(points)


def _show_points(points: dict[str, ShearPoint]) -> None:
    system = state.system()

    def cell(value: float, quantity: str) -> str:
        return display.text(float(value), quantity, system)

    rows = []
    for name, point in points.items():
        record = point.geometry.record
        reading = "pressure" if record.reading == "pressure_drop" else record.reading
        rows.append(
            [
                name or record.name,
                cell(float(point.setting), record.setting),
                cell(float(point.rate), "rate"),
                cell(float(point.stress), "stress"),
                cell(float(point.viscosity), "viscosity"),
                cell(float(point.reading), reading),
                f"{number(float(point.nominal_rate))} {display.unit_label('rate', system)}",
            ]
        )
    table.show(
        [
            "Where",
            table.Number("Flow or speed"),
            table.Number("Shear rate"),
            table.Number("Shear stress"),
            table.Number("Viscosity"),
            table.Number("Reading"),
            table.Number("Nominal rate"),
        ],
        rows,
        "Rate, stress and viscosity where the stress is largest: at the wall, the bob or the rim. "
        "The nominal rate is what a Newtonian conversion makes of the same setting.",
    )
    for point in points.values():
        cautions.show(point.cautions)
