"""Laminar flow in a pipe on whose wall the product slips."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from rheo.geometry import tube
from rheo.hydraulics.conditions import FloatArray, lay_out, not_negative, positive
from rheo.models import Model


@dataclass(frozen=True, eq=False)
class SlipFlow:
    """Laminar flow with wall slip; every array has the shape to which the arguments broadcast.

    Parameters
    ----------
    wall_stress, wall_rate : array
        [Pa] and [1/s]; the rate is 0 where the product slides as a block.
    slip_velocity : array
        Velocity at the wall [m/s].
    pressure_gradient : array
        [Pa/m].
    slip_share : array
        Share of the flow that the slip carries [-].
    """

    wall_stress: FloatArray
    wall_rate: FloatArray
    slip_velocity: FloatArray
    pressure_gradient: FloatArray
    slip_share: FloatArray


def slip_flow(
    model: Model, diameter: ArrayLike, velocity: ArrayLike, slip_coefficient: ArrayLike
) -> SlipFlow:
    """Return laminar flow with a slip velocity of β τw; all arguments broadcast.

    V = βτw + (V of the flow curve at τw), as in M. Mooney, J. Rheol. 2 (1931) 210. Do not lower a
    design pressure by slip that was seen in another tube: it depends on the wall, and can cease.

    Parameters
    ----------
    model : Model
        Flow curve.
    diameter, velocity : array_like
        Inside diameter [m], mean velocity [m/s].
    slip_coefficient : array_like
        β [m/(s Pa)], 0 or more, as found from tubes of several diameters.

    Returns
    -------
    SlipFlow
        Laminar whatever the Reynolds number.

    Raises
    ------
    InputError
        For an impossible value.
    """
    shape, pipe, (speed, slip) = lay_out(
        model,
        diameter,
        1.0,
        0.0,
        positive(velocity, "velocity", "m/s"),
        not_negative(slip_coefficient, "slip_coefficient", "m/(s Pa)"),
    )
    volume = 0.25 * np.pi * pipe.diameter**2 * speed
    nothing = np.zeros(pipe.size)
    rate, stress = tube.sheared_at(pipe.model, volume, pipe.diameter, nothing, nothing, slip)
    sliding = slip * stress

    def shaped(flat: FloatArray) -> FloatArray:
        return np.broadcast_to(flat, speed.shape).reshape(shape)[()]

    return SlipFlow(
        shaped(stress),
        shaped(rate),
        shaped(sliding),
        shaped(4.0 * stress / pipe.diameter),
        shaped(sliding / speed),
    )
