"""One pipe: laminar flow, transition, turbulence, fittings and the velocity profile."""

from rheo.hydraulics.inverse import diameter_for_gradient, velocity_for_gradient
from rheo.hydraulics.pipe import PipeFlow, pipe_flow
from rheo.hydraulics.short import critical_velocity, friction_factor

__all__ = [
    "PipeFlow",
    "critical_velocity",
    "diameter_for_gradient",
    "friction_factor",
    "pipe_flow",
    "velocity_for_gradient",
]
