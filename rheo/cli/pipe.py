"""`rheo pipe`: one flow curve in one pipe."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated, Any

import typer

from rheo.cli import terminal
from rheo.cli.flow_curve_options import ModelKey, Settings, flow_curve
from rheo.cli.options import Json, UnitsOption, in_range, quantity
from rheo.cli.terminal import Units
from rheo.errors import InputError

if TYPE_CHECKING:
    from rheo.hydraulics import PipeFlow


def pipe(
    model: ModelKey,
    diameter: Annotated[str, typer.Option("--diameter", "-d", help="Inside diameter: 50mm.")],
    density: Annotated[str, typer.Option("--density", help="Density: '1100 kg/m3'.")],
    settings: Settings,
    flow: Annotated[
        str | None, typer.Option("--flow", "-q", help="Flow: '5 m3/h'. This or --velocity.")
    ] = None,
    velocity: Annotated[
        str | None, typer.Option("--velocity", "-v", help="Mean velocity: '1.2 m/s'.")
    ] = None,
    length: Annotated[
        str | None, typer.Option("--length", "-l", help="Length, for the pressure drop: 30m.")
    ] = None,
    roughness: Annotated[
        str, typer.Option("--roughness", help="Equivalent sand roughness: 0.05mm.")
    ] = "0 m",
    regime: Annotated[
        str | None, typer.Option("--regime", help="Force 'laminar' or 'turbulent'.")
    ] = None,
    method: Annotated[
        str | None, typer.Option("--method", help="Turbulent friction method.")
    ] = None,
    units: UnitsOption = Units.metric,
    as_json: Json = False,
) -> None:
    """Pressure gradient and wall shear rate in one straight pipe.

    Example: rheo pipe -m power-law -s consistency=2 -s flow_index=0.5 -d 50mm -q "5 m3/h" --density
    1100 --length 30m
    """
    import numpy as np

    from rheo.case.fields import FASTEST, HEAVIEST, LARGEST_FLOW, LONGEST, NARROWEST, WIDEST
    from rheo.hydraulics import pipe_flow

    curve = flow_curve(model, settings)
    inside = in_range(diameter, "m", "--diameter", WIDEST, "such as 50mm", NARROWEST)
    if (flow is None) == (velocity is None):
        found = "neither" if flow is None else "both"
        raise InputError(f"found {found} of --flow and --velocity; give one of them", "--flow")
    area = 0.25 * np.pi * inside**2
    if flow is not None:
        rate = in_range(flow, "m^3/s", "--flow", LARGEST_FLOW, "such as '5 m3/h'")
        speed = rate / area
    else:
        speed = in_range(velocity or "", "m/s", "--velocity", FASTEST, "such as '1.2 m/s'")
    long = None
    if length is not None:
        long = in_range(length, "m", "--length", LONGEST, "such as 30m")
    mass = in_range(density, "kg/m^3", "--density", HEAVIEST, "such as '1100 kg/m3'")
    result = pipe_flow(
        curve,
        inside,
        speed,
        mass,
        quantity(roughness, "m", "--roughness"),
        regime=regime,
        method=method,
    )
    if as_json:
        terminal.print_json(_as_dict(result, speed * area, long))
    else:
        _show(result, speed * area, long, units.value)


def _as_dict(result: PipeFlow, flow: float, length: float | None) -> dict[str, Any]:
    from rheo.case.as_data import model_data, pipe_data
    from rheo.line.safety import GENERAL, PRESSURE

    found = {
        "model": model_data(result.model),
        "flow": flow,
        **pipe_data(result),
        "safety": [PRESSURE, GENERAL],
    }
    if length is not None:
        found |= {
            "length": length,
            "pressure_drop": float(result.pressure_gradient * length),
        }
    return found


def _show(result: PipeFlow, flow: float, length: float | None, units: str) -> None:
    from rheo.line.safety import GENERAL, PRESSURE
    from rheo.report.display import text
    from rheo.report.numbers import exact, number

    out = terminal.console()
    record = result.model.record
    values = ", ".join(
        f"{parameter.symbol} {exact(float(result.model.parameters[parameter.key]))}"
        + ("" if parameter.unit == "-" else f" {parameter.unit}")
        for parameter in record.parameters
    )
    terminal.heading(out, f"{record.name[:1].upper()}{record.name[1:]} in a straight pipe", values)
    terminal.values(
        out,
        [
            ("inside diameter", terminal.given(float(result.diameter), "diameter", units)),
            ("flow", terminal.given(flow, "flow", units)),
            ("mean velocity", text(result.velocity, "velocity", units)),
            ("regime", result.regime),
            ("Reynolds number", f"{number(float(result.reynolds))} (Metzner-Reed)"),
            ("it changes at", _change(result, units)),
        ],
    )
    terminal.heading(out, "Result")
    drop = None
    if length is not None:
        value = text(result.pressure_gradient * length, "pressure", units)
        drop = f"{value} over {terminal.given(length, 'length', units)}"
    terminal.values(
        out,
        [
            ("pressure drop", None if drop is None else terminal.text(drop, "bold")),
            ("pressure gradient", text(result.pressure_gradient, "pressure_gradient", units)),
            ("wall shear stress", text(result.wall_stress, "stress", units)),
            ("wall shear rate", text(result.wall_rate, "rate", units)),
            ("8V/D", text(result.nominal_rate, "rate", units)),
            ("friction factor", f"{number(float(result.friction_factor))} (Fanning)"),
            ("local flow index n'", number(float(result.local_flow_index))),
            ("largest over mean velocity", number(float(result.velocity_ratio))),
            ("kinetic-energy factor α", number(float(result.kinetic_energy_factor))),
            (
                "plug radius over pipe radius",
                number(float(result.plug_fraction)) if result.plug_radius > 0 else None,
            ),
        ],
    )
    terminal.cautions(out, result.cautions, units)
    terminal.safety(out, (PRESSURE, GENERAL))


def _change(result: PipeFlow, units: str) -> str:
    from rheo.report.display import text
    from rheo.report.numbers import number

    speed = text(result.critical_velocity, "velocity", units)
    return f"{speed}, Reynolds number {number(float(result.critical_reynolds))}"
