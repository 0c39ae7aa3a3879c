"""The result of a pipe calculation; what is costly is worked out when it is asked for."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np

from rheo.errors import Caution
from rheo.geometry import tube_flow
from rheo.hydraulics import profile, rivals
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.laminar import critical_point
from rheo.hydraulics.pipe_cautions import pipe_cautions
from rheo.hydraulics.registry import criteria, criterion
from rheo.models import Model


@dataclass(frozen=True, eq=False)
class PipeFlow:
    """Flow in a straight round pipe; every array has the shape to which the arguments broadcast.

    Parameters
    ----------
    model : Model
        Flow curve.
    diameter, velocity, density, roughness : array
        Inside diameter [m], mean velocity [m/s], density [kg/m3], wall roughness [m].
    method, criterion : str
        Keys of the turbulent method and of the transition criterion.
    forced : str or None
        The regime that was asked for; None when it was found.
    regime : str or array of str
        ``laminar``, ``transition`` or ``turbulent``.
    turbulence : array
        Weight of the turbulent value in the transition [-]: 0 laminar, 1 turbulent.
    wall_stress : array
        [Pa].
    wall_rate : array
        Shear rate [1/s] of the flow curve at the wall stress.
    laminar_wall_rate : array
        Wall shear rate [1/s] of laminar flow at the same velocity; `wall_rate` in laminar flow.
    nominal_rate : array
        8V/D [1/s].
    """

    model: Model
    diameter: FloatArray
    velocity: FloatArray
    density: FloatArray
    roughness: FloatArray
    method: str
    criterion: str
    forced: str | None
    regime: Any
    turbulence: FloatArray
    wall_stress: FloatArray
    wall_rate: FloatArray
    laminar_wall_rate: FloatArray
    nominal_rate: FloatArray

    @property
    def friction_factor(self) -> FloatArray:
        """Fanning friction factor [-]."""
        return 2.0 * self.wall_stress / (self.density * self.velocity**2)

    @property
    def pressure_gradient(self) -> FloatArray:
        """Pressure lost to friction a length [Pa/m]."""
        return 4.0 * self.wall_stress / self.diameter

    @cached_property
    def laminar_wall_stress(self) -> FloatArray:
        """Wall stress [Pa] of laminar flow at the same velocity."""
        return self.model.record.stress(self.laminar_wall_rate, *self.model)[()]

    @cached_property
    def local_flow_index(self) -> FloatArray:
        """n' [-], the slope d ln τw/d ln(8V/D) of laminar flow at this 8V/D."""
        return tube_flow.local_flow_index(self.nominal_rate, self.laminar_wall_rate)

    @cached_property
    def local_consistency(self) -> FloatArray:
        """K' [Pa.s^n'] of τw = K'(8V/D)^n' for laminar flow at this 8V/D."""
        return self.laminar_wall_stress / self.nominal_rate**self.local_flow_index

    @property
    def reynolds(self) -> FloatArray:
        """Metzner-Reed Reynolds number [-] with the local n' and K': 8ρV² over laminar τw."""
        return 8.0 * self.density * self.velocity**2 / self.laminar_wall_stress

    @property
    def plug_fraction(self) -> FloatArray:
        """Yield stress over wall stress [-]: in laminar flow the radius of the plug over R."""
        return self.model.yield_stress[()] / self.wall_stress

    @property
    def plug_radius(self) -> FloatArray:
        """Radius [m] of the plug that laminar flow carries; 0 where the flow is not laminar."""
        laminar = np.asarray(self.turbulence) == 0
        return np.where(laminar, 0.5 * self.diameter * self.plug_fraction, 0.0)[()]

    @cached_property
    def critical_velocity(self) -> FloatArray:
        """Mean velocity [m/s] at which laminar flow ends by the criterion."""
        return self._shaped(self._critical_point[0])

    @cached_property
    def critical_reynolds(self) -> FloatArray:
        """Metzner-Reed Reynolds number [-] at the critical velocity; NaN where it has none."""
        velocity, stress = self._critical_point
        with np.errstate(invalid="ignore"):
            return self._shaped(8.0 * self.pipe.density * velocity**2 / stress)

    @cached_property
    def critical_velocities(self) -> Mapping[str, FloatArray]:
        """Critical velocity [m/s] by every criterion made for the flow curve, by its key."""
        return {
            key: self._shaped(critical_point(self.pipe, record)[0])
            for key, record in criteria().items()
            if record.applies(self.model)
        }

    @cached_property
    def velocity_ratio(self) -> FloatArray:
        """Largest over mean velocity [-], u_max/V; turbulent by the logarithmic profile."""
        return self._mixed(
            lambda flow: tube_flow.velocity_ratio(flow.model, flow.rate),
            lambda friction: 1.0 + profile.turbulent_excess(friction),
        )

    @cached_property
    def kinetic_energy_factor(self) -> FloatArray:
        """α = ∫u³dA/(V³A) [-], 2 for laminar Newtonian flow; turbulent: logarithmic profile."""
        return self._mixed(
            lambda flow: tube_flow.kinetic_energy_factor(flow.model, flow.rate),
            profile.turbulent_kinetic_energy_factor,
        )

    @cached_property
    def gradient_by_method(self) -> Mapping[str, FloatArray]:
        """Pressure gradient [Pa/m] by every turbulent method for the flow curve, by its key.

        Each goes through the same transition, so that they agree in laminar flow.
        """
        return {
            key: self._shaped(4.0 * stress / self.pipe.diameter)
            for key, stress in self._rivals.stress.items()
        }

    @cached_property
    def method_counts(self) -> Mapping[str, Any]:
        """Where each turbulent method counts for the spread: in its range, by its key."""
        return {key: self._shaped(counts) for key, counts in self._rivals.counts.items()}

    @cached_property
    def method_spread(self) -> FloatArray:
        """Largest less smallest pressure gradient of the methods that count, over this one [-]."""
        return self._shaped(self._rivals.spread)

    @cached_property
    def cautions(self) -> tuple[Caution, ...]:
        """Advice on the result."""
        return pipe_cautions(self)

    @cached_property
    def pipe(self) -> Pipe:
        """Product and pipe laid out flat, in the order of the arrays."""
        return Pipe(
            self.model.map(np.ravel),
            np.ravel(self.diameter),
            np.ravel(self.density),
            np.ravel(self.roughness),
        )

    @cached_property
    def _critical_point(self) -> tuple[FloatArray, FloatArray]:
        return critical_point(self.pipe, criterion(self.criterion, self.model))

    @cached_property
    def _rivals(self) -> rivals.Rivals:
        return rivals.rival_stresses(self)

    def _mixed(self, laminar: Any, turbulent: Any) -> FloatArray:
        """Return a property of the velocity profile, weighted by the turbulence."""
        share = np.ravel(self.turbulence)
        value = np.zeros(share.size)
        calm, rough = np.flatnonzero(share < 1), np.flatnonzero(share > 0)
        if calm.size:
            rate = np.ravel(self.laminar_wall_rate)[calm]
            flow = profile.LaminarFlow(self.pipe.model.map(lambda item: item[calm]), rate)
            value[calm] += (1.0 - share[calm]) * laminar(flow)
        if rough.size:
            value[rough] += share[rough] * turbulent(np.ravel(self.friction_factor)[rough])
        return self._shaped(value)

    def _shaped(self, flat: Any) -> Any:
        return np.reshape(flat, np.shape(self.wall_stress))[()]
