"""Power law of Ostwald and de Waele."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from rheo.models.common import CONSISTENCY, FLOW_INDEX, flow_index_grid
from rheo.models.record import FloatArray, ModelRecord, Separable


def stress(rate: FloatArray, consistency: FloatArray, flow_index: FloatArray) -> FloatArray:
    """Shear stress [Pa]."""
    return consistency * rate**flow_index


def rate(stress: FloatArray, consistency: FloatArray, flow_index: FloatArray) -> FloatArray:
    """Shear rate [1/s]."""
    return (stress / consistency) ** (1.0 / flow_index)


def log_slope(rate: FloatArray, consistency: FloatArray, flow_index: FloatArray) -> FloatArray:
    """d ln(stress)/d ln(rate) [-]."""
    shape = np.broadcast_shapes(np.shape(rate), np.shape(consistency), np.shape(flow_index))
    return np.broadcast_to(flow_index, shape).astype(float)


def jacobian(
    rate: FloatArray, consistency: FloatArray, flow_index: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """d stress/d (consistency, flow_index)."""
    power = rate**flow_index
    return power * np.ones_like(consistency), consistency * power * log_of_rate(rate)


def log_of_rate(rate: FloatArray) -> FloatArray:
    """Natural logarithm of a rate, 0 at rest, where rate**n * ln(rate) vanishes."""
    return np.log(np.where(rate > 0, rate, 1.0))


def moment_ratio(
    k: int, rate: FloatArray, consistency: FloatArray, flow_index: FloatArray
) -> FloatArray:
    """Integral of stress^k rate d(stress) over stress^(k+1) rate [-]."""
    slope = log_slope(rate, consistency, flow_index)
    return slope / ((k + 1) * slope + 1)


# Wider than where a second term must hold the curve up: dense suspensions can jump in stress.
_FLOW_INDEX = replace(FLOW_INDEX, upper=5.0)

RECORD = ModelRecord(
    key="power-law",
    name="power law",
    equation="τ = K γ̇^n",
    parameters=(CONSISTENCY, _FLOW_INDEX),
    stress=stress,
    rate=rate,
    log_slope=log_slope,
    jacobian=jacobian,
    moment_ratio=moment_ratio,
    source="W. Ostwald, Kolloid-Zeitschrift 36 (1925) 99; A. de Waele, Oil Color Chem. Assoc. J. "
    "6 (1923) 33",
    validity="The middle range of shear-thinning or shear-thickening fluids; no plateau and no "
    "yield stress, so it must not be extrapolated to low rates.",
    separable=Separable(
        shape=("flow_index",),
        grid=lambda rate: (flow_index_grid(49, _FLOW_INDEX.upper),),
        basis=lambda rate, flow_index: (rate**flow_index,),
        to_parameters=lambda shape, size: (size[0], shape[0]),
        logarithmic=(True,),
    ),
)
