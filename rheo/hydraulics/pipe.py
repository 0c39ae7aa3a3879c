"""Flow in one pipe, whatever the regime: the public entry."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError
from rheo.geometry import tube_flow
from rheo.hydraulics import regimes
from rheo.hydraulics.conditions import FloatArray, Pipe, lay_out, positive
from rheo.hydraulics.laminar import rate_at_stress
from rheo.hydraulics.pipe_result import PipeFlow
from rheo.hydraulics.registry import DEFAULT_CRITERION, criterion, turbulent_method
from rheo.hydraulics.turbulent_curve import stress_at_velocity
from rheo.models import Model

FORCED_REGIMES = ("laminar", "turbulent")


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
        Wall roughness [m], 0 or more, less than half the diameter.
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
        raise InputError(f"it is '{regime}'; it takes laminar or turbulent", "regime")
    shape, pipe, (speed,) = lay_out(
        model, diameter, density, roughness, positive(velocity, "velocity", "m/s")
    )
    law = regimes.Law(criterion(transition, model), turbulent_method(method, model))
    nominal = 8.0 * speed / pipe.diameter
    laminar_rate = tube_flow.wall_rate(pipe.model, nominal)
    wall = _wall(pipe, speed, laminar_rate, law, regime)
    return PipeFlow(
        model=pipe.model.map(lambda value: value.reshape(shape)),
        diameter=pipe.diameter.reshape(shape)[()],
        velocity=speed.reshape(shape)[()],
        density=pipe.density.reshape(shape)[()],
        roughness=pipe.roughness.reshape(shape)[()],
        method=law.method.key,
        criterion=law.criterion.key,
        forced=regime,
        regime=regimes.REGIMES[wall.regime].reshape(shape)[()],
        turbulence=wall.turbulence.reshape(shape)[()],
        wall_stress=wall.stress.reshape(shape)[()],
        wall_rate=wall.rate.reshape(shape)[()],
        laminar_wall_rate=laminar_rate.reshape(shape)[()],
        nominal_rate=nominal.reshape(shape)[()],
    )


def _wall(
    pipe: Pipe,
    velocity: FloatArray,
    laminar_rate: FloatArray,
    law: regimes.Law,
    regime: str | None,
) -> regimes.Wall:
    if regime is None:
        return regimes.wall_at_velocity(pipe, velocity, laminar_rate, law)

    def everywhere(code: int) -> tuple[NDArray[np.intp], FloatArray]:
        return np.full(pipe.size, code), np.full(pipe.size, float(code == regimes.TURBULENT))

    if regime == "laminar":
        stress = pipe.model.record.stress(laminar_rate, *pipe.model)
        return regimes.Wall(stress, laminar_rate, *everywhere(regimes.LAMINAR))
    stress = stress_at_velocity(pipe, law.method, velocity, laminar_rate)
    known = np.isfinite(stress)
    rate = np.full(pipe.size, np.nan)
    rate[known] = rate_at_stress(pipe.take(known), stress[known])
    return regimes.Wall(stress, rate, *everywhere(regimes.TURBULENT))
