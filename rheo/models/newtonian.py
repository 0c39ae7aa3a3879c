"""Newtonian fluid."""

from __future__ import annotations

import numpy as np

from rheo.models.record import FloatArray, ModelRecord, Parameter, Separable


def stress(rate: FloatArray, viscosity: FloatArray) -> FloatArray:
    """Shear stress [Pa]."""
    return viscosity * rate


def rate(stress: FloatArray, viscosity: FloatArray) -> FloatArray:
    """Shear rate [1/s]."""
    return stress / viscosity


def log_slope(rate: FloatArray, viscosity: FloatArray) -> FloatArray:
    """d ln(stress)/d ln(rate) [-]."""
    return np.ones(np.broadcast_shapes(np.shape(rate), np.shape(viscosity)))


def jacobian(rate: FloatArray, viscosity: FloatArray) -> tuple[FloatArray]:
    """d stress/d viscosity."""
    return (rate * np.ones_like(viscosity),)


def moment_ratio(k: int, rate: FloatArray, viscosity: FloatArray) -> FloatArray:
    """Integral of stress^k rate d(stress) over stress^(k+1) rate [-]."""
    return np.full(np.broadcast_shapes(np.shape(rate), np.shape(viscosity)), 1.0 / (k + 2))


RECORD = ModelRecord(
    key="newtonian",
    name="Newtonian",
    equation="τ = η γ̇",
    parameters=(Parameter("viscosity", "η", "Pa.s", "viscosity", 1e-9, 1e9),),
    stress=stress,
    rate=rate,
    log_slope=log_slope,
    jacobian=jacobian,
    moment_ratio=moment_ratio,
    source="I. Newton, Principia (1687), Book II, section IX",
    validity="Fluids whose viscosity does not depend on the shear rate.",
    separable=Separable(
        shape=(),
        grid=lambda rate: (),
        basis=lambda rate: (rate,),
        to_parameters=lambda shape, size: (size[0],),
    ),
)
