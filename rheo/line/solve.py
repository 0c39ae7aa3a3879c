"""The duty of a line at a flow: `solve_line`."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import merge_cautions
from rheo.hydraulics import PipeFlow
from rheo.line.checks import require_optional, require_share
from rheo.line.constants import GRAVITY
from rheo.line.duty_cautions import duty_cautions, inside_measured_range
from rheo.line.kinetic_energy import kinetic_pressure
from rheo.line.parts import FloatArray, Line, Pipe
from rheo.line.product import FlowCurveSource, Product, interval
from rheo.line.profile import Profile, pressure_profile
from rheo.line.result import LineResult, PartResult
from rheo.line.rounding import balance
from rheo.line.start_up import start_up
from rheo.line.walk import StepResult, Walk, total, walk


def solve_line(
    line: Line,
    product: Product,
    flow: ArrayLike,
    *,
    efficiency: float | None = None,
    rating: float | None = None,
    method: str | None = None,
) -> LineResult:
    """Return the duty of a line: pressures, powers, NPSH, heating, times, start-up, Cautions.

    The mechanical energy balance with kinetic-energy factors α between the first vessel (or
    flange) and the last.

    Parameters
    ----------
    line : Line
        Suction and discharge side.
    product : Product
        With draws, the pressures carry their 95 % interval.
    flow : array_like
        [m3/s], above 0; for an array every result has its shape.
    efficiency : float, optional
        Hydraulic over shaft power [-], for the shaft power.
    rating : float, optional
        Pressure that the pump may give [Pa], for the start-up check.
    method : str, optional
        Turbulent friction method; the default for the model when absent.

    Returns
    -------
    LineResult
        Frozen, with everything in SI.

    Raises
    ------
    InputError
        If a flow, the efficiency or a part cannot be used; the sentence names it.
    """
    if efficiency is not None:
        require_share(efficiency, "efficiency [-]", line.name)
    require_optional(rating, "rating [Pa]", line.name)
    found = walk(line, product, flow, method=method)
    differential = found.differential_pressure
    inlet, outlet = pump_flows(found)
    before_pump = suction_total_pressure(found)
    suction = balance(before_pump, -kinetic_pressure(inlet))
    discharge = balance(before_pump, differential, -kinetic_pressure(outlet))
    power = differential * found.flow
    volume = total(step.volume for step in found.steps)
    heat = product.heat_capacity
    profile = pressure_profile(found, before_pump) if np.ndim(differential) == 0 else None
    npsh = npsh_available(found, product)
    parts = tuple(_row(step, found, product) for step in found.steps)
    starting = start_up(line, product, rating)
    draws, friction_draws = _over_draws(line, product, found.flow, method)
    return LineResult(
        line=line,
        product=product,
        flow=found.flow,
        parts=parts,
        differential_pressure=differential,
        friction_pressure=found.friction_pressure,
        static_pressure=found.static_pressure,
        kinetic_pressure=found.kinetic_pressure,
        differential_pressure_interval=None if draws is None else interval(draws),
        friction_pressure_interval=None if friction_draws is None else interval(friction_draws),
        suction_pressure=suction,
        discharge_pressure=discharge,
        npsh_available=npsh,
        hydraulic_power=power,
        shaft_power=None if efficiency is None else np.maximum(power, 0.0) / efficiency,
        temperature_rise=None if heat is None else found.friction_pressure / (found.density * heat),
        residence_time=volume / found.flow,
        volume=volume,
        profile=profile,
        start_up=starting,
        cautions=merge_cautions(
            duty_cautions(found, product, parts, npsh, profile), starting.cautions
        ),
        draws=draws,
    )


def pump_flows(found: Walk) -> tuple[PipeFlow | None, PipeFlow | None]:
    """Return the flow in the pipes on both sides of the pump; None where there is no pipe.

    Where the line begins at a flange and has no suction pipe, the product comes as fast as it
    goes on in the first pipe.
    """
    pipes = [step for step in found.steps if isinstance(step.step.part, Pipe)]
    inlet = [step.flow for step in pipes if step.side == "suction"]
    outlet = [step.flow for step in pipes if step.side == "discharge"]
    first = outlet[0] if outlet else None
    arriving = None if found.start_at_rest else first
    return (inlet[-1] if inlet else arriving), first


def suction_total_pressure(found: Walk) -> FloatArray:
    """Return the total gauge pressure at the pump's inlet [Pa], with αρV²/2."""
    return balance(
        found.source_pressure,
        found.start_kinetic_pressure,
        -found.side_loss("suction"),
        -found.density * GRAVITY * found.side_rise("suction"),
    )


def npsh_available(found: Walk, product: Product) -> FloatArray | None:
    """Return the NPSH available [m]; None without a vapour pressure.

    Static absolute pressure at the pump's inlet less the vapour pressure, over ρg, and V²/2g.
    """
    if product.vapour_pressure is None:
        return None
    inlet, _ = pump_flows(found)
    static = suction_total_pressure(found) - kinetic_pressure(inlet)
    head = 0.5 * found.density * np.asarray(inlet.velocity) ** 2 if inlet is not None else 0.0
    absolute = static + found.line.atmospheric_pressure - product.vapour_pressure
    return (absolute + head) / (found.density * GRAVITY)


def _over_draws(
    line: Line, product: Product, flow: FloatArray, method: str | None
) -> tuple[FloatArray | None, FloatArray | None]:
    """Differential and friction pressure of every draw, along a new last axis."""
    if not product.draws:
        return None, None
    spread = flow[..., np.newaxis]

    def both(source: FlowCurveSource) -> FloatArray:
        found = walk(line, product, spread, source=source, method=method)
        pair = np.broadcast_arrays(found.differential_pressure, found.friction_pressure)
        return np.stack(pair)

    differential, friction = product.over_draws(both)
    return differential, friction


def _row(step: StepResult, found: Walk, product: Product) -> PartResult:
    nothing = np.full((), np.nan)
    at = step.flow
    heat = product.heat_capacity
    warming = nothing if heat is None else step.loss / (found.density * heat)
    return PartResult(
        name=step.name,
        kind=step.kind,
        side=step.side,
        pressure_loss=step.loss,
        elevation_pressure=found.density * GRAVITY * step.rise,
        length=step.length,
        volume=step.volume,
        residence_time=step.volume / found.flow,
        temperature=step.temperature,
        outlet_temperature=step.outlet_temperature,
        temperature_rise=warming,
        diameter=nothing if at is None else np.asarray(at.diameter),
        velocity=nothing if at is None else np.asarray(at.velocity),
        wall_rate=nothing if at is None else at.wall_rate,
        wall_stress=nothing if at is None else at.wall_stress,
        reynolds=nothing if at is None else at.reynolds,
        friction_factor=nothing if at is None else at.friction_factor,
        regime=_one_regime(at),
        inside_measured_range=inside_measured_range(step, product),
    )


def _one_regime(at: PipeFlow | None) -> str:
    if at is None:
        return ""
    found = np.unique(np.asarray(at.regime))
    return str(found[0]) if found.size == 1 else "mixed"


__all__ = ["Profile", "npsh_available", "pump_flows", "solve_line", "suction_total_pressure"]
