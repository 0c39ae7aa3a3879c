"""Bingham plastic."""

from __future__ import annotations

import numpy as np

from rheo.models import herschel_bulkley
from rheo.models.common import YIELD_STRESS
from rheo.models.record import FloatArray, ModelRecord, Parameter, Separable


def stress(rate: FloatArray, yield_stress: FloatArray, plastic_viscosity: FloatArray) -> FloatArray:
    """Shear stress [Pa]."""
    return yield_stress + plastic_viscosity * rate


def rate(stress: FloatArray, yield_stress: FloatArray, plastic_viscosity: FloatArray) -> FloatArray:
    """Shear rate [1/s]."""
    return np.maximum(stress - yield_stress, 0.0) / plastic_viscosity


def log_slope(
    rate: FloatArray, yield_stress: FloatArray, plastic_viscosity: FloatArray
) -> FloatArray:
    """d ln(stress)/d ln(rate) [-]."""
    flowing = plastic_viscosity * rate
    return flowing / (yield_stress + flowing)


def jacobian(
    rate: FloatArray, yield_stress: FloatArray, plastic_viscosity: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """d stress/d (yield_stress, plastic_viscosity)."""
    shape = np.broadcast_shapes(np.shape(rate), yield_stress.shape, plastic_viscosity.shape)
    return np.ones(shape), np.broadcast_to(rate, shape)


def moment_ratio(
    k: int, rate: FloatArray, yield_stress: FloatArray, plastic_viscosity: FloatArray
) -> FloatArray:
    """Integral of stress^k rate d(stress) over stress^(k+1) rate [-] (Buckingham 1921)."""
    return herschel_bulkley.moment_ratio(
        k, rate, yield_stress, plastic_viscosity, np.ones_like(plastic_viscosity)
    )


RECORD = ModelRecord(
    key="bingham",
    name="Bingham",
    equation="τ = τ_y + η_p γ̇",
    parameters=(
        YIELD_STRESS,
        Parameter("plastic_viscosity", "η_p", "Pa.s", "plastic viscosity", 1e-9, 1e9),
    ),
    stress=stress,
    rate=rate,
    log_slope=log_slope,
    jacobian=jacobian,
    yield_stress=lambda yield_stress, plastic_viscosity: yield_stress,
    moment_ratio=moment_ratio,
    source="E. C. Bingham, Fluidity and Plasticity (1922); "
    "E. Buckingham, Proc. ASTM 21 (1921) 1154",
    validity="Suspensions and slurries whose stress rises in a straight line above yield.",
    separable=Separable(
        shape=(),
        grid=lambda rate: (),
        basis=lambda rate: (np.ones_like(rate), rate),
        to_parameters=lambda shape, size: (size[0], size[1]),
    ),
)
