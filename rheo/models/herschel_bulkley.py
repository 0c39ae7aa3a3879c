"""Herschel-Bulkley fluid."""

from __future__ import annotations

import numpy as np

from rheo.models.common import CONSISTENCY, FLOW_INDEX, YIELD_STRESS, flow_index_grid
from rheo.models.power_law import log_of_rate
from rheo.models.record import FloatArray, ModelRecord, Separable


def stress(
    rate: FloatArray, yield_stress: FloatArray, consistency: FloatArray, flow_index: FloatArray
) -> FloatArray:
    """Shear stress [Pa]."""
    return yield_stress + consistency * rate**flow_index


def rate(
    stress: FloatArray, yield_stress: FloatArray, consistency: FloatArray, flow_index: FloatArray
) -> FloatArray:
    """Shear rate [1/s]."""
    return (np.maximum(stress - yield_stress, 0.0) / consistency) ** (1.0 / flow_index)


def log_slope(
    rate: FloatArray, yield_stress: FloatArray, consistency: FloatArray, flow_index: FloatArray
) -> FloatArray:
    """d ln(stress)/d ln(rate) [-]."""
    flowing = consistency * rate**flow_index
    return flow_index * flowing / (yield_stress + flowing)


def jacobian(
    rate: FloatArray, yield_stress: FloatArray, consistency: FloatArray, flow_index: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """d stress/d (yield_stress, consistency, flow_index)."""
    power = rate**flow_index
    by_index = consistency * power * log_of_rate(rate)
    return np.ones_like(by_index + yield_stress), power, by_index


def moment_ratio(
    k: int,
    rate: FloatArray,
    yield_stress: FloatArray,
    consistency: FloatArray,
    flow_index: FloatArray,
) -> FloatArray:
    """Integral of stress^k rate d(stress) over stress^(k+1) rate [-], k = 0, 1, 2.

    All terms are positive, so nothing cancels however near the stress is to yield.
    """
    flowing = consistency * rate**flow_index
    total = yield_stress + flowing
    sheared = flowing / total
    plug = yield_stress / total
    m = 1.0 / flow_index
    if k == 0:
        return sheared / (m + 1)
    if k == 1:
        return sheared * (sheared / (m + 2) + plug / (m + 1))
    return sheared * (sheared**2 / (m + 3) + 2 * plug * sheared / (m + 2) + plug**2 / (m + 1))


RECORD = ModelRecord(
    key="herschel-bulkley",
    name="Herschel-Bulkley",
    equation="τ = τ_y + K γ̇^n",
    parameters=(YIELD_STRESS, CONSISTENCY, FLOW_INDEX),
    stress=stress,
    rate=rate,
    log_slope=log_slope,
    jacobian=jacobian,
    yield_stress=lambda yield_stress, consistency, flow_index: yield_stress,
    moment_ratio=moment_ratio,
    source="W. H. Herschel & R. Bulkley, Kolloid-Zeitschrift 39 (1926) 291",
    validity="Pastes, sauces and slurries with a yield stress and a curved flow curve above it.",
    separable=Separable(
        shape=("flow_index",),
        grid=lambda rate: (flow_index_grid(),),
        basis=lambda rate, flow_index: (np.ones_like(rate * flow_index), rate**flow_index),
        to_parameters=lambda shape, size: (size[0], size[1], shape[0]),
        logarithmic=(True,),
    ),
)
