"""One pipe: laminar flow, transition, turbulence, fittings and the velocity profile."""

from rheo.hydraulics.channels import ChannelFlow, annulus_flow, slot_flow
from rheo.hydraulics.inverse import diameter_for_gradient, velocity_for_gradient
from rheo.hydraulics.pipe import PipeFlow, pipe_flow
from rheo.hydraulics.profile import stress_profile, velocity_profile
from rheo.hydraulics.regime_map import RegimeMap, regime_map
from rheo.hydraulics.registry import criteria, turbulent_methods
from rheo.hydraulics.residence import (
    developing_length,
    fastest_time_ratio,
    fraction_faster_than_mean,
    residence_curve,
)
from rheo.hydraulics.short import critical_velocity, friction_factor
from rheo.hydraulics.slip import SlipFlow, slip_flow

__all__ = [
    "ChannelFlow",
    "PipeFlow",
    "RegimeMap",
    "SlipFlow",
    "annulus_flow",
    "criteria",
    "critical_velocity",
    "developing_length",
    "diameter_for_gradient",
    "fastest_time_ratio",
    "fraction_faster_than_mean",
    "friction_factor",
    "pipe_flow",
    "regime_map",
    "residence_curve",
    "slip_flow",
    "slot_flow",
    "stress_profile",
    "turbulent_methods",
    "velocity_for_gradient",
    "velocity_profile",
]
