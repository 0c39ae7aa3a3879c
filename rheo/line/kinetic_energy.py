"""Kinetic energy of the stream in a pipe."""

from __future__ import annotations

import numpy as np

from rheo.geometry import tube_flow
from rheo.hydraulics import PipeFlow
from rheo.hydraulics.profile import turbulent_kinetic_energy_factor
from rheo.hydraulics.yield_power_law import YIELD_POWER_LAWS, as_yield_power_law
from rheo.line.parts import FloatArray
from rheo.models import Model


def kinetic_energy_factor(flow: PipeFlow) -> FloatArray:
    """Return α = ∫u³dA/(V³A) [-] of a pipe flow, in its shape.

    The value of `PipeFlow.kinetic_energy_factor`, with the laminar part in closed form where
    there is one, since a thousand draws of many sizes ask for it.
    """
    share = np.asarray(flow.turbulence, dtype=float)
    turbulent = turbulent_kinetic_energy_factor(np.asarray(flow.friction_factor))
    calm = share < 1
    if not np.any(calm):
        return turbulent
    index = np.flatnonzero(calm.reshape(-1))
    model = flow.model.map(lambda value: np.broadcast_to(value, share.shape).reshape(-1)[index])
    rate = np.broadcast_to(flow.laminar_wall_rate, share.shape).reshape(-1)[index]
    laminar = np.zeros(share.size)
    laminar[index] = laminar_factor(model, rate)
    return (1.0 - share) * laminar.reshape(share.shape) + share * turbulent


def laminar_factor(model: Model, wall_rate: FloatArray) -> FloatArray:
    """Return α [-] of laminar flow at a wall shear rate [1/s] above 0; both broadcast.

    In closed form for the Herschel-Bulkley family, whose profile outside the plug of radius xR is
    u = u_p(1 - s^p), s = (r/R - x)/(1 - x), p = 1 + 1/n; by quadrature for the others, to 1e-4
    (most to 1e-9), nearer than any loss coefficient is known.
    """
    if model.key not in YIELD_POWER_LAWS:
        return tube_flow.kinetic_energy_factor(model, wall_rate, rough=True)
    yield_stress, consistency, index = as_yield_power_law(model)
    flowing = consistency * wall_rate**index
    plug, sheared = yield_stress / (yield_stress + flowing), flowing / (yield_stress + flowing)
    p = 1.0 + 1.0 / index
    cubes = plug**2 + 2.0 * sheared * (
        plug * _cube_integral(p) + 0.5 * sheared * _cube_integral(0.5 * p)
    )
    return cubes * tube_flow.velocity_ratio(model, wall_rate) ** 3


def _cube_integral(p: FloatArray) -> FloatArray:
    """∫(1 - s^p)³ds over 0 to 1; with half of p it is twice the integral of (1 - s^p)³ s ds."""
    return 6.0 * p**3 / ((p + 1.0) * (2.0 * p + 1.0) * (3.0 * p + 1.0))


def kinetic_pressure(flow: PipeFlow | None) -> FloatArray:
    """Return αρV²/2 [Pa] of the stream in a pipe; 0 without one."""
    if flow is None:
        return np.zeros(())
    return kinetic_energy_factor(flow) * 0.5 * flow.density * np.asarray(flow.velocity) ** 2
