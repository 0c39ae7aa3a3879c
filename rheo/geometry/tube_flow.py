"""Laminar flow in a round tube: Rabinowitsch and Mooney's integral, both ways.

A tube viscometer and a transfer line are the same geometry and share this code.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.geometry.channel import solve_channel
from rheo.geometry.curve_integrals import (
    cumulative_from_top,
    integrate_below,
    moment_ratio,
)
from rheo.models import Model

FloatArray = NDArray[np.float64]
_PLUG = 1e-13


def nominal_rate(model: Model, wall_rate: FloatArray) -> FloatArray:
    """Return 8V/D [1/s] of laminar tube flow at a wall shear rate [1/s] above 0.

    8V/D = (4/τw³)∫τ²γ̇dτ (Rabinowitsch 1929, Mooney 1931).
    """
    return 4.0 * wall_rate * moment_ratio(model, wall_rate, 2)


def wall_rate(model: Model, nominal_rate: FloatArray) -> FloatArray:
    """Return the wall shear rate [1/s] at 8V/D [1/s] above 0, to 1e-13 relative."""
    return solve_channel(model, nominal_rate, 2)


def local_flow_index(nominal_rate: FloatArray, wall_rate: FloatArray) -> FloatArray:
    """Return n' = d ln τw/d ln(8V/D) [-] from γ̇w = (8V/D)(3n' + 1)/(4n')."""
    return nominal_rate / (4.0 * wall_rate - 3.0 * nominal_rate)


def velocity_ratio(model: Model, wall_rate: FloatArray) -> FloatArray:
    """Return u_max/V [-]; 2 for a Newtonian fluid, 1 for a plug."""
    flow = moment_ratio(model, wall_rate, 2)
    # Where the stress is level to the last digits the moments are rounding, and the flow a plug.
    sheared = ~(flow <= _PLUG)
    ratio = moment_ratio(model, wall_rate, 0) / np.where(sheared, flow, 1.0)
    return np.where(sheared, np.maximum(ratio, 1.0), 1.0)


def velocity(model: Model, wall_rate: FloatArray, radius_ratio: FloatArray) -> FloatArray:
    """Return u(r)/V [-] at r/R between 0 and 1; all arguments broadcast."""
    top = model.record.stress(wall_rate, *model)
    stress = top * radius_ratio
    rate = model.rate(stress)
    flowing = rate > 0
    safe = np.where(flowing, rate, 1.0)
    below = np.where(flowing, moment_ratio(model, safe, 0) * stress * rate, 0.0)
    whole = moment_ratio(model, wall_rate, 0)
    share = np.maximum(whole - below / (top * wall_rate), 0.0)
    return share / moment_ratio(model, wall_rate, 2)


def kinetic_energy_factor(model: Model, wall_rate: FloatArray, rough: bool = False) -> FloatArray:
    """Return α = ∫u³dA/(V³A) [-]; 2 for a Newtonian fluid, 1 for plug flow.

    By parts α = (3/m³)∫(τ/τw)³ w² (γ̇/γ̇w) d(ln τ), with w = u/(Rγ̇w) and m the moment ratio of
    order 2, so that the plug needs no term of its own. A `rough` one is right to 1e-4.
    """

    def integrand(local: Model, node_rate: FloatArray, level: int) -> FloatArray:
        stress = local.record.stress(node_rate, *local)
        density = stress * node_rate * local.record.log_slope(node_rate, *local)
        return stress**2 * density * cumulative_from_top(density, level) ** 2

    top = model.record.stress(wall_rate, *model)
    flow = moment_ratio(model, wall_rate, 2, rough)
    cubes = integrate_below(model, wall_rate, integrand, rough)
    return 3.0 * cubes / (top**5 * (wall_rate * flow) ** 3)
