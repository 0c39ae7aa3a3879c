"""Where a pump and a line meet: the operating point, or plainly none."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution
from rheo.hydraulics.roots import solve_rising
from rheo.line.parts import FloatArray, Line
from rheo.line.product import FlowCurveSource, Product, interval
from rheo.line.pumps import CentrifugalPump, DisplacementPump, Pump
from rheo.line.safety import PRESSURE
from rheo.line.solve import npsh_available, pump_flows, suction_total_pressure
from rheo.line.viscosity_correction import correct_for_viscosity
from rheo.line.walk import Walk, walk
from rheo.models import Model
from rheo.models.state_curve import ScaledCurve

_STEP = 0.05
_CLOSE = 1e-12


@dataclass(frozen=True, eq=False)
class OperatingPoint:
    """What a pump does on a line.

    Parameters
    ----------
    found : bool
        Whether the pump and the line agree on a flow that the pump may run at.
    flow, pressure : float or None
        [m3/s] and [Pa] where they meet; for a pump beyond its rating, where they would.
    flow_interval, pressure_interval : tuple of float or None
        Middle 95 % over the product's draws that have an operating point.
    share_found : float or None
        Share of the draws that have one [-].
    efficiency, shaft_power : float or None
        [-] and [W], where the pump's efficiency is known.
    npsh_required, npsh_available : float or None
        [m].
    pump : CentrifugalPump or DisplacementPump
        The pump as it was used, its curve corrected for viscosity where that was due.
    sentence : str
        The result in words, the reason when there is none.
    cautions : tuple of Caution
        What to know about it.
    safety : str
        The safety wording.
    """

    found: bool
    flow: float | None
    pressure: float | None
    flow_interval: tuple[float, float] | None
    pressure_interval: tuple[float, float] | None
    share_found: float | None
    efficiency: float | None
    shaft_power: float | None
    npsh_required: float | None
    npsh_available: float | None
    pump: Pump
    sentence: str
    cautions: tuple[Caution, ...]
    safety: str = PRESSURE


def operating_point(
    line: Line, product: Product, pump: Pump, method: str | None = None
) -> OperatingPoint:
    """Return the flow at which a pump gives the pressure that the line needs.

    Parameters
    ----------
    line : Line
        The line.
    product : Product
        Its draws give the intervals.
    pump : CentrifugalPump or DisplacementPump
        A water curve is corrected by ANSI/HI 9.6.7 for the apparent viscosity at the wall shear
        rate of the pipe after the pump, at the pump's best flow: the pump's own rates are higher,
        so that a shear-thinning product loses less than this says.
    method : str, optional
        Turbulent friction method.

    Returns
    -------
    OperatingPoint
        `found` is False, and `sentence` says why, where there is none.
    """
    used, cautions = _as_used(line, product, pump)
    flow = float(_solve(line, product, used, None, 1, method, None)[0])
    flow_interval = pressure_interval = share = None
    if product.draws:
        flows, pressures = _draws(line, product, used, method, flow)
        good = np.isfinite(pressures)
        share = float(np.mean(good))
        if np.any(good):
            flow_interval = _pair(interval(flows[good]))
            pressure_interval = _pair(interval(pressures[good]))
    spread = {
        "flow_interval": flow_interval,
        "pressure_interval": pressure_interval,
        "share_found": share,
    }
    if np.isfinite(flow) and flow > 0:
        point = _at(line, product, used, flow, spread, cautions, method)
    else:
        point = OperatingPoint(
            found=False,
            flow=None,
            pressure=None,
            flow_interval=flow_interval,
            pressure_interval=pressure_interval,
            share_found=share,
            efficiency=None,
            shaft_power=None,
            npsh_required=None,
            npsh_available=None,
            pump=used,
            sentence=_none(used, flow, product),
            cautions=tuple(cautions),
        )
    # Where no flow curve at all has one the sentence says it already.
    if share is None or share == 1.0 or (share == 0.0 and not point.found):
        return point
    doubt = Caution(
        "operating-point-in-doubt",
        f"Of the likely flow curves {100 * (1 - share):.0f} % have no operating point within the "
        "pump's curve and rating.",
        "Narrow the doubt in the product, or choose a pump with more in hand.",
        pump.name,
    )
    return replace(point, cautions=(*point.cautions, doubt))


def _pair(limits: tuple[FloatArray, FloatArray]) -> tuple[float, float]:
    return float(limits[0]), float(limits[1])


def _as_used(line: Line, product: Product, pump: Pump) -> tuple[Pump, list[Caution]]:
    """The pump with its curve corrected for viscosity where that is due."""
    cautions: list[Caution] = []
    if not isinstance(pump, CentrifugalPump):
        return pump, cautions
    if np.any(np.diff(pump.heads) > 0):
        cautions.append(
            Caution(
                "pump-curve-not-falling",
                "The pump's head does not fall throughout, so the line may meet it at two flows.",
                "The larger flow is shown, where the pump runs steadily; check its start.",
                pump.name,
            )
        )
    if not pump.for_water:
        return pump, cautions
    found = walk(line, product, pump.best_point[0])
    inlet, outlet = pump_flows(found)
    pipe = outlet or inlet
    if pipe is None:
        return pump, cautions
    rate = float(pipe.wall_rate)
    viscosity = float(pipe.wall_stress) / rate
    if pump.speed is None:
        cautions.append(
            Caution(
                "water-pump-curve",
                "The pump curve was taken with water and could not be corrected for viscosity, "
                "since the pump's speed is not given.",
                "Give the speed, or the supplier's curve for this product.",
                pump.name,
            )
        )
        return pump, cautions
    corrected = correct_for_viscosity(pump, viscosity, float(np.asarray(product.density)))
    if corrected.parameter <= 1.0:
        return pump, cautions
    cautions += corrected.cautions
    if pipe.model.key != "newtonian":
        cautions.append(
            Caution(
                "pump-correction-viscosity",
                f"The correction takes the apparent viscosity of {1e3 * viscosity:.3g} mPa.s at "
                f"{rate:.3g} 1/s, the wall shear rate beside the pump; the rates inside the pump "
                "are not known.",
                "Take the corrected curve as a careful guess.",
                pump.name,
            )
        )
    return corrected.pump, cautions


def _solve(
    line: Line,
    product: Product,
    pump: Pump,
    source: FlowCurveSource | None,
    size: int,
    method: str | None,
    near: float | None,
) -> FloatArray:
    """Flow of each draw [m3/s]: 0 where the pump is too weak, infinite where it is too strong.

    The search begins at the flow `near`, to 1e-12, or else at the largest, for the last digit.
    """
    density = np.asarray(product.density, dtype=float)
    flows = np.ones(size)

    def gap(log_flow: FloatArray, index: NDArray[np.intp]) -> FloatArray:
        flow = np.exp(log_flow)
        if source is None or isinstance(source, Model | ScaledCurve):
            some = None if source is None else source.map(lambda v: v[index] if v.ndim else v)
            need = walk(line, product, flow, source=some, method=method).differential_pressure
        else:
            # A flow curve by temperature cannot be cut to some of its draws beforehand.
            flows[index] = flow
            whole = walk(line, product, flows, source=source, method=method)
            need = np.broadcast_to(whole.differential_pressure, flows.shape)[index]
        if isinstance(pump, CentrifugalPump):
            found = need - pump.pressure(np.clip(flow, *pump.flow_range), density)
        else:
            found = flow - pump.flow(need)
        return np.array(np.broadcast_to(found, flow.shape))

    # A displacement pump without slip delivers all that it sweeps: the end must lie beyond that,
    # not at it, where the last digit would decide.
    most = pump.flow_range[1] if isinstance(pump, CentrifugalPump) else 1.001 * pump.swept_flow
    high = np.log(most)
    low = high + np.log(1e-4)
    if isinstance(pump, CentrifugalPump) and pump.flow_range[0] > 0:
        low = max(low, np.log(pump.flow_range[0]))
    begin, close = (high, None) if near is None else (np.log(near), _CLOSE)
    root = solve_rising(gap, np.full(size, begin), _STEP, float(low), float(high), close)
    return np.exp(root)


def _draws(
    line: Line, product: Product, pump: Pump, method: str | None, central: float
) -> tuple[FloatArray, FloatArray]:
    """Flow [m3/s] and pressure [Pa] of every draw; NaN where it has no operating point."""
    flows, pressures = [], []
    # A pump whose head rises somewhere may meet the line twice: the larger flow is wanted.
    falls = not isinstance(pump, CentrifugalPump) or bool(np.all(np.diff(pump.heads) <= 0))
    near = central if falls and np.isfinite(central) and central > 0 else None
    for source, size in zip(product.draws, product.draw_sizes, strict=True):
        flow = _solve(line, product, pump, source, size, method, near)
        good = np.isfinite(flow) & (flow > 0)
        if np.any(good):
            # The others are carried along at a flow that can be worked out, and then dropped.
            safe = np.where(good, flow, np.median(flow[good]))
            found = walk(line, product, safe, source=source, method=method)
            good &= _rated(found, pump) <= _rating(pump)
            pressure = np.broadcast_to(found.differential_pressure, flow.shape)
        else:
            pressure = np.full(flow.shape, np.nan)
        flows.append(np.where(good, flow, np.nan))
        pressures.append(np.where(good, pressure, np.nan))
    return np.concatenate(flows), np.concatenate(pressures)


def _rating(pump: Pump) -> float:
    return np.inf if pump.rated_pressure is None else pump.rated_pressure


def _rated(found: Walk, pump: Pump) -> FloatArray:
    """Pressure that counts against the rating [Pa].

    For a displacement pump its pressure rise; for a centrifugal pump the gauge pressure in its
    casing.
    """
    if isinstance(pump, DisplacementPump):
        return found.differential_pressure
    return suction_total_pressure(found) + found.differential_pressure


def _none(pump: Pump, flow: float, product: Product) -> str:
    if isinstance(pump, DisplacementPump):
        return (
            f"No operating point: slip takes all of the {3600 * pump.swept_flow:.3g} m3/h that "
            f"{pump.name} sweeps before {product.name} moves."
        )
    least, most = pump.flow_range
    if flow == 0:
        return (
            f"No operating point: at every flow of its curve {pump.name} gives less pressure than "
            f"the line needs with {product.name}."
        )
    return (
        f"No operating point between {3600 * least:.3g} and {3600 * most:.3g} m3/h: the line needs "
        f"less pressure than {pump.name} gives even at the end of its curve."
    )


def _at(
    line: Line,
    product: Product,
    pump: Pump,
    flow: float,
    spread: dict[str, Any],
    cautions: list[Caution],
    method: str | None,
) -> OperatingPoint:
    found = walk(line, product, flow, method=method)
    pressure = float(found.differential_pressure)
    if isinstance(pump, CentrifugalPump):
        curve, needed = pump.efficiency(flow), pump.required_npsh(flow)
        efficiency = None if curve is None else float(curve)
        required = None if needed is None else float(needed)
    else:
        efficiency, required = pump.overall_efficiency, pump.required_npsh_value
    available = npsh_available(found, product)
    at_hand = None if available is None else float(available)
    sentence = f"{pump.name} moves {3600 * flow:.3g} m3/h at {pressure / 1e5:.3g} bar."
    runs = bool(_rated(found, pump) <= _rating(pump))
    if not runs:
        sentence = (
            f"No operating point within the rating: {pump.name} would have to bear "
            f"{float(_rated(found, pump)) / 1e5:.3g} bar at {3600 * flow:.3g} m3/h, and it is "
            f"rated for {_rating(pump) / 1e5:.3g} bar."
        )
    if at_hand is not None and required is not None and at_hand < required:
        cautions.append(
            Caution(
                "npsh-too-low",
                f"NPSH available is {at_hand:.2f} m and {pump.name} needs {required:.2f} m.",
                "Shorten or widen the suction pipe, raise the vessel or its pressure, or run "
                "slower.",
                pump.name,
            )
        )
    return OperatingPoint(
        found=runs,
        flow=flow,
        pressure=pressure,
        **spread,
        efficiency=efficiency,
        shaft_power=None if not efficiency else max(pressure, 0.0) * flow / efficiency,
        npsh_required=required,
        npsh_available=at_hand,
        pump=pump,
        sentence=sentence,
        cautions=tuple(cautions),
    )
