"""Losses, heights and temperatures of every step, for one flow-curve source.

Flows, diameters, densities and parameter draws may be arrays: they broadcast, the draws along
the last axis. The only loop is over the parts of the line.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.hydraulics import PipeFlow, pipe_flow
from rheo.hydraulics.registry import turbulent_method
from rheo.line.checks import require_positive
from rheo.line.constants import GRAVITY
from rheo.line.kinetic_energy import kinetic_pressure
from rheo.line.minor_losses import minor_loss
from rheo.line.parts import Equipment, FloatArray, Line, Pipe
from rheo.line.product import FlowCurveSource, Product
from rheo.line.rounding import balance
from rheo.line.route import Step, ends_at_rest, route, starts_at_rest

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(8)
_NODES, _WEIGHTS = 0.5 * (1.0 + _NODES), 0.5 * _WEIGHTS


@dataclass(frozen=True, eq=False)
class StepResult:
    """What one part does to the stream.

    Parameters
    ----------
    step : Step
        The part where it stands.
    loss : array
        Total pressure lost to friction [Pa].
    rise, length, volume : array
        Height gained [m], length along the line [m], product held [m3].
    temperature, outlet_temperature : array
        Of the product as it enters and leaves [K].
    flow : PipeFlow or None
        Flow in the pipe that it belongs to, at the inlet temperature; None for equipment.
    """

    step: Step
    loss: FloatArray
    rise: FloatArray
    length: FloatArray
    volume: FloatArray
    temperature: FloatArray
    outlet_temperature: FloatArray
    flow: PipeFlow | None

    @property
    def name(self) -> str:
        """Name of the part."""
        return self.step.part.name

    @property
    def kind(self) -> str:
        """Kind of the part, such as ``pipe``."""
        return type(self.step.part).__name__.lower()

    @property
    def side(self) -> str:
        """``suction`` or ``discharge``."""
        return self.step.side


@dataclass(frozen=True, eq=False)
class Walk:
    """All steps of a line at one flow.

    Parameters
    ----------
    line : Line
        The line.
    flow : array
        [m3/s].
    density : array
        [kg/m3].
    steps : tuple of StepResult
        In order.
    """

    line: Line
    flow: FloatArray
    density: FloatArray
    steps: tuple[StepResult, ...]

    def side_loss(self, side: str) -> FloatArray:
        """Return the friction on a side [Pa]."""
        return total(step.loss for step in self.steps if step.side == side)

    def side_rise(self, side: str) -> FloatArray:
        """Return the height gained on a side [m], without the vessels' levels."""
        return total(step.rise for step in self.steps if step.side == side)

    @cached_property
    def friction_pressure(self) -> FloatArray:
        """All friction [Pa]."""
        return self.side_loss("suction") + self.side_loss("discharge")

    @cached_property
    def source_pressure(self) -> FloatArray:
        """Gauge pressure at the first nozzle with nothing moving [Pa]."""
        vessel = self.line.source_vessel
        return vessel.gauge_pressure + self.density * GRAVITY * np.asarray(vessel.level)

    @cached_property
    def end_pressure(self) -> FloatArray:
        """Gauge pressure at the last nozzle with nothing moving [Pa]."""
        vessel = self.line.end_vessel
        return vessel.gauge_pressure + self.density * GRAVITY * np.asarray(vessel.level)

    @cached_property
    def static_pressure(self) -> FloatArray:
        """What the pump must overcome with nothing moving: heights and vessels [Pa]."""
        weight = self.density * GRAVITY
        rise = self.side_rise("suction") + self.side_rise("discharge")
        climbed = total(abs(step.rise) for step in self.steps)
        return balance(
            self.end_pressure, -self.source_pressure, weight * rise, size=weight * climbed
        )

    @property
    def start_at_rest(self) -> bool:
        """Whether the line begins in a vessel."""
        return starts_at_rest(self.line)

    @cached_property
    def start_kinetic_pressure(self) -> FloatArray:
        """αρV²/2 of the stream as it enters the line [Pa]; 0 from a vessel."""
        return kinetic_pressure(None if self.start_at_rest else self.end_flows[0])

    @cached_property
    def kinetic_pressure(self) -> FloatArray:
        """Kinetic energy of the stream at the end less that at the beginning, αρV²/2 [Pa].

        Zero at a vessel; zero too where both ends are flanges with the same flow.
        """
        first, last = self.end_flows
        end = None if ends_at_rest(self.line) else last
        if (end is None and self.start_at_rest) or (end is first and not self.start_at_rest):
            return np.zeros(())
        return balance(kinetic_pressure(end), -self.start_kinetic_pressure)

    @property
    def end_flows(self) -> tuple[PipeFlow | None, PipeFlow | None]:
        """Flow in the first and in the last pipe."""
        flows = [step.flow for step in self.steps if isinstance(step.step.part, Pipe)]
        return (flows[0], flows[-1]) if flows else (None, None)

    @cached_property
    def differential_pressure(self) -> FloatArray:
        """Total pressure that the pump must add [Pa]; negative when the line runs by itself."""
        return balance(self.friction_pressure, self.static_pressure, self.kinetic_pressure)


