"""Velocity and diameter from a pressure gradient."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from rheo.geometry import tube_flow
from rheo.hydraulics.conditions import FloatArray, lay_out, not_negative, positive
from rheo.hydraulics.regimes import Law, velocity_at_wall, wall_at_velocity
from rheo.hydraulics.registry import DEFAULT_CRITERION, criterion, turbulent_method
from rheo.hydraulics.roots import IndexArray, solve_rising
from rheo.models import Model


def velocity_for_gradient(
    model: Model,
    diameter: ArrayLike,
    gradient: ArrayLike,
    density: ArrayLike,
    roughness: ArrayLike = 0.0,
    method: str | None = None,
    transition: str = DEFAULT_CRITERION,
) -> FloatArray:
    """Return the mean velocity at which a pipe takes a pressure gradient: `pipe_flow` backwards.

    Parameters
    ----------
    model : Model
        Flow curve.
    diameter : array_like
        Inside diameter [m].
    gradient : array_like
        Pressure lost to friction a length [Pa/m], 0 or more.
    density, roughness : array_like
        Density [kg/m3], wall roughness [m].
    method, transition : str
        Turbulent method and transition criterion, as for `pipe_flow`.

    Returns
    -------
    array
        Mean velocity [m/s]; 0 where the wall stress does not exceed the yield stress, so that
        nothing flows.

    Raises
    ------
    InputError
        For an impossible value, an unknown method or criterion.
    """
    shape, pipe, (wanted,) = lay_out(
        model, diameter, density, roughness, not_negative(gradient, "gradient", "Pa/m")
    )
    law = Law(criterion(transition, model), turbulent_method(method, model))
    velocity, _ = velocity_at_wall(pipe, 0.25 * pipe.diameter * wanted, law)
    return velocity.reshape(shape)[()]


def diameter_for_gradient(
    model: Model,
    flow: ArrayLike,
    gradient: ArrayLike,
    density: ArrayLike,
    roughness: ArrayLike = 0.0,
    method: str | None = None,
    transition: str = DEFAULT_CRITERION,
) -> FloatArray:
    """Return the inside diameter in which a flow takes a pressure gradient.

    At a given flow the gradient falls as the pipe widens, so that there is one such diameter.

    Parameters
    ----------
    model : Model
        Flow curve.
    flow : array_like
        Volume flow [m3/s], above 0.
    gradient : array_like
        Pressure lost to friction a length [Pa/m], above 0.
    density : array_like
        Density [kg/m3].
    roughness : array_like
        Wall roughness [m].
    method, transition : str
        Turbulent method and transition criterion, as for `pipe_flow`.

    Returns
    -------
    array
        Inside diameter [m], to 1e-13 relative. Only diameters above twice the roughness are
        sought; twice the roughness where even that pipe takes less than the gradient.

    Raises
    ------
    InputError
        For an impossible value, an unknown method or criterion.
    """
    wall = not_negative(roughness, "roughness", "m")
    shape, pipe, (volume, wanted, wall) = lay_out(
        model,
        1.0,
        density,
        0.0,
        positive(flow, "flow", "m3/s"),
        positive(gradient, "gradient", "Pa/m"),
        wall,
    )
    law = Law(criterion(transition, model), turbulent_method(method, model))
    # The pipe bore within the roughness, so that the relative roughness stays below one half.
    least = 2.0 * wall

    def gap(log_bore: FloatArray, index: IndexArray) -> FloatArray:
        part = pipe.take(index).with_bore(least[index] + np.exp(log_bore), wall[index])
        velocity = 4.0 * volume[index] / (np.pi * part.diameter**2)
        rate = tube_flow.wall_rate(part.model, 8.0 * velocity / part.diameter)
        stress = wall_at_velocity(part, velocity, rate, law).stress
        return np.log(0.25 * part.diameter * wanted[index] / stress)

    start = np.full(pipe.size, np.log(0.05))
    root = solve_rising(gap, start, step=1.0, low=-25.0, high=25.0)
    return (least + np.exp(root)).reshape(shape)[()]
