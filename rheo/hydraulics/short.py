"""Two quantities on their own: a friction factor and a critical velocity."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from rheo.geometry import tube_flow
from rheo.hydraulics.conditions import FloatArray, lay_out, positive
from rheo.hydraulics.laminar import critical_point
from rheo.hydraulics.pipe import pipe_flow
from rheo.hydraulics.registry import DEFAULT_CRITERION, criterion, turbulent_method
from rheo.hydraulics.turbulent_curve import stress_at_velocity
from rheo.models import Model


def friction_factor(
    model: Model,
    diameter: ArrayLike,
    velocity: ArrayLike,
    density: ArrayLike,
    roughness: ArrayLike = 0.0,
    method: str | None = None,
) -> FloatArray:
    """Return the Fanning friction factor [-] in a round pipe; all arguments broadcast.

    Parameters
    ----------
    model : Model
        Flow curve.
    diameter, velocity, density, roughness : array_like
        Inside diameter [m], mean velocity [m/s], density [kg/m3], wall roughness [m].
    method : str, optional
        With a turbulent method, that method's value as published, whatever the regime; without
        one, the value of `pipe_flow` in the regime found.

    Returns
    -------
    array
        NaN where the named method has no solution (flow index 2 at a low Reynolds number).

    Raises
    ------
    InputError
        For an impossible value, or a method that is unknown or not made for the flow curve.
    """
    if method is None:
        return pipe_flow(model, diameter, velocity, density, roughness).friction_factor
    shape, pipe, (speed,) = lay_out(
        model, diameter, density, roughness, positive(velocity, "velocity", "m/s")
    )
    record = turbulent_method(method, model)
    laminar_rate = tube_flow.wall_rate(pipe.model, 8.0 * speed / pipe.diameter)
    stress = stress_at_velocity(pipe, record, speed, laminar_rate)
    return (2.0 * stress / (pipe.density * speed**2)).reshape(shape)[()]


def critical_velocity(
    model: Model, diameter: ArrayLike, density: ArrayLike, method: str = DEFAULT_CRITERION
) -> FloatArray:
    """Return the mean velocity [m/s] at which laminar flow ends; all arguments broadcast.

    Parameters
    ----------
    model : Model
        Flow curve.
    diameter, density : array_like
        Inside diameter [m], density [kg/m3].
    method : str
        Transition criterion.

    Returns
    -------
    array
        0 or infinite for a fluid of flow index 2, whose stability does not depend on the velocity.

    Raises
    ------
    InputError
        For an impossible value, or a criterion that is unknown or not made for the flow curve.
    """
    shape, pipe, _ = lay_out(model, diameter, density)
    velocity, _ = critical_point(pipe, criterion(method, model))
    return np.asarray(velocity).reshape(shape)[()]
