"""Velocity and stress over the radius."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.geometry import tube_flow
from rheo.hydraulics.conditions import FloatArray
from rheo.models import Model

if TYPE_CHECKING:
    from rheo.hydraulics.pipe_result import PipeFlow

# The turbulent profile is the logarithmic one, u = u_max + 2.5 V* ln(1 - r/R), over the whole
# section (von Kármán's constant 0.4). Its mean is u_max - 3.75 V*, and with a = 2.5 V*/V its
# kinetic-energy factor is 1 + 3.75 a² - 2.25 a³.
_SLOPE = 2.5


@dataclass(frozen=True)
class LaminarFlow:
    """A flow curve and the wall shear rate [1/s] of laminar flow, 1-D."""

    model: Model
    rate: FloatArray


def log_slope(friction_factor: FloatArray) -> FloatArray:
    """Return a = 2.5 V*/V [-], the slope of u/V against ln(1 - r/R), at a friction factor [-]."""
    return _SLOPE * np.sqrt(0.5 * friction_factor)


def turbulent_excess(friction_factor: FloatArray) -> FloatArray:
    """Return u_max/V - 1 [-] of the logarithmic profile at a Fanning friction factor [-]."""
    return 1.5 * log_slope(friction_factor)


def turbulent_kinetic_energy_factor(friction_factor: FloatArray) -> FloatArray:
    """Return α = ∫u³dA/(V³A) [-] of the logarithmic profile at a Fanning friction factor [-]."""
    a = log_slope(friction_factor)
    return 1.0 + 3.75 * a**2 - 2.25 * a**3


def velocity_profile(flow: PipeFlow, radius_ratio: ArrayLike) -> FloatArray:
    """Return the velocity [m/s] at places along the radius.

    Laminar: from the flow curve. Turbulent: the logarithmic profile, with the straight line of the
    wall shear rate next to the wall; a picture, whose mean is within some percent of V. In
    transition the two are weighted as the wall stress is.

    Parameters
    ----------
    flow : PipeFlow
        Result of `pipe_flow`.
    radius_ratio : array_like, 1-D
        r/R [-] between 0 and 1.

    Returns
    -------
    array
        The shape of the flow and a last axis for the places.

    Raises
    ------
    InputError
        If a place lies outside 0 to 1.
    """
    place = _places(radius_ratio)
    share = np.asarray(flow.turbulence)[..., np.newaxis]
    rate = np.asarray(flow.laminar_wall_rate)[..., np.newaxis]
    speed = np.asarray(flow.velocity)[..., np.newaxis]
    laminar = tube_flow.velocity(flow.model.with_new_axis(), rate, place)
    if not np.any(share > 0):
        return speed * laminar
    slope = log_slope(np.asarray(flow.friction_factor)[..., np.newaxis])
    with np.errstate(divide="ignore"):
        logarithmic = 1.0 + slope * (1.5 + np.log1p(-place))
    wall_rate = np.asarray(flow.wall_rate)[..., np.newaxis]
    radius = 0.5 * np.asarray(flow.diameter)[..., np.newaxis]
    wall_distance = 1.0 - place
    straight = wall_rate * radius / speed
    # Nearer to the wall than where the two are parallel the logarithm has no meaning.
    near_wall = wall_distance * straight <= slope
    line = straight * wall_distance
    turbulent = np.where(near_wall, line, np.minimum(logarithmic, line))
    return speed * ((1.0 - share) * laminar + share * turbulent)


def stress_profile(flow: PipeFlow, radius_ratio: ArrayLike) -> FloatArray:
    """Return the shear stress [Pa] along the radius, wall stress times r/R in every regime.

    Parameters
    ----------
    flow : PipeFlow
        Result of `pipe_flow`.
    radius_ratio : array_like, 1-D
        r/R [-] between 0 and 1.

    Returns
    -------
    array
        The shape of the flow and a last axis for the places.

    Raises
    ------
    InputError
        If a place lies outside 0 to 1.
    """
    return np.asarray(flow.wall_stress)[..., np.newaxis] * _places(radius_ratio)


def _places(radius_ratio: ArrayLike) -> FloatArray:
    place = np.atleast_1d(np.asarray(radius_ratio, dtype=float))
    if place.ndim != 1 or not np.all((place >= 0) & (place <= 1)):
        raise InputError("it must be a list of numbers between 0 and 1", "radius_ratio")
    return place
