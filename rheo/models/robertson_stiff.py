"""Robertson-Stiff fluid."""

from __future__ import annotations

import numpy as np

from rheo.models.common import CONSISTENCY, FLOW_INDEX, flow_index_grid
from rheo.models.record import FloatArray, ModelRecord, Parameter, Separable


def stress(
    rate: FloatArray, consistency: FloatArray, rate_offset: FloatArray, flow_index: FloatArray
) -> FloatArray:
    """Shear stress [Pa]."""
    return consistency * (rate + rate_offset) ** flow_index


def rate(
    stress: FloatArray, consistency: FloatArray, rate_offset: FloatArray, flow_index: FloatArray
) -> FloatArray:
    """Shear rate [1/s]."""
    return np.maximum((stress / consistency) ** (1.0 / flow_index) - rate_offset, 0.0)


def log_slope(
    rate: FloatArray, consistency: FloatArray, rate_offset: FloatArray, flow_index: FloatArray
) -> FloatArray:
    """d ln(stress)/d ln(rate) [-]."""
    return flow_index * rate / (rate + rate_offset) * np.ones_like(consistency)


def jacobian(
    rate: FloatArray, consistency: FloatArray, rate_offset: FloatArray, flow_index: FloatArray
) -> tuple[FloatArray, ...]:
    """d stress/d (K, γ̇_0, n)."""
    shifted = rate + rate_offset
    power = shifted**flow_index
    safe = np.where(shifted > 0, shifted, 1.0)
    return (
        power * np.ones_like(consistency),
        consistency * flow_index * power / safe,
        consistency * power * np.log(safe),
    )


RECORD = ModelRecord(
    key="robertson-stiff",
    name="Robertson-Stiff",
    equation="τ = K (γ̇ + γ̇_0)^n",
    parameters=(
        CONSISTENCY,
        Parameter("rate_offset", "γ̇_0", "1/s", "rate offset", 0.0, 1e7),
        FLOW_INDEX,
    ),
    stress=stress,
    rate=rate,
    log_slope=log_slope,
    jacobian=jacobian,
    yield_stress=lambda consistency, rate_offset, flow_index: consistency * rate_offset**flow_index,
    source="R. E. Robertson & H. A. Stiff, SPE J. 16 (1976) 31",
    validity="Drilling fluids and cement slurries; its yield stress is K γ̇_0^n.",
    separable=Separable(
        shape=("rate_offset", "flow_index"),
        grid=lambda rate: (
            np.concatenate(
                [[0.0], np.geomspace(rate[rate > 0].min() * 1e-4, rate.max() * 1e3, 40)]
            ),
            flow_index_grid(),
        ),
        basis=lambda rate, rate_offset, flow_index: ((rate + rate_offset) ** flow_index,),
        to_parameters=lambda shape, size: (size[0], shape[0], shape[1]),
        logarithmic=(False, True),
    ),
)
