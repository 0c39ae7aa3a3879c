"""Sisko fluid: a power law that ends in a plateau at high rates."""

from __future__ import annotations

from math import comb

import numpy as np

from rheo.models.common import CONSISTENCY, FLOW_INDEX, INFINITE_SHEAR_VISCOSITY, flow_index_grid
from rheo.models.power_law import log_of_rate
from rheo.models.record import FloatArray, ModelRecord, Separable


def stress(
    rate: FloatArray,
    infinite_shear_viscosity: FloatArray,
    consistency: FloatArray,
    flow_index: FloatArray,
) -> FloatArray:
    """Shear stress [Pa]."""
    return infinite_shear_viscosity * rate + consistency * rate**flow_index


def log_slope(
    rate: FloatArray,
    infinite_shear_viscosity: FloatArray,
    consistency: FloatArray,
    flow_index: FloatArray,
) -> FloatArray:
    """d ln(stress)/d ln(rate) [-]."""
    plateau = infinite_shear_viscosity * rate
    power = consistency * rate**flow_index
    return (plateau + flow_index * power) / (plateau + power)


def jacobian(
    rate: FloatArray,
    infinite_shear_viscosity: FloatArray,
    consistency: FloatArray,
    flow_index: FloatArray,
) -> tuple[FloatArray, ...]:
    """d stress/d (η_∞, K, n)."""
    power = rate**flow_index
    return rate, power, consistency * power * log_of_rate(rate)


def moment_ratio(
    k: int,
    rate: FloatArray,
    infinite_shear_viscosity: FloatArray,
    consistency: FloatArray,
    flow_index: FloatArray,
) -> FloatArray:
    """Integral of stress^k rate d(stress) over stress^(k+1) rate [-]; all terms positive."""
    plateau = infinite_shear_viscosity * rate
    power = consistency * rate**flow_index
    a = plateau / (plateau + power)
    b = power / (plateau + power)
    n = flow_index
    terms = [
        comb(k, j)
        * a ** (k - j)
        * b**j
        * (a / (k - j + j * n + 2) + n * b / (k - j + (j + 1) * n + 1))
        for j in range(k + 1)
    ]
    return np.sum(terms, axis=0)


RECORD = ModelRecord(
    key="sisko",
    name="Sisko",
    equation="τ = η_∞ γ̇ + K γ̇^n",
    parameters=(INFINITE_SHEAR_VISCOSITY, CONSISTENCY, FLOW_INDEX),
    stress=stress,
    log_slope=log_slope,
    jacobian=jacobian,
    moment_ratio=moment_ratio,
    source="A. W. Sisko, Ind. Eng. Chem. 50 (1958) 1789",
    validity="Greases, coatings and slurries from middle to high rates; not for low rates.",
    separable=Separable(
        shape=("flow_index",),
        grid=lambda rate: (flow_index_grid(),),
        basis=lambda rate, flow_index: (rate * np.ones_like(flow_index), rate**flow_index),
        to_parameters=lambda shape, size: (size[0], size[1], shape[0]),
        logarithmic=(True,),
    ),
)
