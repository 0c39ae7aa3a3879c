"""The units in which results are shown: one small table that page, note and figures share.

Nothing stored changes with the choice; SI floats come in and text or display numbers go out.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError
from rheo.report import numbers
from rheo.units import from_si, to_si

SYSTEMS = {
    "si": "SI (kPa, L/s)",
    "metric": "Metric (bar, m³/h)",
    "us": "US (psi, gpm)",
}


@dataclass(frozen=True)
class Quantity:
    """How one kind of quantity is shown.

    Parameters
    ----------
    key : str
        Name used by callers.
    unit : str
        SI unit of the values that come in.
    si, metric, us : str
        Unit in which each system shows it, as ``rheo.units`` reads it.
    """

    key: str
    unit: str
    si: str
    metric: str
    us: str


_ROWS = (
    Quantity("stress", "Pa", "Pa", "Pa", "Pa"),
    Quantity("rate", "1/s", "1/s", "1/s", "1/s"),
    Quantity("viscosity", "Pa.s", "Pa·s", "Pa·s", "cP"),
    Quantity("pressure", "Pa", "kPa", "bar", "psi"),
    Quantity("pressure_gradient", "Pa/m", "kPa/m", "bar/m", "psi/ft"),
    Quantity("flow", "m^3/s", "L/s", "m³/h", "gpm"),
    Quantity("velocity", "m/s", "m/s", "m/s", "ft/s"),
    Quantity("length", "m", "m", "m", "ft"),
    Quantity("diameter", "m", "mm", "mm", "in"),
    Quantity("roughness", "m", "µm", "µm", "µm"),
    Quantity("density", "kg/m^3", "kg/m³", "kg/m³", "lb/ft³"),
    Quantity("temperature", "K", "°C", "°C", "°F"),
    Quantity("temperature_rise", "K", "K", "K", "delta_degF"),
    Quantity("power", "W", "kW", "kW", "hp"),
    Quantity("time", "s", "s", "s", "s"),
    Quantity("duration", "s", "min", "min", "min"),
    Quantity("volume", "m^3", "L", "L", "gallon"),
    Quantity("torque", "N*m", "mN·m", "mN·m", "mN·m"),
    Quantity("angular_speed", "rad/s", "rpm", "rpm", "rpm"),
    Quantity("energy", "J", "kWh", "kWh", "kWh"),
)
QUANTITIES = {row.key: row for row in _ROWS}
_SHOWN_AS = {"delta_degF": "°F", "gallon": "US gal"}


def _unit(quantity: str, system: str) -> tuple[str, str]:
    """Return the SI unit and the unit shown."""
    if system not in SYSTEMS:
        raise InputError(f"unknown unit system '{system}'; there are {', '.join(SYSTEMS)}")
    if quantity not in QUANTITIES:
        raise InputError(f"unknown quantity '{quantity}'; there are {', '.join(QUANTITIES)}")
    row = QUANTITIES[quantity]
    return row.unit, getattr(row, system)


def unit_label(quantity: str, system: str = "metric") -> str:
    """Return the unit in which a system shows a quantity, such as ``m³/h``."""
    shown = _unit(quantity, system)[1]
    return _SHOWN_AS.get(shown, shown)


def shown(values: ArrayLike, quantity: str, system: str = "metric") -> NDArray[np.float64]:
    """Convert SI values to the unit in which they are shown.

    Parameters
    ----------
    values : array_like
        SI numbers, any shape.
    quantity, system : str
        Keys of `QUANTITIES` and `SYSTEMS`.

    Returns
    -------
    array
        The same shape.
    """
    unit, wanted = _unit(quantity, system)
    return from_si(values, unit, wanted) if unit != wanted else np.asarray(values, dtype=float)


def stored(values: ArrayLike, quantity: str, system: str = "metric") -> NDArray[np.float64]:
    """Convert values entered in the shown unit back to SI; the inverse of `shown`."""
    unit, wanted = _unit(quantity, system)
    return to_si(values, wanted, unit)


def text(
    value: Any,
    quantity: str,
    system: str = "metric",
    low: float | None = None,
    high: float | None = None,
    digits: int = 3,
) -> str:
    """Write an SI value in the shown unit, with its interval when there is one.

    Parameters
    ----------
    value : float or None
        SI value; None is written as ``not known``.
    quantity, system : str
        Keys of `QUANTITIES` and `SYSTEMS`.
    low, high : float, optional
        Ends of the interval, SI.
    digits : int
        Significant digits when there is no interval.

    Returns
    -------
    str
        Such as ``0.41 ± 0.05 bar``.
    """
    if value is None or not math.isfinite(float(value)):
        return numbers.NOT_KNOWN
    label = unit_label(quantity, system)
    if low is None or high is None:
        return f"{numbers.number(float(shown(value, quantity, system)), digits)} {label}"
    middle, lower, upper = shown([float(value), low, high], quantity, system).tolist()
    return numbers.with_interval(middle, lower, upper, label)
