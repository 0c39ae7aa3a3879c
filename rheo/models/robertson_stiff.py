"""Robertson-Stiff fluid."""

from __future__ import annotations

from functools import cache

import numpy as np

from rheo.models.common import CONSISTENCY, FLOW_INDEX, flow_index_grid
from rheo.models.record import FloatArray, ModelRecord, Parameter, Separable

_HALF = 0.5


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


def moment_ratio(
    k: int,
    rate: FloatArray,
    consistency: FloatArray,
    rate_offset: FloatArray,
    flow_index: FloatArray,
) -> FloatArray:
    """Integral of stress^k rate d(stress) over stress^(k+1) rate [-].

    With x = (γ̇ + γ̇_0) over its value at the wall, r its smallest value and m = (k + 1)n it is
    n/(1 - r) times ∫x^(m-1)(x - r)dx from r to 1. Near r = 1, where the closed form cancels, the
    smooth integrand is summed by Gauss and Legendre's rule, which is exact to the last digit there.
    """
    power = (k + 1) * flow_index * np.ones_like(consistency)
    whole = rate + rate_offset
    sheared, rest = rate / whole, rate_offset / whole
    with np.errstate(divide="ignore"):
        log_rest = np.log(rest)
    closed = -np.expm1((power + 1.0) * log_rest) / (power + 1.0) + (
        rest * np.expm1(power * log_rest) / power
    )
    nodes, weights = _rule()
    part = np.minimum(sheared, _HALF)[..., np.newaxis] * nodes
    summed = ((1.0 - part) ** (power[..., np.newaxis] - 1.0)) @ (weights * (1.0 - nodes))
    return flow_index * np.where(sheared > _HALF, closed / sheared, summed * sheared)


@cache
def _rule() -> tuple[FloatArray, FloatArray]:
    nodes, weights = np.polynomial.legendre.leggauss(12)
    return 0.5 * (1.0 + nodes), 0.5 * weights


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
    moment_ratio=moment_ratio,
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
