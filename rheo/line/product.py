"""The product in the line: its flow curve, its doubt, and the properties that the line needs."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.line.checks import require_number, require_optional, require_positive
from rheo.line.parts import FloatArray, Number
from rheo.models import Model

ModelAt = Callable[[ArrayLike], Model]
FlowCurveSource = Model | ModelAt


@dataclass(frozen=True, eq=False)
class Product:
    """What is pumped.

    Parameters
    ----------
    model : Model or callable
        The flow curve; or a function of temperature [K] (scalar or array, which must broadcast
        against its own parameters) that returns it.
    density : float or array
        [kg/m3].
    temperature : float
        At the head of the line [K].
    heat_capacity : float, optional
        [J/(kg K)]; needed for viscous heating and for a line that cools.
    vapour_pressure : float, optional
        Absolute [Pa], at the temperature of the suction side; needed for NPSH.
    static_yield_stress : float, optional
        Yield stress after rest [Pa], for start-up; the flow curve's own when absent.
    measured_rates : tuple of float, optional
        Smallest and largest shear rate [1/s] that the viscometer saw.
    temperature_range : tuple of float, optional
        Temperatures [K] between which the flow curve was measured.
    solids_fraction : float, optional
        Solids that it holds, by volume or by mass [-], at which the flow curve was taken.
    draws : tuple of Model or callable
        Equally likely flow curves: models whose parameters are 1-D arrays, one draw an entry;
        their number together is the number of draws.
    name : str
        For display.
    """

    model: FlowCurveSource
    density: Number
    temperature: float = 293.15
    heat_capacity: float | None = None
    vapour_pressure: float | None = None
    static_yield_stress: Number | None = None
    measured_rates: tuple[float, float] | None = None
    temperature_range: tuple[float, float] | None = None
    solids_fraction: float | None = None
    draws: tuple[FlowCurveSource, ...] = ()
    name: str = "product"

    def __post_init__(self) -> None:
        require_positive(self.density, "density [kg/m3]", self.name)
        require_positive(self.temperature, "temperature [K]", self.name)
        require_optional(self.heat_capacity, "heat_capacity [J/(kg K)]", self.name)
        if self.vapour_pressure is not None:
            require_number(self.vapour_pressure, "vapour_pressure [Pa]", self.name, low=0.0)
        if self.static_yield_stress is not None:
            require_number(self.static_yield_stress, "static_yield_stress [Pa]", self.name, low=0.0)
        for what, limits in (
            ("measured_rates [1/s]", self.measured_rates),
            ("temperature_range [K]", self.temperature_range),
        ):
            if limits is not None and not 0 < limits[0] <= limits[1] < np.inf:
                raise InputError(
                    f"{what} is {limits[0]:g} to {limits[1]:g}; both must be above 0 and rising",
                    self.name,
                )
        object.__setattr__(self, "draws", tuple(self.draws))

    @property
    def knows_temperature(self) -> bool:
        """Whether the flow curve is known as a function of temperature."""
        return not isinstance(self.model, Model)

    def model_at(self, temperature: ArrayLike, source: FlowCurveSource | None = None) -> Model:
        """Return the flow curve at a temperature [K], of the draws in `source` when given."""
        chosen = self.model if source is None else source
        return chosen if isinstance(chosen, Model) else chosen(np.asarray(temperature, dtype=float))

    @property
    def draw_count(self) -> int:
        """Number of draws; 0 when there are none."""
        return sum(self.draw_sizes)

    @property
    def draw_sizes(self) -> tuple[int, ...]:
        """Number of draws in each entry of `draws`."""
        return tuple(
            int(np.prod(self.model_at(self.temperature, source).shape)) for source in self.draws
        )

    def over_draws(self, calculate: Callable[[FlowCurveSource], ArrayLike]) -> FloatArray:
        """Return a result for every draw, along the last axis.

        Parameters
        ----------
        calculate : callable
            From a flow curve whose parameters have shape ``(count,)`` to a result whose shape
            ends with ``count`` (or with 1, or is scalar, where it does not depend on it).

        Returns
        -------
        array
            Shape ``(..., draw_count)``.
        """
        if not self.draws:
            raise InputError("the product has no draws; give draws of its flow curve", self.name)
        blocks = []
        for source, size in zip(self.draws, self.draw_sizes, strict=True):
            block = np.asarray(calculate(source), dtype=float)
            block = block[np.newaxis] if block.ndim == 0 else block
            blocks.append(np.broadcast_to(block, (*block.shape[:-1], size)))
        lead = np.broadcast_shapes(*(block.shape[:-1] for block in blocks))
        return np.concatenate(
            [np.broadcast_to(block, (*lead, block.shape[-1])) for block in blocks], axis=-1
        )


def interval(draws: FloatArray, level: float = 0.95) -> tuple[FloatArray, FloatArray]:
    """Return the middle `level` share of draws along the last axis: (low, high)."""
    tail = 50.0 * (1.0 - level)
    low, high = np.percentile(draws, [tail, 100.0 - tail], axis=-1)
    return low, high


def water(temperature: float = 293.15, name: str = "water") -> Product:
    """Return water at a temperature [K] between 273 and 373 K, for cleaning and for pump curves.

    Notes
    -----
    From memory, common practice: viscosity 2.414e-5 · 10^(247.8/(T - 140)) Pa.s (within 2.5 %),
    density after Kell's short form (within 0.05 %), vapour pressure after Buck (1981, within
    0.1 %).
    """
    from rheo.models import model

    if not 273.0 <= temperature <= 373.2:
        raise InputError(
            f"water temperature is {temperature:g} K; it must lie between 273 and 373 K"
        )
    celsius = temperature - 273.15
    density = 1000.0 * (
        1.0 - (celsius + 288.9414) * (celsius - 3.9863) ** 2 / (508929.2 * (celsius + 68.12963))
    )
    vapour = 611.21 * np.exp((18.678 - celsius / 234.5) * celsius / (257.14 + celsius))
    return Product(
        model=model("newtonian", viscosity=2.414e-5 * 10.0 ** (247.8 / (temperature - 140.0))),
        density=density,
        temperature=temperature,
        heat_capacity=4186.0,
        vapour_pressure=float(vapour),
        name=name,
    )
