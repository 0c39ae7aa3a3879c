"""Ellis fluid: the shear rate is given by the stress."""

from __future__ import annotations

from typing import Any

import numpy as np

from rheo.models.common import ZERO_SHEAR_VISCOSITY, reciprocal_rate_grid
from rheo.models.record import FloatArray, ModelRecord, Parameter, Separable


def rate(
    stress: FloatArray,
    zero_shear_viscosity: FloatArray,
    half_stress: FloatArray,
    stress_index: FloatArray,
) -> FloatArray:
    """Shear rate [1/s]."""
    return stress / zero_shear_viscosity * (1.0 + (stress / half_stress) ** (stress_index - 1.0))


def reduced_stress(reduced_rate: FloatArray, stress_index: FloatArray) -> FloatArray:
    """Solve y (1 + y^(α-1)) = x for y = τ/τ_½ with x = η_0 γ̇/τ_½.

    Newton's method on ln y: the left side is convex and rises with a slope between 1 and α, so
    it converges from the larger of the two asymptotes without a bracket.
    """
    x, power = np.broadcast_arrays(np.asarray(reduced_rate, float), stress_index - 1.0)
    flowing = x > 0
    log_x = np.log(np.where(flowing, x, 1.0))
    at = np.minimum(log_x, log_x / (power + 1.0))
    for _ in range(60):
        exponent = power * at
        gap = at + np.maximum(exponent, 0.0) + np.log1p(np.exp(-np.abs(exponent))) - log_x
        share = 0.5 * (1.0 + np.tanh(0.5 * exponent))
        step = gap / (1.0 + power * share)
        at = at - step
        # Newton's error is squared at each step, so a step of 1e-8 leaves 1e-16.
        if np.all(np.abs(step) <= 1e-8):
            break
    # At rest the product is 0, and NaN stays NaN.
    return np.where(flowing, np.exp(at), 0.0 * x)


def stress(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    half_stress: FloatArray,
    stress_index: FloatArray,
) -> FloatArray:
    """Shear stress [Pa]."""
    return half_stress * reduced_stress(rate * zero_shear_viscosity / half_stress, stress_index)


def _share(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    half_stress: FloatArray,
    stress_index: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Return stress/half_stress and z/(1 + z), z = (stress/half_stress)^(α-1)."""
    y = reduced_stress(rate * zero_shear_viscosity / half_stress, stress_index)
    z = y ** (stress_index - 1.0)
    return y, z / (1.0 + z)


def log_slope(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    half_stress: FloatArray,
    stress_index: FloatArray,
) -> FloatArray:
    """d ln(stress)/d ln(rate) [-]."""
    _, share = _share(rate, zero_shear_viscosity, half_stress, stress_index)
    return 1.0 / (1.0 + (stress_index - 1.0) * share)


def jacobian(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    half_stress: FloatArray,
    stress_index: FloatArray,
) -> tuple[FloatArray, ...]:
    """d stress/d (η_0, τ_½, α), by the implicit function."""
    y, share = _share(rate, zero_shear_viscosity, half_stress, stress_index)
    power = stress_index - 1.0
    slope = 1.0 / (1.0 + power * share)
    total = half_stress * y
    log_y = np.log(np.where(y > 0, y, 1.0))
    return (
        total * slope / zero_shear_viscosity,
        total * slope * power * share / half_stress,
        -total * slope * share * log_y,
    )


def moment_ratio(
    k: int,
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    half_stress: FloatArray,
    stress_index: FloatArray,
) -> FloatArray:
    """Integral of stress^k rate d(stress) over stress^(k+1) rate [-]."""
    _, share = _share(rate, zero_shear_viscosity, half_stress, stress_index)
    return (1.0 - share) / (k + 2) + share / (k + 1 + stress_index)


def _to_parameters(shape: tuple[Any, ...], size: tuple[Any, ...]) -> tuple[Any, ...]:
    # shape is (η_0/τ_½, α), size the half stress.
    return shape[0] * size[0], size[0], shape[1]


RECORD = ModelRecord(
    key="ellis",
    name="Ellis",
    equation="η = η_0/[1 + (τ/τ_½)^(α-1)]",
    parameters=(
        ZERO_SHEAR_VISCOSITY,
        Parameter("half_stress", "τ_½", "Pa", "stress at half the zero-shear viscosity", 1e-9, 1e9),
        Parameter("stress_index", "α", "-", "stress index", 1.0, 20.0),
    ),
    stress=stress,
    rate=rate,
    log_slope=log_slope,
    jacobian=jacobian,
    moment_ratio=moment_ratio,
    source="S. B. Ellis, thesis (1927), in M. Reiner, Deformation, Strain and Flow (1960); "
    "S. Matsuhisa & R. B. Bird, AIChE J. 11 (1965) 588",
    validity="Polymer solutions with a plateau at low rates; no plateau at high rates. With α = 1 "
    "it is Newtonian of viscosity η_0/2.",
    separable=Separable(
        shape=("time_constant", "stress_index"),
        grid=lambda rate: (
            reciprocal_rate_grid(rate, 41),
            1.0 + np.geomspace(0.02, 19.0, 25),
        ),
        basis=lambda rate, time_constant, stress_index: (
            reduced_stress(rate * time_constant, stress_index),
        ),
        to_parameters=_to_parameters,
        logarithmic=(True, True),
    ),
)
