"""Figures of a solved line: from the results of `rheo.line` to pictures."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from rheo.geometry import tube_flow
from rheo.hydraulics import pipe_flow
from rheo.line import LineResult
from rheo.line.doubt import DoubtBudget
from rheo.line.operating import OperatingPoint
from rheo.line.product import FlowCurveSource, interval
from rheo.line.profile import Profile
from rheo.line.pumps import CentrifugalPump, Pump
from rheo.line.result import PartResult
from rheo.line.sizing import Sizing
from rheo.line.system import SystemCurve
from rheo.line.walk import walk
from rheo.report import display, figures
from rheo.report.figures import DrawnPart, PumpCurve
from rheo.report.picture import FloatArray, Picture

_POINTS = 161


def nodes_of_parts(line: LineResult) -> Iterator[tuple[PartResult, int, int]]:
    """Yield each part with the numbers of the profile's points where it begins and ends."""
    profile = _profile(line)
    node = 0
    pumped = False
    for part in line.parts:
        if part.side == "discharge" and not pumped:
            node += 1
            pumped = True
        yield part, node, node + 1
        node += 1
    assert node + (not pumped) == len(profile.name) - 1


def pump_node(line: LineResult) -> int:
    """Return the number of the profile's point at the pump's outlet."""
    return 1 + sum(part.side == "suction" for part in line.parts)


def _profile(line: LineResult) -> Profile:
    if line.profile is None:
        raise ValueError("the line was solved for several flows at once; figures need one")
    return line.profile


def pressure_picture(
    line: LineResult, rating: float | None = None, system: str = "metric"
) -> Picture:
    """Draw the pressure along a line, with the interval of the pressure that the pump gives.

    Parameters
    ----------
    line : LineResult
        At one flow.
    rating : float, optional
        Rated pressure [Pa].
    system : str
        Unit system.

    Returns
    -------
    Picture
        Pressure above elevation.
    """
    profile = _profile(line)
    steps = [
        (part.name, float(profile.distance[end]), float(part.pressure_loss))
        for part, _, end in nodes_of_parts(line)
        if part.kind != "pipe" and float(part.pressure_loss) > 0
    ]
    product = line.product
    vapour = product.vapour_pressure
    limits = [
        (
            "vapour pressure" if vapour is not None else "full vacuum",
            (vapour or 0.0) - line.line.atmospheric_pressure,
        )
    ]
    if rating is not None:
        limits.append(("rated pressure", rating))
    low, high = pressure_band(line) or (None, None)
    return figures.pressure_line(
        profile.distance,
        profile.pressure,
        profile.elevation,
        low=low,
        high=high,
        limits=limits,
        steps=steps,
        system=system,
    )


def pressure_band(line: LineResult) -> tuple[FloatArray, FloatArray] | None:
    """Return the middle 95 % of the gauge pressures of the profile [Pa]; None without draws.

    The ends of the line are held by its vessels, so the doubt gathers at the pump.
    """
    if not line.product.draws:
        return None
    profile = _profile(line)
    pump = pump_node(line)

    def at_nodes(source: FlowCurveSource | None, spread: bool) -> FloatArray:
        flow = line.flow[np.newaxis] if spread else line.flow
        found = walk(line.line, line.product, flow, source=source)
        level = np.zeros(np.shape(found.differential_pressure))
        nodes = [level]
        for step in found.steps:
            if len(nodes) == pump:
                nodes.append(nodes[-1] + found.differential_pressure)
            nodes.append(nodes[-1] - step.loss)
        if len(nodes) == pump:
            nodes.append(nodes[-1] + found.differential_pressure)
        return np.stack(np.broadcast_arrays(*nodes))

    draws = line.product.over_draws(lambda source: at_nodes(source, True))
    low, high = interval(draws - at_nodes(None, False)[:, np.newaxis])
    return profile.pressure + low, profile.pressure + high


def drawing_picture(line: LineResult, system: str = "metric") -> Picture:
    """Draw the route with its parts, and the pressures at its ends and beside the pump."""
    profile = _profile(line)

    def at(node: int) -> tuple[float, float]:
        return float(profile.distance[node]), float(profile.elevation[node])

    pump = pump_node(line)
    last = len(profile.name) - 1
    drawn = [
        DrawnPart("vessel", line.line.source_vessel.name, at(0), at(0)),
        DrawnPart("pump", "pump", at(pump), at(pump)),
        DrawnPart("vessel", line.line.end_vessel.name, at(last), at(last)),
    ]
    for part, start, end in nodes_of_parts(line):
        kind = part.kind if part.kind in ("pipe", *figures.SYMBOLS) else "fitting"
        loses = f"loses {display.text(float(part.pressure_loss), 'pressure', system)}"
        width = float(part.diameter) if kind == "pipe" else 0.0
        if kind == "pipe":
            loses = f"{display.text(width, 'diameter', system)} inside, {loses}"
        if part.kind not in ("entrance", "exit"):
            drawn.append(DrawnPart(kind, part.name, at(start), at(end), loses, width))
    # The label before the pump stands below the line, so that it stays clear of the one after it.
    named = {pump - 1: False, pump: True, last: True}
    # What is left of the pressures in an open end is rounding.
    nothing = 1e-9 * float(np.max(np.abs(profile.pressure)))
    level = np.where(np.abs(profile.pressure) > nothing, profile.pressure, 0.0)
    pressures = [(*at(node), float(level[node]), up) for node, up in named.items()]
    return figures.line_drawing(drawn, pressures, system=system)


