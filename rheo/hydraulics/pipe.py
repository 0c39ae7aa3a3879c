"""Flow in one pipe, whatever the regime: the public entry and its result."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import Caution, InputError
from rheo.geometry import tube_flow
from rheo.hydraulics import regimes
from rheo.hydraulics.conditions import FloatArray, Pipe, lay_out, positive
from rheo.hydraulics.laminar import critical_point
from rheo.hydraulics.registry import DEFAULT_CRITERION, criterion, turbulent_method
from rheo.hydraulics.turbulent_curve import stress_at_velocity
from rheo.models import Model

FORCED_REGIMES = ("laminar", "turbulent")


@dataclass(frozen=True, eq=False)
class PipeFlow:
    """Flow in a straight round pipe; every array has the shape to which the arguments broadcast.

    Attributes
    ----------
    model : Model
        Flow curve.
    diameter, velocity, density, roughness : array
        Inside diameter [m], mean velocity [m/s], density [kg/m3], wall roughness [m].
    method, criterion : str
        Keys of the turbulent method and of the transition criterion.
    regime : str or array of str
        ``laminar``, ``transition`` or ``turbulent``.
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
    regime: Any
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
        return self.model.record.stress(self.laminar_wall_rate, *self.model)

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
        return self.model.yield_stress / self.wall_stress

    @cached_property
    def _pipe(self) -> Pipe:
        _, pipe, _ = lay_out(
            self.model, self.diameter, self.density, self.roughness, np.asarray(self.velocity)
        )
        return pipe

    @cached_property
    def _critical_point(self) -> tuple[FloatArray, FloatArray]:
        return critical_point(self._pipe, criterion(self.criterion, self.model))

    @cached_property
    def critical_velocity(self) -> FloatArray:
        """Mean velocity [m/s] at which laminar flow ends by the criterion."""
        return self._shaped(self._critical_point[0])

    @cached_property
    def critical_reynolds(self) -> FloatArray:
        """Metzner-Reed Reynolds number [-] at the critical velocity."""
        velocity, stress = self._critical_point
        with np.errstate(invalid="ignore"):
            return self._shaped(8.0 * self._pipe.density * velocity**2 / stress)

    @cached_property
    def velocity_ratio(self) -> FloatArray:
        """Largest over mean velocity [-]."""
        return tube_flow.velocity_ratio(self.model, np.asarray(self.laminar_wall_rate))[()]

    @cached_property
    def kinetic_energy_factor(self) -> FloatArray:
        """α = ∫u³dA/(V³A) [-]: 2 for laminar Newtonian flow."""
        return tube_flow.kinetic_energy_factor(self.model, np.asarray(self.laminar_wall_rate))[()]

    @cached_property
    def cautions(self) -> tuple[Caution, ...]:
        """Advice on the result."""
        return ()

    def _shaped(self, flat: FloatArray) -> FloatArray:
        return flat.reshape(np.shape(self.wall_stress))[()]


def pipe_flow(
    model: Model,
    diameter: ArrayLike,
    velocity: ArrayLike,
    density: ArrayLike,
    roughness: ArrayLike = 0.0,
    regime: str | None = None,
    method: str | None = None,
    transition: str = DEFAULT_CRITERION,
) -> PipeFlow:
    """Work out the flow of a product in a straight round pipe; all arguments broadcast.

    Parameters
    ----------
    model : Model
        Flow curve, parameters scalars or arrays.
    diameter : array_like
        Inside diameter [m], above 0.
    velocity : array_like
        Mean velocity [m/s], above 0.
    density : array_like
        Density [kg/m3], above 0.
    roughness : array_like
        Wall roughness [m], 0 or more.
    regime : str, optional
        ``laminar`` or ``turbulent`` forces one solution; otherwise the regime is found.
    method : str, optional
        Turbulent method; by default Colebrook-White for a Newtonian fluid, Dodge-Metzner without a
        yield stress, Wilson-Thomas with one.
    transition : str
        Transition criterion.

    Returns
    -------
    PipeFlow
        Costly results are worked out when they are asked for.

    Raises
    ------
    InputError
        For an impossible value, an unknown regime, method or criterion.
    """
    if regime is not None and regime not in FORCED_REGIMES:
        raise InputError(f"unknown regime '{regime}'; it takes laminar or turbulent", "regime")
    shape, pipe, (speed,) = lay_out(
        model, diameter, density, roughness, positive(velocity, "velocity", "m/s")
    )
    law = regimes.Law(criterion(transition, model), turbulent_method(method, model))
    nominal = 8.0 * speed / pipe.diameter
    laminar_rate = tube_flow.wall_rate(pipe.model, nominal)
    if regime == "laminar":
        stress = pipe.model.record.stress(laminar_rate, *pipe.model)
        wall = regimes.Wall(stress, laminar_rate, np.zeros(pipe.size, dtype=np.intp))
    elif regime == "turbulent":
        stress = stress_at_velocity(pipe, law.method, speed, laminar_rate)
        wall = regimes.Wall(
            stress, pipe.model.rate(stress), np.full(pipe.size, regimes.TURBULENT, dtype=np.intp)
        )
    else:
        wall = regimes.wall_at_velocity(pipe, speed, laminar_rate, law)

    def shaped(flat: Any) -> Any:
        return flat.reshape(shape)[()]

    return PipeFlow(
        model=pipe.model.map(shaped_array(shape)),
        diameter=shaped(pipe.diameter),
        velocity=shaped(speed),
        density=shaped(pipe.density),
        roughness=shaped(pipe.roughness),
        method=law.method.key,
        criterion=law.criterion.key,
        regime=shaped(regimes.REGIMES[wall.regime]),
        wall_stress=shaped(wall.stress),
        wall_rate=shaped(wall.rate),
        laminar_wall_rate=shaped(laminar_rate),
        nominal_rate=shaped(nominal),
    )


def shaped_array(shape: tuple[int, ...]) -> Any:
    """Return a function that gives a flat array a shape."""
    return lambda value: value.reshape(shape)