def total(values: Iterable[ArrayLike]) -> FloatArray:
    """Return the sum of arrays that broadcast; 0 of none."""
    found: FloatArray = np.zeros(())
    for value in values:
        found = found + np.asarray(value, dtype=float)
    return found


def walk(
    line: Line,
    product: Product,
    flow: ArrayLike,
    source: FlowCurveSource | None = None,
    method: str | None = None,
) -> Walk:
    """Follow the product through the line.

    Parameters
    ----------
    line : Line
        Diameters, lengths and rises may be arrays.
    product : Product
        Its flow curve is used unless `source` is given.
    flow : array_like
        [m3/s], above 0.
    source : Model or callable, optional
        One of the product's draws.
    method : str, optional
        Of the turbulent friction factor; the default for the product's flow curve when absent. A
        draw of another model keeps it where it is made for that model, so that what parts the
        models is the flow curve and not the method.

    Returns
    -------
    Walk
        Its arrays have the shape to which flows, line and draws broadcast.

    Raises
    ------
    InputError
        If a flow is not above 0, or a line that cools has no heat capacity or flow curve by
        temperature.
    """
    require_positive(flow, "flow [m3/s]", line.name)
    rate = np.asarray(flow, dtype=float)
    density = np.asarray(product.density, dtype=float)
    if source is not None:
        method = _method_of_draws(product, source, method)
    walker = _Walker(product, rate, density, source, method)
    results = []
    temperature: FloatArray = np.asarray(product.temperature, dtype=float)
    for step in route(line):
        result = walker.take(step, temperature)
        temperature = result.outlet_temperature
        results.append(result)
    return Walk(line, rate, density, tuple(results))


def _method_of_draws(product: Product, source: FlowCurveSource, method: str | None) -> str | None:
    """Method of the product's own flow curve, where it is made for that of the draws too."""
    own = turbulent_method(method, product.model_at(product.temperature))
    return own.key if own.applies(product.model_at(product.temperature, source)) else None