def rates_picture(
    line: LineResult, instrument: np.ndarray | None = None, system: str = "metric"
) -> Picture:
    """Draw the wall shear rates of the pipes beside the measured range."""
    rates = [
        (part.name, float(part.wall_rate))
        for part in line.parts
        if part.kind == "pipe" and np.isfinite(part.wall_rate)
    ]
    seen = np.array([]) if instrument is None else instrument
    return figures.shear_rates(line.product.measured_rates, rates, seen, system=system)


def system_picture(
    curve: SystemCurve,
    line: LineResult,
    operating: OperatingPoint | None = None,
    rating: float | None = None,
    system: str = "metric",
) -> Picture:
    """Draw the system curve with the duty asked for, and the pump where its curve is known."""
    duty = (float(line.flow), float(line.differential_pressure))
    point = pump = None
    if operating is not None:
        pump = pump_curve(operating.pump, line, curve)
        if operating.found and operating.flow is not None and operating.pressure is not None:
            point = (operating.flow, operating.pressure)
    return figures.system_curve(
        curve.flow,
        curve.pressure,
        low=curve.low,
        high=curve.high,
        regime=np.array(curve.regime),
        pump=pump,
        operating=point,
        duty=duty,
        rating=rating,
        system=system,
    )


def pump_curve(pump: Pump, line: LineResult, curve: SystemCurve) -> PumpCurve:
    """Return what a pump can do: its own curve, or the flow that is left against a pressure."""
    if isinstance(pump, CentrifugalPump):
        flow = np.linspace(min(pump.flows), max(pump.flows), _POINTS)
        density = float(np.asarray(line.product.density))
        return PumpCurve(pump.name, flow, pump.pressure(flow, density))
    # Nearly upright: it is drawn somewhat beyond the system curve, not up to a far rating.
    pressure = np.linspace(0.0, 1.2 * float(np.max(curve.pressure)), _POINTS)
    return PumpCurve(pump.name, pump.flow(pressure), pressure)


def sizes_picture(
    sizing: Sizing,
    pressure_limit: float | None = None,
    currency: str = "",
    system: str = "metric",
) -> Picture:
    """Draw the candidate sizes."""
    every = sizing.candidates
    costs = [one.annual_cost for one in every]
    priced = all(cost is not None for cost in costs)
    best = sizing.recommended
    return figures.sizes(
        [one.size.name for one in every],
        [one.pressure for one in every],
        [one.velocity for one in every],
        np.array(costs, dtype=float) if priced else None,
        reasons=["; ".join(one.reasons) for one in every],
        recommended=None if best is None else every.index(best),
        pressure_limit=pressure_limit,
        currency=currency,
        system=system,
    )


def doubt_picture(budget: DoubtBudget) -> Picture:
    """Draw what the uncertainty of the pressure drop is made of."""
    return figures.doubt_budget(*budget.chart)


def widest_sheared(line: LineResult) -> PartResult | None:
    """Return the pipe whose loss is the largest, the one worth looking into."""
    pipes = [part for part in line.parts if part.kind == "pipe"]
    return max(pipes, key=lambda part: float(part.pressure_loss), default=None)


def velocity_picture(
    line: LineResult, part: PartResult | None = None, system: str = "metric"
) -> Picture | None:
    """Draw the velocity across a pipe in laminar flow; None where the flow is not laminar.

    Parameters
    ----------
    line : LineResult
        At one flow.
    part : PartResult, optional
        Which pipe; the one with the largest loss when absent.
    system : str
        Unit system.

    Returns
    -------
    Picture or None
        By the flow curve at the pipe's temperature.
    """
    chosen = part or widest_sheared(line)
    if chosen is None or chosen.regime != "laminar":
        return None
    model = line.product.model_at(chosen.temperature)
    speed, width = float(chosen.velocity), float(chosen.diameter)
    at = pipe_flow(model, width, speed, line.product.density, regime="laminar")
    ratio = np.linspace(0.0, 1.0, _POINTS)
    profile = speed * tube_flow.velocity(model, np.asarray(at.wall_rate), ratio)
    return figures.velocity_profile(
        ratio, profile, width, speed, float(at.plug_fraction), system=system
    )
