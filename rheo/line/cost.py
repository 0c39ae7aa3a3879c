"""What a size costs a year: capital by size, energy by hours and price."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.line.catalogue import PipeSize
from rheo.line.checks import require_number, require_positive, require_share
from rheo.line.parts import FloatArray

JOULES_PER_KILOWATT_HOUR = 3.6e6
DEFAULT_CAPITAL = (
    "Capital by the stated default, 120 a metre installed at 50 mm and rising with the diameter to "
    "the power 1.5: an invented price with a textbook exponent; put your own quotations in its "
    "place."
)


@dataclass(frozen=True)
class CapitalLaw:
    """Installed price of a metre of pipe as a power of its inside diameter.

    Parameters
    ----------
    price : float
        Of one metre, fittings and installation included [currency/m].
    at_diameter : float
        Inside diameter to which that price belongs [m].
    exponent : float
        Of the diameter [-]; 1.5 for steel pipe of 1 in and more (M. S. Peters & K. D. Timmerhaus,
        Plant Design and Economics for Chemical Engineers; from memory).
    """

    price: float = 120.0
    at_diameter: float = 0.05
    exponent: float = 1.5

    def __post_init__(self) -> None:
        require_positive(self.price, "price [currency/m]", "capital")
        require_positive(self.at_diameter, "at_diameter [m]", "capital")
        require_positive(self.exponent, "exponent [-]", "capital")

    def per_metre(self, diameter: ArrayLike) -> FloatArray:
        """Return the price of a metre [currency/m] at inside diameters [m]."""
        return self.price * (np.asarray(diameter, dtype=float) / self.at_diameter) ** self.exponent


@dataclass(frozen=True)
class Costs:
    """How costs are counted.

    Parameters
    ----------
    hours : float
        Running hours a year [h].
    energy_price : float
        [currency/kWh].
    efficiency : float
        Hydraulic power over electrical power [-].
    annual_charge : float
        Share of the capital that is charged to a year: interest, depreciation, upkeep [1/a].
    capital_by_size : mapping of str to float
        Installed price of a metre by the name of the size [currency/m]; sizes that are not in it
        are priced by `law`.
    law : CapitalLaw
        The stated default.
    currency : str
        For display.
    """

    hours: float
    energy_price: float
    efficiency: float
    annual_charge: float = 0.2
    capital_by_size: Mapping[str, float] = field(default_factory=dict)
    law: CapitalLaw = CapitalLaw()
    currency: str = "currency units"

    def __post_init__(self) -> None:
        require_number(self.hours, "hours [h/a]", "costs", low=0.0)
        if self.hours > 8784:
            raise InputError(f"hours is {self.hours:g}; a year has at most 8784", "costs")
        require_number(self.energy_price, "energy_price [currency/kWh]", "costs", low=0.0)
        require_share(self.efficiency, "efficiency [-]", "costs")
        require_positive(self.annual_charge, "annual_charge [1/a]", "costs")
        for name, price in self.capital_by_size.items():
            require_positive(price, f"capital of size {name} [currency/m]", "costs")

    def capital_per_metre(self, sizes: tuple[PipeSize, ...]) -> FloatArray:
        """Return the installed price of a metre of each size [currency/m], shape ``(sizes,)``."""
        law = self.law.per_metre([size.inside_diameter for size in sizes])
        given = [self.capital_by_size.get(size.name, np.nan) for size in sizes]
        return np.where(np.isnan(given), law, given)

    def energy(self, pressure: ArrayLike, flow: ArrayLike) -> FloatArray:
        """Return the energy cost of a year [currency/a] at a pressure [Pa] and flow [m3/s]."""
        power = np.maximum(np.asarray(pressure, float), 0.0) * np.asarray(flow, float)
        joules = power / self.efficiency * self.hours * 3600.0
        return joules / JOULES_PER_KILOWATT_HOUR * self.energy_price

    def uses_default(self, sizes: tuple[PipeSize, ...]) -> bool:
        """Whether some size is priced by the stated default law."""
        missing = any(size.name not in self.capital_by_size for size in sizes)
        return missing and self.law == CapitalLaw()