class _Walker:
    """Carries what all steps share, and the pipe flows already found."""

    def __init__(
        self,
        product: Product,
        flow: FloatArray,
        density: FloatArray,
        source: FlowCurveSource | None,
        method: str | None,
    ) -> None:
        self.product = product
        self.flow = flow
        self.density = density
        self.source = source
        self.method = method
        self.known: list[tuple[Any, Any, Any, PipeFlow]] = []

    def pipe_flow(self, diameter: Any, roughness: Any, temperature: FloatArray) -> PipeFlow:
        """Flow in a pipe; found once for each diameter, roughness and temperature."""
        for size, height, warmth, found in self.known:
            if _same(size, diameter) and _same(height, roughness) and _same(warmth, temperature):
                return found
        area_velocity = 4.0 * self.flow / (np.pi * np.asarray(diameter, dtype=float) ** 2)
        found = pipe_flow(
            self.product.model_at(temperature, self.source),
            diameter=diameter,
            velocity=area_velocity,
            density=self.density,
            roughness=roughness,
            method=self.method,
        )
        self.known.append((diameter, roughness, temperature, found))
        return found

    def take(self, step: Step, arriving: FloatArray) -> StepResult:
        part = step.part
        if isinstance(part, Equipment):
            return self._equipment(step, part, arriving)
        if isinstance(part, Pipe):
            return self._pipe(step, part, arriving)
        zero = np.zeros(())
        pipe = step.pipe
        own = getattr(part, "diameter", None)
        size = pipe.diameter if own is None and pipe is not None else np.asarray(own, dtype=float)
        at = self.pipe_flow(size, 0.0 if pipe is None else pipe.roughness, arriving)
        loss = minor_loss(step, at, lambda other: self._beside(other, arriving))
        return StepResult(step, loss, zero, zero, zero, arriving, arriving, at)

    def _beside(self, pipe: Pipe, temperature: FloatArray) -> PipeFlow:
        return self.pipe_flow(pipe.diameter, pipe.roughness, temperature)

    def _equipment(self, step: Step, part: Equipment, arriving: FloatArray) -> StepResult:
        loss = np.asarray(part.loss) * (self.flow / part.at_flow) ** np.asarray(part.exponent)
        leaving = arriving
        if part.outlet_temperature is not None:
            leaving = np.asarray(part.outlet_temperature, dtype=float)
        zero = np.zeros(())
        volume, rise = np.asarray(part.volume, dtype=float), np.asarray(part.rise, dtype=float)
        return StepResult(step, loss, rise, zero, volume, arriving, leaving, None)

    def _pipe(self, step: Step, part: Pipe, arriving: FloatArray) -> StepResult:
        if part.temperature is not None:
            arriving = np.asarray(part.temperature, dtype=float)
        length, rise = np.asarray(part.length, dtype=float), np.asarray(part.rise, dtype=float)
        at = self.pipe_flow(part.diameter, part.roughness, arriving)
        gradient, leaving = at.pressure_gradient, arriving
        if part.heat_transfer_coefficient is not None:
            gradient, leaving = self._cooling(part, arriving, length)
        volume = 0.25 * np.pi * part.diameter**2 * length
        return StepResult(step, gradient * length, rise, length, volume, arriving, leaving, at)

    def _cooling(
        self, part: Pipe, arriving: FloatArray, length: FloatArray
    ) -> tuple[FloatArray, FloatArray]:
        """Mean pressure gradient and outlet temperature of a pipe that loses heat.

        T = T_a + (T_0 - T_a) exp(-UπDx/(ρQc)), by Gauss-Legendre points along the pipe.
        """
        if self.product.heat_capacity is None:
            raise InputError(
                "heat_capacity [J/(kg K)] is missing; a line that cools or warms needs it",
                self.product.name,
            )
        if not self.product.knows_temperature:
            raise InputError(
                "the flow curve is known at one temperature only; a line that cools or warms "
                "needs readings at two temperatures or more",
                self.product.name,
            )
        ambient = float(part.ambient_temperature or 0.0)
        units = (
            float(part.heat_transfer_coefficient or 0.0)
            * np.pi
            * part.diameter
            * length
            / (self.density * self.flow * self.product.heat_capacity)
        )
        # The nodes go along a new first axis, before all that the flow curve and the pipe have.
        shape = np.broadcast_shapes(
            arriving.shape,
            units.shape,
            np.shape(part.roughness),
            self.product.model_at(arriving, self.source).shape,
        )
        place = _NODES.reshape(-1, *(1,) * len(shape))
        along = ambient + (arriving - ambient) * np.exp(-place * units)
        leaving = ambient + (arriving - ambient) * np.exp(-units)
        gradient = self.pipe_flow(part.diameter, part.roughness, along).pressure_gradient
        gradient = np.broadcast_to(gradient, (_NODES.size, *np.shape(gradient)[1:]))
        return np.tensordot(_WEIGHTS, gradient, axes=(0, 0)), leaving


def _same(first: Any, second: Any) -> bool:
    return first is second or bool(
        np.shape(first) == np.shape(second) and np.array_equal(first, second)
    )
