"""One pipe: laminar flow, transition, turbulence, fittings and the velocity profile."""

from rheo.hydraulics.pipe import PipeFlow, pipe_flow
from rheo.hydraulics.short import critical_velocity, friction_factor

__all__ = ["PipeFlow", "critical_velocity", "friction_factor", "pipe_flow"]
