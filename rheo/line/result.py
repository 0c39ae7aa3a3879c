"""What `solve_line` returns: everything that a table, a note or a page shows of a line."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from rheo.errors import Caution, without_exponents
from rheo.line.parts import FloatArray, Line
from rheo.line.product import Product
from rheo.line.profile import Profile
from rheo.line.safety import GENERAL, PRESSURE
from rheo.line.start_up import StartUp


@dataclass(frozen=True, eq=False)
class PartResult:
    """One row of the breakdown.

    Parameters
    ----------
    name, kind, side : str
        Of the part: its name, ``pipe`` and so on, ``suction`` or ``discharge``.
    pressure_loss : array
        Friction [Pa].
    elevation_pressure : array
        ρ g times the height gained [Pa].
    length, volume, residence_time : array
        [m], [m3], [s].
    temperature, outlet_temperature, temperature_rise : array
        Arriving and leaving [K]; rise by its own friction [K], NaN without a heat capacity.
    diameter, velocity, wall_rate, wall_stress, reynolds, friction_factor : array
        In the pipe that it belongs to [m], [m/s], [1/s], [Pa], [-], [-] (Fanning); NaN for
        equipment.
    regime : str
        ``laminar``, ``transition`` or ``turbulent``; ``mixed`` for arrays that differ; empty for
        equipment.
    inside_measured_range : bool or None
        Whether its wall shear rates lie in the measured range; None where that is not known.
    """

    name: str
    kind: str
    side: str
    pressure_loss: FloatArray
    elevation_pressure: FloatArray
    length: FloatArray
    volume: FloatArray
    residence_time: FloatArray
    temperature: FloatArray
    outlet_temperature: FloatArray
    temperature_rise: FloatArray
    diameter: FloatArray
    velocity: FloatArray
    wall_rate: FloatArray
    wall_stress: FloatArray
    reynolds: FloatArray
    friction_factor: FloatArray
    regime: str
    inside_measured_range: bool | None


@dataclass(frozen=True, eq=False)
class LineResult:
    """Duty of a line at one flow.

    Parameters
    ----------
    line, product : Line, Product
        As given.
    flow : array
        [m3/s].
    parts : tuple of PartResult
        The breakdown, in order.
    differential_pressure : array
        Total pressure that the pump must add [Pa]: friction, heights, vessels, kinetic energy.
    friction_pressure, static_pressure, kinetic_pressure : array
        Its three terms [Pa].
    differential_pressure_interval, friction_pressure_interval : tuple of array or None
        Middle 95 % over the product's draws [Pa]; None without draws.
    suction_pressure, discharge_pressure : array
        Gauge static pressure at the pump's nozzles [Pa].
    npsh_available : array or None
        [m]; None without a vapour pressure.
    hydraulic_power, shaft_power : array
        [W]; `shaft_power` is None without an efficiency.
    temperature_rise : array or None
        By all friction [K]; None without a heat capacity.
    residence_time, volume : array
        Mean time in the line [s], product held [m3].
    profile : Profile or None
        Pressure along the line; None for arrays of flows.
    start_up : StartUp
        Restart of the full line.
    cautions : tuple of Caution
        All of them.
    draws : array or None
        Differential pressure of every draw [Pa], draws along the last axis.
    safety : tuple of str
        Sentences to show with the pressures.
    """

    line: Line
    product: Product
    flow: FloatArray
    parts: tuple[PartResult, ...]
    differential_pressure: FloatArray
    friction_pressure: FloatArray
    static_pressure: FloatArray
    kinetic_pressure: FloatArray
    differential_pressure_interval: tuple[FloatArray, FloatArray] | None
    friction_pressure_interval: tuple[FloatArray, FloatArray] | None
    suction_pressure: FloatArray
    discharge_pressure: FloatArray
    npsh_available: FloatArray | None
    hydraulic_power: FloatArray
    shaft_power: FloatArray | None
    temperature_rise: FloatArray | None
    residence_time: FloatArray
    volume: FloatArray
    profile: Profile | None
    start_up: StartUp
    cautions: tuple[Caution, ...]
    draws: FloatArray | None
    safety: tuple[str, ...] = (PRESSURE, GENERAL)

    def as_dict(self) -> dict[str, Any]:
        """Return SI values under these names, as plain data for JSON."""
        names = (
            "flow",
            "differential_pressure",
            "friction_pressure",
            "static_pressure",
            "kinetic_pressure",
            "differential_pressure_interval",
            "friction_pressure_interval",
            "suction_pressure",
            "discharge_pressure",
            "npsh_available",
            "hydraulic_power",
            "shaft_power",
            "temperature_rise",
            "residence_time",
            "volume",
        )
        return {
            **{name: plain(getattr(self, name)) for name in names},
            "parts": [
                {key: plain(value) for key, value in vars(part).items()} for part in self.parts
            ],
            "start_up": {
                "pressure": plain(self.start_up.pressure),
                "yield_pressure": plain(self.start_up.yield_pressure),
                "rating": plain(self.start_up.rating),
                "restarts": plain(self.start_up.restarts),
                "flush_length": plain(self.start_up.flush_length),
                "heat_to": plain(self.start_up.heat_to),
                "sentence": without_exponents(self.start_up.sentence),
            },
            "cautions": [caution.as_dict() for caution in self.cautions],
            "safety": [*self.safety, self.start_up.safety],
        }


def plain(value: Any) -> Any:
    """Return numbers, arrays and tuples of them as data that JSON can hold; NaN becomes None."""
    if value is None or isinstance(value, str | bool | int):
        return value
    if isinstance(value, tuple | list):
        return [plain(item) for item in value]
    array = np.asarray(value)
    if array.dtype == bool:
        return array.tolist()
    if array.ndim == 0:
        number = float(array)
        return number if np.isfinite(number) else None
    return [plain(item) for item in array]
