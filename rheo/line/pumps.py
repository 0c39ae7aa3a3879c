"""Pumps: what pressure they give at a flow."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.line.checks import require_number, require_optional, require_positive, require_share
from rheo.line.constants import GRAVITY
from rheo.line.parts import FloatArray


@dataclass(frozen=True)
class CentrifugalPump:
    """A centrifugal pump by the points of its curve.

    Parameters
    ----------
    flows : tuple of float
        [m3/s], rising, at least two.
    heads : tuple of float
        [m] at these flows.
    efficiencies : tuple of float, optional
        [-] at these flows.
    npsh_required : tuple of float, optional
        [m] at these flows.
    for_water : bool
        Whether the curve was taken with water (it is then corrected for viscosity).
    speed : float, optional
        Of the shaft [rad/s]; needed for the viscosity correction.
    stages : int
        Of the pump; the correction counts head a stage.
    rated_pressure : float, optional
        Largest gauge pressure that its casing may see [Pa].
    name : str
        For display.
    """

    flows: tuple[float, ...]
    heads: tuple[float, ...]
    efficiencies: tuple[float, ...] | None = None
    npsh_required: tuple[float, ...] | None = None
    for_water: bool = True
    speed: float | None = None
    stages: int = 1
    rated_pressure: float | None = None
    name: str = "centrifugal pump"

    def __post_init__(self) -> None:
        columns = ("flows", "heads", "efficiencies", "npsh_required")
        for what in columns:
            values = getattr(self, what)
            if values is None:
                continue
            object.__setattr__(self, what, tuple(float(value) for value in values))
            require_number(getattr(self, what), what, self.name, low=0.0)
            if len(values) != len(self.flows) or len(values) < 2:
                raise InputError(
                    f"{what} has {len(values)} points and flows has {len(self.flows)}; "
                    "give at least 2, and as many of each",
                    self.name,
                )
        if np.any(np.diff(self.flows) <= 0):
            raise InputError("flows [m3/s] must rise from point to point", self.name)
        if self.efficiencies is not None:
            require_number(1.0 - np.asarray(self.efficiencies), "1 - efficiency", self.name, low=0)
        if isinstance(self.stages, bool) or int(self.stages) != self.stages or self.stages < 1:
            raise InputError(
                f"stages is {self.stages!r}; it must be a whole number above 0", self.name
            )
        require_optional(self.speed, "speed [rad/s]", self.name)
        require_optional(self.rated_pressure, "rated_pressure [Pa]", self.name)

    @property
    def flow_range(self) -> tuple[float, float]:
        """Smallest and largest flow [m3/s] of the curve; nothing is read outside it."""
        return self.flows[0], self.flows[-1]

    def _between(self, flow: ArrayLike, values: tuple[float, ...]) -> FloatArray:
        from scipy.interpolate import PchipInterpolator

        curve = PchipInterpolator(self.flows, values, extrapolate=False)
        return np.asarray(curve(np.asarray(flow, dtype=float)))

    def head(self, flow: ArrayLike) -> FloatArray:
        """Return the head [m] at a flow [m3/s]; NaN outside the points."""
        return self._between(flow, self.heads)

    def pressure(self, flow: ArrayLike, density: ArrayLike) -> FloatArray:
        """Return the pressure rise [Pa] at a flow [m3/s] for a density [kg/m3]."""
        return self.head(flow) * np.asarray(density, dtype=float) * GRAVITY

    def efficiency(self, flow: ArrayLike) -> FloatArray | None:
        """Return the efficiency [-] at a flow [m3/s]; None when no points were given."""
        return None if self.efficiencies is None else self._between(flow, self.efficiencies)

    def required_npsh(self, flow: ArrayLike) -> FloatArray | None:
        """Return the NPSH required [m] at a flow [m3/s]; None when no points were given."""
        return None if self.npsh_required is None else self._between(flow, self.npsh_required)

    @property
    def best_point(self) -> tuple[float, float]:
        """Flow [m3/s] and head [m] at best efficiency, among the points.

        Without efficiencies, that of the largest hydraulic power (a stand-in).
        """
        heads = np.asarray(self.heads)
        merit = heads * np.asarray(self.flows) if self.efficiencies is None else self.efficiencies
        best = int(np.argmax(merit))
        return self.flows[best], self.heads[best]


@dataclass(frozen=True)
class DisplacementPump:
    """A positive-displacement pump: lobe, progressing cavity, gear, piston.

    Parameters
    ----------
    displacement : float
        Volume a revolution [m3].
    speed : float
        Of the shaft [rad/s].
    rated_pressure : float
        Largest pressure rise that it may give [Pa].
    slip_flow : float
        Flow that leaks back [m3/s] at the pressure rise `slip_pressure` with this product.
    slip_pressure : float, optional
        [Pa]; `rated_pressure` when absent.
    slip_exponent : float
        Of the pressure in the slip [-]: 1 for viscous leakage, 0.5 for thin liquids.
    overall_efficiency : float, optional
        Hydraulic power over shaft power [-].
    required_npsh_value : float, optional
        NPSH required at this speed [m].
    name : str
        For display.
    """

    displacement: float
    speed: float
    rated_pressure: float
    slip_flow: float = 0.0
    slip_pressure: float | None = None
    slip_exponent: float = 1.0
    overall_efficiency: float | None = None
    required_npsh_value: float | None = None
    name: str = "positive-displacement pump"

    def __post_init__(self) -> None:
        require_positive(self.displacement, "displacement [m3]", self.name)
        require_positive(self.speed, "speed [rad/s]", self.name)
        require_positive(self.rated_pressure, "rated_pressure [Pa]", self.name)
        require_number(self.slip_flow, "slip_flow [m3/s]", self.name, low=0.0)
        require_optional(self.slip_pressure, "slip_pressure [Pa]", self.name)
        require_positive(self.slip_exponent, "slip_exponent [-]", self.name)
        require_optional(self.required_npsh_value, "required_npsh_value [m]", self.name)
        if self.overall_efficiency is not None:
            require_share(self.overall_efficiency, "overall_efficiency [-]", self.name)
        if self.slip_flow >= self.swept_flow:
            raise InputError(
                f"slip_flow is {self.slip_flow:g} m3/s; it must be less than the "
                f"{self.swept_flow:g} m3/s that the pump sweeps at this speed",
                self.name,
            )

    @property
    def swept_flow(self) -> float:
        """Displacement times speed [m3/s]."""
        return self.displacement * self.speed / (2.0 * np.pi)

    def flow(self, pressure: ArrayLike) -> FloatArray:
        """Return the flow delivered [m3/s] against a pressure rise [Pa], above 0 or not."""
        rise = np.maximum(np.asarray(pressure, dtype=float), 0.0)
        at = self.rated_pressure if self.slip_pressure is None else self.slip_pressure
        return self.swept_flow - self.slip_flow * (rise / at) ** self.slip_exponent


Pump = CentrifugalPump | DisplacementPump
